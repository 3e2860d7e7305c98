"""The unbounded Johnson family."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters, everywhere
from sheetqc.stats.families.johnson_fit import fit_su
from sheetqc.stats.families.standard import NORMAL
from sheetqc.stats.families.worksheet import Worksheet


class JohnsonSU(Family):
    """gamma + delta asinh((x - xi) / lambda) is standard normal."""

    name = "johnson_su"
    title = "Johnson, unbounded"
    use = "Two-sided dimensions with long tails, skewed or not, when no plainer shape will do."
    parameter_names = ("gamma", "delta", "xi", "lambda")
    positive = ("delta", "lambda")

    @property
    def worksheet(self) -> Worksheet:
        d = "(({x}-{xi})/{lambda})"
        # the inverse hyperbolic sine of a size: of a negative number it loses digits in some spreadsheets
        z = f"({{gamma}}+{{delta}}*SIGN({d})*ASINH(ABS({d})))"
        return Worksheet(
            density=f"{{delta}}/({{lambda}}*SQRT(2*PI()*(1+{d}^2)))*EXP(-({z}^2)/2)",
            cdf=f"NORM.S.DIST({z},TRUE)",
            survival=f"NORM.S.DIST(-{z},TRUE)",
            quantile="{xi}+{lambda}*SINH((NORM.S.INV({p})-{gamma})/{delta})",
            upper_quantile="{xi}+{lambda}*SINH((-NORM.S.INV({q})-{gamma})/{delta})",
        )

    def _z(self, x: Array, p: Parameters) -> Array:
        return np.asarray(p[0] + p[1] * np.arcsinh((x - p[2]) / p[3]))

    def _log_density(self, x: Array, p: Parameters) -> Array:
        d = (x - p[2]) / p[3]
        return NORMAL.log_density(self._z(x, p)) + np.log(p[1] / p[3]) - np.log(np.hypot(1, d))

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return NORMAL.cdf(self._z(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return NORMAL.survival(self._z(x, p))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return NORMAL.log_cdf(self._z(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return NORMAL.log_survival(self._z(x, p))

    def _x(self, z: Array, p: Parameters) -> Array:
        return np.asarray(p[2] + p[3] * np.sinh((z - p[0]) / p[1]))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._x(NORMAL.quantile(probability), p)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._x(NORMAL.upper_quantile(q), p)

    def _fit(self, x: Array) -> Array:
        return fit_su(x)

    def refusal(self, x: ArrayLike) -> str:
        return "needs at least 5 values" if np.shape(x)[-1] < 5 else ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return everywhere(theta)
