"""The gamma family with its origin at 0."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.digamma import log_minus_digamma, trigamma
from sheetqc.stats.families.gamma_tails import log_lower, log_upper, upper_tail_expression
from sheetqc.stats.families.location_scale import needs_above_zero
from sheetqc.stats.families.worksheet import Worksheet, above


class Gamma(Family):
    """f(x) = x^(shape-1) exp(-x/scale) / (Gamma(shape) scale^shape), x above 0."""

    name = "gamma"
    title = "gamma"
    use = "Skewed sizes bounded by 0: roughness, flatness, residual dirt, waiting times made of several steps."
    parameter_names = ("shape", "scale")
    positive = ("shape", "scale")

    @property
    def worksheet(self) -> Worksheet:
        return Worksheet(
            density=above("0", "GAMMA.DIST({x},{shape},{scale},FALSE)", "0"),
            cdf=above("0", "GAMMA.DIST({x},{shape},{scale},TRUE)", "0"),
            survival=above("0", upper_tail_expression("{x}", "{shape}", "{scale}"), "1"),
            quantile="GAMMA.INV({p},{shape},{scale})",
            upper_quantile="GAMMA.INV(1-{q},{shape},{scale})",
        )

    def _log_density(self, x: Array, p: Parameters) -> Array:
        shape, scale = p
        y = np.where(x > 0, x, 1.0) / scale
        inside = (shape - 1) * np.log(y) - y - special.gammaln(shape) - np.log(scale)
        return np.where(x > 0, inside, -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.asarray(special.gammainc(p[0], np.maximum(x, 0.0) / p[1]))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.asarray(special.gammaincc(p[0], np.maximum(x, 0.0) / p[1]))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return log_lower(p[0], np.maximum(x, 0.0) / p[1])

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return log_upper(p[0], np.maximum(x, 0.0) / p[1])

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return np.asarray(p[1] * special.gammaincinv(p[0], probability))

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return np.asarray(p[1] * special.gammainccinv(p[0], q))

    def _fit(self, x: Array) -> Array:
        return fit_gamma(x)

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        table = np.asarray(theta, dtype=float)
        shape = (*table.shape[:-1], size)
        return np.asarray(rng.standard_gamma(table[..., :1], size=shape) * table[..., 1:])

    def refusal(self, x: ArrayLike) -> str:
        return needs_above_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)


def fit_gamma(x: Array) -> Array:
    """Shape and scale for each row, shape (rows, n) -> (rows, 2).

    The shape a solves log a - psi(a) = log mean(x) - mean(log x), by the generalised Newton step in 1/a.

    Reference: Minka (2002), estimating a gamma distribution.
    """
    mean = np.add.reduce(x, axis=-1) / x.shape[-1]
    ratio = x / mean[:, None]
    gap = -np.add.reduce(np.log(ratio), axis=-1) / x.shape[-1]
    if np.min(gap) < 1e-6:
        # the mean of d is 0: subtracting d before averaging keeps the digits of a small difference
        d = (x - mean[:, None]) / mean[:, None]
        gap = np.mean(d - np.log1p(d), axis=-1)
    a = (3 - gap + np.sqrt((gap - 3) ** 2 + 24 * gap)) / (12 * gap)
    for _ in range(30):
        inverse = 1 / a + (log_minus_digamma(a) - gap) / (a * a * (1 / a - trigamma(a)))
        step = np.abs(inverse * a - 1)
        a = 1 / inverse
        if np.max(step) < 1e-6:
            break
    return np.stack([a, mean / a], axis=-1)
