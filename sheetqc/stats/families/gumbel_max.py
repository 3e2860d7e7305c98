"""The family of largest values (Gumbel)."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.extreme import fit_smallest
from sheetqc.stats.families.location_scale import LocationScale
from sheetqc.stats.families.standard import LARGEST
from sheetqc.stats.families.worksheet import Worksheet, minus_log_one_minus, one_minus_exp

_Z = "({x}-{location})/{scale}"
# beyond 700 the exponential would overflow, and the distribution function is 0 anyway
_T = "EXP(MIN(700,({location}-{x})/{scale}))"


class GumbelMax(LocationScale):
    """F(x) = exp(-exp(-z)), z = (x - location) / scale."""

    name = "gumbel_max"
    title = "largest-value (Gumbel)"
    use = "The largest of many: highest peak of a profile, deepest pit, greatest load of a cycle."
    parameter_names = ("location", "scale")
    positive = ("scale",)
    standard = LARGEST

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=f"EXP(-({_Z})-{_T})/{{scale}}",
            cdf=f"EXP(-{_T})",
            survival=one_minus_exp(_T),
            quantile="{location}-{scale}*LN(-LN({p}))",
            upper_quantile="{location}-{scale}*LN(" + minus_log_one_minus("{q}") + ")",
        )

    def _fit(self, x: Array) -> Array:
        location, scale = fit_smallest(-x)
        return np.stack([-location, scale], axis=-1)
