"""Two normals in one lot."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters, everywhere
from sheetqc.stats.families.inverse import invert
from sheetqc.stats.families.mixture_fit import fit_mixture
from sheetqc.stats.families.standard import NORMAL
from sheetqc.stats.families.worksheet import Worksheet


class NormalMixture(Family):
    """A share `weight` is normal with mean1 and sd1, the rest with mean2 and sd2; mean1 <= mean2 when fitted.

    The likelihood is unbounded as a component shrinks onto one value: the fit is the best one whose standard
    deviations are at least a tenth of that of all values (divisor n) and whose weight lies between 2 and 98 %.
    """

    name = "normal_mixture"
    title = "mixture of two normals"
    use = "Two sources in one lot: two cavities, two machines, before and after an adjustment."
    parameter_names = ("weight", "mean1", "sd1", "mean2", "sd2")
    positive = ("sd1", "sd2")

    @property
    def worksheet(self) -> Worksheet:
        z = [f"(({{x}}-{{mean{i}}})/{{sd{i}}})" for i in (1, 2)]

        def mixed(one: str, two: str) -> str:
            return f"{{weight}}*{one}+(1-{{weight}})*{two}"

        return Worksheet(
            density=mixed(*(f"EXP(-({v}^2)/2)/({{sd{i}}}*SQRT(2*PI()))" for i, v in enumerate(z, 1))),
            cdf=mixed(*(f"NORM.S.DIST({v},TRUE)" for v in z)),
            survival=mixed(*(f"NORM.S.DIST(-{v},TRUE)" for v in z)),
        )

    def _mixed(self, one: Array, two: Array, p: Parameters) -> Array:
        return np.logaddexp(np.log(p[0]) + one, np.log1p(-p[0]) + two)

    def _z(self, x: Array, p: Parameters) -> tuple[Array, Array]:
        return (x - p[1]) / p[2], (x - p[3]) / p[4]

    def _log_density(self, x: Array, p: Parameters) -> Array:
        a, b = self._z(x, p)
        return self._mixed(NORMAL.log_density(a) - np.log(p[2]), NORMAL.log_density(b) - np.log(p[4]), p)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        a, b = self._z(x, p)
        return np.asarray(p[0] * special.ndtr(a) + (1 - p[0]) * special.ndtr(b))

    def _survival(self, x: Array, p: Parameters) -> Array:
        a, b = self._z(x, p)
        return np.asarray(p[0] * special.ndtr(-a) + (1 - p[0]) * special.ndtr(-b))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        a, b = self._z(x, p)
        return self._mixed(NORMAL.log_cdf(a), NORMAL.log_cdf(b), p)

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        a, b = self._z(x, p)
        return self._mixed(NORMAL.log_survival(a), NORMAL.log_survival(b), p)

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._inverse(probability, p, upper=False)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._inverse(q, p, upper=True)

    def _inverse(self, tail: Array, p: Parameters, *, upper: bool) -> Array:
        z = NORMAL.upper_quantile(tail) if upper else NORMAL.quantile(tail)
        z = np.where(np.isfinite(z), z, 0.0)
        one, two = p[1] + p[2] * z, p[3] + p[4] * z
        # the quantiles of the components enclose that of the mixture; a hair more keeps equal ones apart
        hair = 1e-9 * (p[2] + p[4])
        low, high = np.minimum(one, two) - hair, np.maximum(one, two) + hair
        return invert(self, tail, p, low, high, upper=upper, logarithmic=False)

    def _fit(self, x: Array) -> Array:
        return fit_mixture(x)

    def internal(self, theta: ArrayLike) -> Array:
        table = super().internal(theta)
        table[..., 0] = np.log(table[..., 0]) - np.log1p(-table[..., 0])
        return table

    def external(self, phi: ArrayLike) -> Array:
        table = super().external(phi)
        table[..., 0] = special.expit(table[..., 0])
        return table

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        weight, mean1, sd1, mean2, sd2 = (np.asarray(theta, dtype=float)[..., i, None] for i in range(5))
        shape = (*np.shape(theta)[:-1], size)
        first = rng.random(shape) < weight
        return np.asarray(np.where(first, mean1, mean2) + np.where(first, sd1, sd2) * rng.standard_normal(shape))

    def refusal(self, x: ArrayLike) -> str:
        return "needs at least 8 values" if np.shape(x)[-1] < 8 else ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return everywhere(theta)
