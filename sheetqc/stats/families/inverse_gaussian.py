"""The inverse Gaussian family: first passage times of a drifting process."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.inverse import invert
from sheetqc.stats.families.location_scale import needs_above_zero
from sheetqc.stats.families.logs import log_one_minus_exp
from sheetqc.stats.families.worksheet import Worksheet, above

_ROOT_2 = float(np.sqrt(2))
_LOG_2PI = float(np.log(2 * np.pi))


class InverseGaussian(Family):
    """f(x) = sqrt(shape / (2 pi x^3)) exp(-shape (x - mean)^2 / (2 mean^2 x)), x above 0."""

    name = "inverse_gaussian"
    title = "inverse Gaussian"
    use = "Time until steady wear or crack growth reaches a limit; strongly skewed positive sizes."
    parameter_names = ("mean", "shape")
    positive = ("mean", "shape")

    @property
    def worksheet(self) -> Worksheet:
        root = "SQRT({shape}/{x})"
        a, b = f"({root}*({{x}}/{{mean}}-1))", f"({root}*({{x}}/{{mean}}+1))"
        # for a large shape the exponential overflows; the tail of the normal by its asymptotic series then serves
        far = f"EXP(-({a}^2)/2)/(SQRT(2*PI())*{b})*(1-(1-(3-15/{b}^2)/{b}^2)/{b}^2)"
        reflected = f"IF({{shape}}/{{mean}}>300,{far},EXP(2*{{shape}}/{{mean}})*NORM.S.DIST(-{b},TRUE))"
        density = "SQRT({shape}/(2*PI()*{x}^3))*EXP(-{shape}*({x}-{mean})^2/(2*{mean}^2*{x}))"
        return Worksheet(
            density=above("0", density, "0"),
            cdf=above("0", f"NORM.S.DIST({a},TRUE)+{reflected}", "0"),
            survival=above("0", f"NORM.S.DIST(-{a},TRUE)-{reflected}", "1"),
        )

    def _log_density(self, x: Array, p: Parameters) -> Array:
        mean, shape = p
        v = np.where(x > 0, x, 1.0)
        inside = 0.5 * (np.log(shape) - _LOG_2PI - 3 * np.log(v)) - shape * (v - mean) ** 2 / (2 * mean**2 * v)
        return np.where(x > 0, inside, -np.inf)

    def _arguments(self, x: Array, p: Parameters) -> tuple[Array, Array]:
        v = np.where(x > 0, x, p[0])
        root = np.sqrt(p[1] / v)
        return root * (v - p[0]) / p[0], root * (v + p[0]) / p[0]

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        a, b = self._arguments(x, p)
        # below the mean: e^(2 shape / mean) Phi(-b) = e^(-a^2/2) erfcx(b / sqrt 2) / 2
        below = -0.5 * a * a + np.log(0.5 * (special.erfcx(-a / _ROOT_2) + special.erfcx(b / _ROOT_2)))
        inside = np.where(a < 0, below, log_one_minus_exp(-self._log_upper(a, b)))
        return np.where(x > 0, inside, -np.inf)

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        a, b = self._arguments(x, p)
        below = -0.5 * a * a + np.log(0.5 * (special.erfcx(-a / _ROOT_2) + special.erfcx(b / _ROOT_2)))
        inside = np.where(a < 0, log_one_minus_exp(-below), self._log_upper(a, b))
        return np.where(x > 0, np.where(np.isinf(x), -np.inf, inside), 0.0)

    def _log_upper(self, a: Array, b: Array) -> Array:
        near = np.maximum(a, 0.0)
        return np.asarray(
            -0.5 * near * near + np.log(0.5 * (special.erfcx(near / _ROOT_2) - special.erfcx(b / _ROOT_2)))
        )

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.exp(self._log_cdf(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.exp(self._log_survival(x, p))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._inverse(probability, p, upper=False)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._inverse(q, p, upper=True)

    def _inverse(self, tail: Array, p: Parameters, *, upper: bool) -> Array:
        mean, shape = p
        # 1 / x has a chi-square lower bound and x a gamma-like upper tail: generous brackets on the log scale
        low = mean / (1 + mean / shape * 800.0) * 0.5
        high = mean * (2 + mean / shape * 1600.0) * 2
        return invert(self, tail, p, low, high, upper=upper, logarithmic=True)

    def _fit(self, x: Array) -> Array:
        n = x.shape[-1]
        mean = np.add.reduce(x, axis=-1) / n
        # mean(1/x) - 1/mean(x) as a mean of squares, without cancellation
        d = x - mean[:, None]
        excess = np.einsum("ij,ij,ij->i", d, d, 1 / x) / (n * mean * mean)
        return np.stack([mean, 1 / excess], axis=-1)

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        table = np.asarray(theta, dtype=float)
        return np.asarray(rng.wald(table[..., :1], table[..., 1:], size=(*table.shape[:-1], size)))

    def refusal(self, x: ArrayLike) -> str:
        return needs_above_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)
