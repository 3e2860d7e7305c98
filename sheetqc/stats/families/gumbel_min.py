"""The family of smallest values (Gumbel, mirrored)."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.extreme import fit_smallest
from sheetqc.stats.families.location_scale import LocationScale
from sheetqc.stats.families.standard import SMALLEST
from sheetqc.stats.families.worksheet import Worksheet, minus_log_one_minus, one_minus_exp

_Z = "({x}-{location})/{scale}"
_T = f"EXP(MIN(700,{_Z}))"


class GumbelMin(LocationScale):
    """S(x) = exp(-exp(z)), z = (x - location) / scale."""

    name = "gumbel_min"
    title = "smallest-value (Gumbel)"
    use = "The weakest of many: breaking load of a chain, smallest wall thickness, first failure."
    parameter_names = ("location", "scale")
    positive = ("scale",)
    standard = SMALLEST

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=f"EXP({_Z}-{_T})/{{scale}}",
            cdf=one_minus_exp(_T),
            survival=f"EXP(-{_T})",
            quantile="{location}+{scale}*LN(" + minus_log_one_minus("{p}") + ")",
            upper_quantile="{location}+{scale}*LN(-LN({q}))",
        )

    def _fit(self, x: Array) -> Array:
        return np.stack(fit_smallest(x), axis=-1)
