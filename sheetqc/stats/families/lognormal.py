"""The lognormal family: log x is normal."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Parameters
from sheetqc.stats.families.location_scale import LogLocationScale
from sheetqc.stats.families.moments import mean_and_sd
from sheetqc.stats.families.standard import NORMAL
from sheetqc.stats.families.worksheet import Worksheet, above

_Z = "(LN({x})-{meanlog})/{sdlog}"


class Lognormal(LogLocationScale):
    """log x is normal with mean meanlog and standard deviation sdlog (divisor n when fitted)."""

    name = "lognormal"
    title = "lognormal"
    use = "Quantities that grow in proportion: coating thickness, leak rate, particle size, times to failure."
    parameter_names = ("meanlog", "sdlog")
    positive = ("sdlog",)
    standard = NORMAL

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=above("0", f"EXP(-(({_Z})^2)/2)/({{x}}*{{sdlog}}*SQRT(2*PI()))", "0"),
            cdf=above("0", f"NORM.S.DIST({_Z},TRUE)", "0"),
            survival=above("0", "NORM.S.DIST(({meanlog}-LN({x}))/{sdlog},TRUE)", "1"),
            quantile="EXP({meanlog}+{sdlog}*NORM.S.INV({p}))",
            upper_quantile="EXP({meanlog}-{sdlog}*NORM.S.INV({q}))",
        )

    def _z(self, x: Array, p: Parameters) -> Array:
        return (np.log(x) - p[0]) / p[1]

    def _x(self, z: Array, p: Parameters) -> Array:
        return np.exp(p[0] + p[1] * z)

    def _log_slope(self, p: Parameters) -> Array:
        return -np.log(p[1])

    def normal_scale(self, x: ArrayLike) -> Array:
        return np.asarray(np.log(np.asarray(x, dtype=float)))

    def _fit(self, x: Array) -> Array:
        return np.stack(mean_and_sd(np.log(x)), axis=-1)
