"""The Rayleigh family: distance from the centre when both axes scatter alike."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.location_scale import needs_above_zero
from sheetqc.stats.families.logs import log_one_minus_exp
from sheetqc.stats.families.worksheet import Worksheet, above, minus_log_one_minus, one_minus_exp

_T = "(({x}/{sigma})^2/2)"


class Rayleigh(Family):
    """S(x) = exp(-x^2 / (2 sigma^2)), x above 0."""

    name = "rayleigh"
    title = "Rayleigh"
    use = "Position and concentricity: distance from the true place when both axes scatter alike about it."
    parameter_names = ("sigma",)
    positive = ("sigma",)

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=above("0", f"{{x}}/{{sigma}}^2*EXP(-{_T})", "0"),
            cdf=above("0", one_minus_exp(_T), "0"),
            survival=above("0", f"EXP(-{_T})", "1"),
            quantile="{sigma}*SQRT(2*" + minus_log_one_minus("{p}") + ")",
            upper_quantile="{sigma}*SQRT(-2*LN({q}))",
        )

    def _half_square(self, x: Array, p: Parameters) -> Array:
        z = np.maximum(x, 0.0) / p[0]
        return np.asarray(0.5 * z * z)

    def _log_density(self, x: Array, p: Parameters) -> Array:
        inside = np.log(np.maximum(x, 0.0)) - 2 * np.log(p[0]) - self._half_square(x, p)
        return np.where(x > 0, inside, -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.asarray(-np.expm1(-self._half_square(x, p)))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.exp(-self._half_square(x, p))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return log_one_minus_exp(self._half_square(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return -self._half_square(x, p)

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return np.asarray(p[0] * np.sqrt(-2 * np.log1p(-probability)))

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return np.asarray(p[0] * np.sqrt(-2 * np.log(q)))

    def _fit(self, x: Array) -> Array:
        return np.asarray(np.sqrt(0.5 * np.mean(x * x, axis=-1, keepdims=True)))

    def refusal(self, x: ArrayLike) -> str:
        return needs_above_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)
