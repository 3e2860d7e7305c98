"""The exponential family: times between events that know no age."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.location_scale import needs_not_below_zero
from sheetqc.stats.families.logs import log_one_minus_exp
from sheetqc.stats.families.worksheet import Worksheet, minus_log_one_minus, one_minus_exp

_T = "({x}/{mean})"


class Exponential(Family):
    """S(x) = exp(-x / mean), x from 0 on."""

    name = "exponential"
    title = "exponential"
    use = "Times or lengths between random events: stoppages, flaws along a strip, failures of complex units."
    parameter_names = ("mean",)
    positive = ("mean",)

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=f"IF({{x}}<0,0,EXP(-{_T})/{{mean}})",
            cdf=f"IF({{x}}<0,0,{one_minus_exp(_T)})",
            survival=f"IF({{x}}<0,1,EXP(-{_T}))",
            quantile="{mean}*(" + minus_log_one_minus("{p}") + ")",
            upper_quantile="-{mean}*LN({q})",
        )

    def _log_density(self, x: Array, p: Parameters) -> Array:
        return np.where(x >= 0, -x / p[0] - np.log(p[0]), -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.asarray(-np.expm1(-np.maximum(x, 0.0) / p[0]))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.exp(-np.maximum(x, 0.0) / p[0])

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return log_one_minus_exp(np.maximum(x, 0.0) / p[0])

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return -np.maximum(x, 0.0) / p[0]

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return -p[0] * np.log1p(-probability)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return -p[0] * np.log(q)

    def _fit(self, x: Array) -> Array:
        return np.asarray(x.mean(axis=-1, keepdims=True))

    def refusal(self, x: ArrayLike) -> str:
        return needs_not_below_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)
