"""The Weibull family with its origin at 0."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array, Parameters
from sheetqc.stats.families.extreme import fit_smallest
from sheetqc.stats.families.location_scale import LogLocationScale
from sheetqc.stats.families.standard import SMALLEST
from sheetqc.stats.families.worksheet import Worksheet, above, minus_log_one_minus, one_minus_exp

# (x / scale)^shape by way of logarithms, held below overflow
_T = "EXP(MIN(700,{shape}*LN({x}/{scale})))"


class Weibull(LogLocationScale):
    """S(x) = exp(-(x / scale)^shape), x above 0."""

    name = "weibull"
    title = "Weibull"
    use = "Strength and life: burst pressure, breaking load, wear, also form deviations bounded by 0."
    parameter_names = ("shape", "scale")
    positive = ("shape", "scale")
    standard = SMALLEST

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=above("0", f"{{shape}}/{{x}}*EXP(MIN(700,{{shape}}*LN({{x}}/{{scale}}))-{_T})", "0"),
            cdf=above("0", one_minus_exp(_T), "0"),
            survival=above("0", f"EXP(-{_T})", "1"),
            quantile="{scale}*(" + minus_log_one_minus("{p}") + ")^(1/{shape})",
            upper_quantile="{scale}*(-LN({q}))^(1/{shape})",
        )

    def _z(self, x: Array, p: Parameters) -> Array:
        return p[0] * np.log(x / p[1])

    def _x(self, z: Array, p: Parameters) -> Array:
        return p[1] * np.exp(z / p[0])

    def _log_slope(self, p: Parameters) -> Array:
        return np.log(p[0])

    def _fit(self, x: Array) -> Array:
        location, scale = fit_smallest(np.log(x))
        return np.stack([1 / scale, np.exp(location)], axis=-1)
