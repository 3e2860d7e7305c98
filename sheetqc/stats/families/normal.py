"""The normal family: mean and standard deviation."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.location_scale import LocationScale
from sheetqc.stats.families.moments import mean_and_sd
from sheetqc.stats.families.standard import NORMAL
from sheetqc.stats.families.worksheet import Worksheet

_Z = "({x}-{mean})/{sd}"


class Normal(LocationScale):
    """f(x) = exp(-z^2/2) / (sd sqrt(2 pi)), z = (x - mean) / sd; the fitted sd has divisor n (maximum likelihood)."""

    name = "normal"
    title = "normal"
    use = "Lengths, diameters and other two-sided dimensions that many small influences move up and down alike."
    parameter_names = ("mean", "sd")
    positive = ("sd",)
    standard = NORMAL

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=f"EXP(-(({_Z})^2)/2)/({{sd}}*SQRT(2*PI()))",
            cdf=f"NORM.S.DIST({_Z},TRUE)",
            survival="NORM.S.DIST(({mean}-{x})/{sd},TRUE)",
            quantile="{mean}+{sd}*NORM.S.INV({p})",
            upper_quantile="{mean}-{sd}*NORM.S.INV({q})",
        )

    def normal_scale(self, x: ArrayLike) -> Array:
        return np.asarray(x, dtype=float)

    def _fit(self, x: Array) -> Array:
        return np.stack(mean_and_sd(x), axis=-1)
