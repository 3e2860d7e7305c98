"""The lognormal family with a threshold."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.lognormal import Lognormal
from sheetqc.stats.families.thresholded import Thresholded


class LognormalThreshold(Thresholded):
    """log(x - threshold) is normal with mean meanlog and standard deviation sdlog."""

    name = "lognormal_threshold"
    title = "lognormal with threshold"
    use = "Skewed dimensions that start at a value other than 0: bores against a stop, thickness on a base coat."
    parameter_names = ("meanlog", "sdlog", "threshold")
    positive = ("sdlog",)
    parent = Lognormal()

    def _profile(self, v: Array, y: Array, inner: Array) -> tuple[Array, Array, Array]:
        n = v.shape[-1]
        centred = y - y.mean(axis=-1, keepdims=True)
        variance = np.mean(centred * centred, axis=-1)
        value = -0.5 * n * np.log(variance) - y.sum(axis=-1)
        inverse = 1 / v
        by_threshold = np.einsum("ij,ij->i", centred, inverse) / variance + inverse.sum(axis=-1)
        return value, np.empty((len(v), 0)), by_threshold

    def _inner_start(self, y: Array) -> Array:
        return np.empty((len(y), 0))

    def _parameters(self, v: Array, inner: Array) -> Array:
        return self.parent._fit(v)

    def _restored(self, parameters: Array, spread: Array) -> Array:
        return np.concatenate([parameters[:, :1] + np.log(spread), parameters[:, 1:]], axis=-1)
