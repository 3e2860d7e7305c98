"""The gamma family with a threshold."""

from __future__ import annotations

import numpy as np
from scipy import special

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.digamma import log_minus_digamma
from sheetqc.stats.families.gamma import Gamma
from sheetqc.stats.families.thresholded import Thresholded


class GammaThreshold(Thresholded):
    """x - threshold is gamma with the given shape and scale."""

    name = "gamma_threshold"
    title = "gamma with threshold"
    use = "Skewed sizes that start at a value other than 0: process times with a fixed part, filled weights."
    parameter_names = ("shape", "scale", "threshold")
    positive = ("shape", "scale")
    parent = Gamma()

    def _profile(self, v: Array, y: Array, inner: Array) -> tuple[Array, Array, Array]:
        n = v.shape[-1]
        a = np.exp(inner[:, 0])
        mean = v.mean(axis=-1)
        d = v / mean[:, None] - 1
        # log mean - mean log, as a mean of small terms
        gap = np.mean(d - np.log1p(d), axis=-1)
        value = n * (_log_peak(a) - a * gap) - y.sum(axis=-1)
        by_shape = n * (log_minus_digamma(a) - gap)
        by_threshold = n * a / mean - (a - 1) * np.sum(1 / v, axis=-1)
        return value, (a * by_shape)[:, None], by_threshold

    def _inner_start(self, y: Array) -> Array:
        return np.asarray(-2 * np.log(y.std(axis=-1, keepdims=True)))

    def _parameters(self, v: Array, inner: Array) -> Array:
        a = np.exp(inner)
        return np.concatenate([a, v.mean(axis=-1, keepdims=True) / a], axis=-1)

    def _restored(self, parameters: Array, spread: Array) -> Array:
        return np.concatenate([parameters[:, :1], parameters[:, 1:] * spread], axis=-1)


def _log_peak(a: Array) -> Array:
    """a log a - a - log Gamma(a); by Stirling's series where the terms cancel."""
    square = 1 / (a * a)
    series = 0.5 * np.log(a / (2 * np.pi)) - (1 / 12 - square * (1 / 360 - square / 1260)) / a
    return np.where(a > 30, series, a * np.log(a) - a - special.gammaln(a))
