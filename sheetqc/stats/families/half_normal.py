"""The half-normal family: the size of a normal deviation about 0."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.location_scale import needs_not_below_zero
from sheetqc.stats.families.logs import log_one_minus_exp
from sheetqc.stats.families.worksheet import Worksheet

_LOG_HALF_PI = float(np.log(np.pi / 2))


class HalfNormal(Family):
    """The size |y| of a normal y with mean 0 and standard deviation sigma."""

    name = "half_normal"
    title = "half-normal"
    use = "Sizes of deviations about a true zero: straightness, tilt, imbalance, differences of two equal gauges."
    parameter_names = ("sigma",)
    positive = ("sigma",)

    @property
    def worksheet(self) -> Worksheet:
        h = "({x}/{sigma})"
        series = f"2*{h}/SQRT(2*PI())*(1-{h}^2*(1/6-{h}^2*(1/40-{h}^2/336)))"
        p = "({p})"
        near = f"{p}*SQRT(PI()/2)*(1+PI()*{p}^2/12+7*PI()^2*{p}^4/480)"
        return Worksheet(
            density=f"IF({{x}}<0,0,2*EXP(-({h}^2)/2)/({{sigma}}*SQRT(2*PI())))",
            cdf=f"IF({{x}}<=0,0,IF({h}<0.05,{series},1-2*NORM.S.DIST(-{h},TRUE)))",
            survival=f"IF({{x}}<=0,1,2*NORM.S.DIST(-{h},TRUE))",
            quantile=f"{{sigma}}*IF({p}<0.005,{near},NORM.S.INV((1+{p})/2))",
            upper_quantile="-{sigma}*NORM.S.INV({q}/2)",
        )

    def _log_density(self, x: Array, p: Parameters) -> Array:
        z = x / p[0]
        return np.where(x >= 0, -0.5 * (z * z + _LOG_HALF_PI) - np.log(p[0]), -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.asarray(special.erf(np.maximum(x, 0.0) / (p[0] * np.sqrt(2))))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.asarray(2 * special.ndtr(-np.maximum(x, 0.0) / p[0]))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return np.where(x < 0.5 * p[0], np.log(self._cdf(x, p)), log_one_minus_exp(-self._log_survival(x, p)))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return np.asarray(np.log(2) + special.log_ndtr(-np.maximum(x, 0.0) / p[0]))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return np.asarray(p[0] * np.sqrt(2) * special.erfinv(probability))

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        near_zero = np.sqrt(2) * special.erfinv(1 - q)
        return np.asarray(p[0] * np.where(q > 0.5, near_zero, -special.ndtri(0.5 * q)))

    def _fit(self, x: Array) -> Array:
        return np.asarray(np.sqrt(np.mean(x * x, axis=-1, keepdims=True)))

    def refusal(self, x: ArrayLike) -> str:
        return needs_not_below_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)
