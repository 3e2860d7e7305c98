"""The generalised extreme-value family."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters
from sheetqc.stats.families.gev_fit import fit_gev, reduced
from sheetqc.stats.families.standard import LARGEST
from sheetqc.stats.families.worksheet import Worksheet, minus_log_one_minus, one_minus_exp


class Gev(Family):
    """F(x) = exp(-(1 + xi z)^(-1/xi)), z = (x - location) / scale; xi > 0 has the heavy upper tail, xi = 0 is Gumbel.

    The likelihood is unbounded for xi < -1; the fit is the best one with xi >= -1.
    """

    name = "gev"
    title = "generalised extreme value"
    use = "Largest values per lot or period when the tail may be heavier or shorter than Gumbel's."
    parameter_names = ("location", "scale", "xi")
    positive = ("scale",)

    @property
    def worksheet(self) -> Worksheet:
        z = "(({x}-{location})/{scale})"
        u = f"({{xi}}*{z})"
        y = f"IF(ABS({u})<0.001,{z}*(1-{u}*(1/2-{u}*(1/3-{u}*(1/4-{u}/5)))),LN(1+{u})/{{xi}})"
        t = f"EXP(MIN(700,-({y})))"

        def guarded(inside: str, below: str, beyond: str) -> str:
            return f"IF(1+{u}<=0,IF({{xi}}>0,{below},{beyond}),{inside})"

        def at(v: str) -> str:
            return f"{{location}}+{{scale}}*IF({{xi}}=0,{v},2*EXP({{xi}}*{v}/2)*SINH({{xi}}*{v}/2)/{{xi}})"

        return Worksheet(
            density=guarded(f"EXP(-(1+{{xi}})*({y})-{t})/{{scale}}", "0", "0"),
            cdf=guarded(f"EXP(-{t})", "0", "1"),
            survival=guarded(one_minus_exp(t), "1", "0"),
            quantile=at("(-LN(-LN({p})))"),
            upper_quantile=at(f"(-LN({minus_log_one_minus('{q}')}))"),
        )

    def _y(self, x: Array, p: Parameters) -> Array:
        """The Gumbel value belonging to x; -inf or inf beyond the end of the support."""
        location, scale, xi = np.broadcast_arrays(*p)
        z, xi = np.broadcast_arrays((x - location) / scale, xi)
        inside = (xi == 0) | (1 + xi * z > 0)
        return np.where(inside, reduced(z, xi), np.where(xi > 0, -np.inf, np.inf))

    def _log_density(self, x: Array, p: Parameters) -> Array:
        y = self._y(x, p)
        inside = -(1 + p[2]) * y - np.exp(-y) - np.log(p[1])
        return np.where(np.isfinite(y), inside, -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return LARGEST.cdf(self._y(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return LARGEST.survival(self._y(x, p))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return LARGEST.log_cdf(self._y(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return LARGEST.log_survival(self._y(x, p))

    def _at(self, y: Array, p: Parameters) -> Array:
        y, xi = np.broadcast_arrays(y, p[2])
        safe = np.where(xi == 0, 1.0, xi)
        return p[0] + p[1] * np.where(xi == 0, y, np.expm1(xi * y) / safe)

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._at(LARGEST.quantile(probability), p)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._at(LARGEST.upper_quantile(q), p)

    def _fit(self, x: Array) -> Array:
        return fit_gev(x)

    def refusal(self, x: ArrayLike) -> str:
        return ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        table = np.asarray(theta, dtype=float)
        location, scale, xi = (table[..., i] for i in range(3))
        end = location - scale / np.where(xi == 0, 1.0, xi)
        return np.where(xi > 0, end, -np.inf), np.where(xi < 0, end, np.inf)
