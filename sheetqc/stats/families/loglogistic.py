"""The loglogistic family: log x is logistic."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array, Parameters
from sheetqc.stats.families.location_scale import LogLocationScale
from sheetqc.stats.families.logistic import fit_logistic
from sheetqc.stats.families.standard import LOGISTIC
from sheetqc.stats.families.worksheet import Worksheet, above

_Z = "(LN({x})-{log_location})/{log_scale}"


class Loglogistic(LogLocationScale):
    """log x is logistic with location log_location and scale log_scale."""

    name = "loglogistic"
    title = "loglogistic"
    use = "Proportional quantities with a longer tail than lognormal: leak rates, repair times, flow."
    parameter_names = ("log_location", "log_scale")
    positive = ("log_scale",)
    standard = LOGISTIC

    @property
    def worksheet(self) -> Worksheet:
        ratio = f"EXP(-ABS({_Z}))"
        return Worksheet(
            density=above("0", f"{ratio}/({{x}}*{{log_scale}}*(1+{ratio})^2)", "0"),
            cdf=above("0", f"IF({_Z}>0,1,{ratio})/(1+{ratio})", "0"),
            survival=above("0", f"IF({_Z}>0,{ratio},1)/(1+{ratio})", "1"),
            quantile="EXP({log_location}+{log_scale}*LN(({p})/(1-({p}))))",
            upper_quantile="EXP({log_location}-{log_scale}*LN(({q})/(1-({q}))))",
        )

    def _z(self, x: Array, p: Parameters) -> Array:
        return (np.log(x) - p[0]) / p[1]

    def _x(self, z: Array, p: Parameters) -> Array:
        return np.exp(p[0] + p[1] * z)

    def _log_slope(self, p: Parameters) -> Array:
        return -np.log(p[1])

    def _fit(self, x: Array) -> Array:
        return fit_logistic(np.log(x))
