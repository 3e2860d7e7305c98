"""The folded normal family: the size of a normal deviation, sign dropped."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero
from sheetqc.stats.families.folded_fit import fit_folded
from sheetqc.stats.families.inverse import invert
from sheetqc.stats.families.location_scale import needs_not_below_zero
from sheetqc.stats.families.logs import log_difference
from sheetqc.stats.families.worksheet import Worksheet

_LOG_ROOT_2PI = 0.5 * float(np.log(2 * np.pi))
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
_NODES, _WEIGHTS = 0.5 * (_NODES + 1), 0.5 * _WEIGHTS


NOTHING_FOLDED = 40.0
"""Mean in standard deviations from which the folded share is 0 in double precision."""


class FoldedNormal(Family):
    """The size |y| of a normal y with mean mu >= 0 and standard deviation sigma."""

    name = "folded_normal"
    title = "folded normal"
    use = "Runout, parallelism, coaxiality and other sizes of a deviation whose sign was dropped."
    parameter_names = ("mu", "sigma")
    positive = ("sigma",)

    @property
    def worksheet(self) -> Worksheet:
        h, m = "({x}/{sigma})", "({mu}/{sigma})"
        # near 0 the two normal terms cancel; the power series of their difference does not
        series = (
            f"2*{h}*EXP(-({m}^2)/2)/SQRT(2*PI())*(1+{h}^2*(({m}^2-1)/6+{h}^2*(({m}^4-6*{m}^2+3)/120"
            f"+{h}^2*({m}^6-15*{m}^4+45*{m}^2-15)/5040)))"
        )
        both = f"NORM.S.DIST({h}-{m},TRUE)-NORM.S.DIST(-{h}-{m},TRUE)"
        return Worksheet(
            density=f"IF({{x}}<0,0,(EXP(-(({h}-{m})^2)/2)+EXP(-(({h}+{m})^2)/2))/({{sigma}}*SQRT(2*PI())))",
            cdf=f"IF({{x}}<=0,0,IF({h}*MAX(1,{m})<0.05,{series},{both}))",
            survival=f"IF({{x}}<=0,1,NORM.S.DIST({m}-{h},TRUE)+NORM.S.DIST(-{h}-{m},TRUE))",
        )

    def _scaled(self, x: Array, p: Parameters) -> tuple[Array, Array]:
        h, m = np.broadcast_arrays(np.maximum(x, 0.0) / p[1], np.abs(p[0]) / p[1])
        return h, m

    def _log_density(self, x: Array, p: Parameters) -> Array:
        h, m = self._scaled(x, p)
        inside = -0.5 * (h - m) ** 2 + np.log1p(np.exp(-2 * h * m)) - np.log(p[1]) - _LOG_ROOT_2PI
        return np.where(x >= 0, inside, -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.exp(self._log_cdf(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        h, m = self._scaled(x, p)
        return np.asarray(special.ndtr(m - h) + special.ndtr(-h - m))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        h, m = self._scaled(x, p)
        near = h * np.maximum(m, 1.0) < 1
        result = np.asarray(log_difference(special.log_ndtr(h - m), special.log_ndtr(-h - m)))
        if np.any(near):
            result = np.where(near, 0.0, result)
            a, b = h[near], m[near]
            result[near] = np.log(2 * a * _mean_height(a, b)) - 0.5 * b * b - _LOG_ROOT_2PI
        return result

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        h, m = self._scaled(x, p)
        return np.logaddexp(special.log_ndtr(m - h), special.log_ndtr(-h - m))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._inverse(probability, 1 - probability, p, upper=False)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._inverse(1 - q, q, p, upper=True)

    def _inverse(self, below: Array, above: Array, p: Parameters, *, upper: bool) -> Array:
        m, sigma = np.abs(p[0]) / p[1], p[1]
        # one normal tail alone, twice it, and the height at 0 bound the value
        lower_tail = m + special.ndtri(below) if not upper else m - special.ndtri(above)
        low = np.maximum(np.sqrt(np.pi / 2) * below, lower_tail) * (1 - 1e-12)
        high = (m - special.ndtri(0.5 * above)) * (1 + 1e-12)
        low = np.where(below <= 0, 0.0, low)
        tail = above if upper else below
        found = invert(self, tail, p, sigma * low, sigma * high, upper=upper, logarithmic=True)
        # far from 0 nothing is folded, and the normal quantile has digits that a search over x has not
        return np.where(m > NOTHING_FOLDED, sigma * lower_tail, found)

    def _fit(self, x: Array) -> Array:
        return fit_folded(x)

    def internal(self, theta: ArrayLike) -> Array:
        table = super().internal(theta)
        table[..., 0] = np.abs(table[..., 0])
        return table

    def external(self, phi: ArrayLike) -> Array:
        # the family is even in mu: a coordinate below 0 stands for the same distribution as its size
        table = super().external(phi)
        table[..., 0] = np.abs(table[..., 0])
        return table

    def refusal(self, x: ArrayLike) -> str:
        return needs_not_below_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)


def _mean_height(h: Array, m: Array) -> Array:
    """Mean of exp(-t^2/2) cosh(m t) over 0 < t < h, by Gauss-Legendre quadrature; for h max(m, 1) below 1."""
    t = h[..., None] * _NODES
    return np.asarray(np.exp(-0.5 * t * t) * np.cosh(m[..., None] * t) @ _WEIGHTS)
