"""The Weibull family with a threshold."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.thresholded import Thresholded
from sheetqc.stats.families.weibull import Weibull


class WeibullThreshold(Thresholded):
    """S(x) = exp(-((x - threshold) / scale)^shape), x above the threshold."""

    name = "weibull_threshold"
    title = "Weibull with threshold"
    use = "Strength or life with a guaranteed minimum: proof-tested parts, breaking loads of screened lots."
    parameter_names = ("shape", "scale", "threshold")
    positive = ("shape", "scale")
    parent = Weibull()

    def _profile(self, v: Array, y: Array, inner: Array) -> tuple[Array, Array, Array]:
        n = v.shape[-1]
        log_shape = inner[:, 0]
        k = np.exp(log_shape)
        # v^k relative to its largest value, so that nothing overflows
        top = y.max(axis=-1)
        weight = np.exp(k[:, None] * (y - top[:, None]))
        total = weight.sum(axis=-1)
        log_mean = k * top + np.log(total / n)
        log_sum = y.sum(axis=-1)
        value = n * log_shape - n * log_mean + (k - 1) * log_sum - n
        inverse = 1 / v
        by_shape = n / k - n * np.einsum("ij,ij->i", weight, y) / total + log_sum
        by_threshold = n * k * np.einsum("ij,ij->i", weight, inverse) / total - (k - 1) * inverse.sum(axis=-1)
        return value, (k * by_shape)[:, None], by_threshold

    def _inner_start(self, y: Array) -> Array:
        return np.asarray(np.log(1.2825 / y.std(axis=-1, keepdims=True)))

    def _parameters(self, v: Array, inner: Array) -> Array:
        k = np.exp(inner)
        top = v.max(axis=-1, keepdims=True)
        scale = top * np.mean((v / top) ** k, axis=-1, keepdims=True) ** (1 / k)
        return np.concatenate([k, scale], axis=-1)

    def _restored(self, parameters: Array, spread: Array) -> Array:
        return np.concatenate([parameters[:, :1], parameters[:, 1:] * spread], axis=-1)
