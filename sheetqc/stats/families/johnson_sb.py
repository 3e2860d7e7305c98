"""The Johnson family bounded at both ends."""

from __future__ import annotations

from abc import abstractmethod

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters
from sheetqc.stats.families.johnson_fit import fit_sb, fit_sb_within
from sheetqc.stats.families.standard import NORMAL
from sheetqc.stats.families.worksheet import Worksheet


class _Bounded(Family):
    """gamma + delta log((x - low) / (high - x)) is standard normal."""

    name = "johnson_sb"
    title = "Johnson, bounded"
    use = "Values held between two ends: shares, angles within a stop, sorted lots."

    @abstractmethod
    def _ends(self, p: Parameters) -> tuple[Array, Array]: ...

    @abstractmethod
    def _cells(self) -> tuple[str, str]:
        """Lower and upper end in spreadsheet notation."""

    @property
    def worksheet(self) -> Worksheet:
        low, high = self._cells()
        z = f"({{gamma}}+{{delta}}*LN(({{x}}-{low})/({high}-{{x}})))"
        density = f"{{delta}}*({high}-{low})/(({{x}}-{low})*({high}-{{x}})*SQRT(2*PI()))*EXP(-({z}^2)/2)"

        def inside(text: str, below: str, beyond: str) -> str:
            return f"IF({{x}}<={low},{below},IF({{x}}>={high},{beyond},{text}))"

        def at(v: str) -> str:
            return f"{low}+({high}-{low})/(1+EXP(({{gamma}}-{v})/{{delta}}))"

        return Worksheet(
            density=inside(density, "0", "0"),
            cdf=inside(f"NORM.S.DIST({z},TRUE)", "0", "1"),
            survival=inside(f"NORM.S.DIST(-{z},TRUE)", "1", "0"),
            quantile=at("NORM.S.INV({p})"),
            upper_quantile=at("(-NORM.S.INV({q}))"),
        )

    def _z(self, x: Array, p: Parameters) -> Array:
        """The standard normal value belonging to x; -inf and inf beyond the ends."""
        low, high = self._ends(p)
        share = np.clip((x - low) / (high - low), 0.0, 1.0)
        rest = np.clip((high - x) / (high - low), 0.0, 1.0)
        return np.asarray(p[0] + p[1] * (np.log(share) - np.log(rest)))

    def _log_density(self, x: Array, p: Parameters) -> Array:
        low, high = self._ends(p)
        inside = (x > low) & (x < high)
        middle = 0.5 * (low + high)
        v = np.where(inside, x, middle)
        slope = np.log(p[1]) + np.log(high - low) - np.log(v - low) - np.log(high - v)
        return np.asarray(np.where(inside, NORMAL.log_density(self._z(v, p)) + slope, -np.inf))

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return NORMAL.cdf(self._z(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return NORMAL.survival(self._z(x, p))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return NORMAL.log_cdf(self._z(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return NORMAL.log_survival(self._z(x, p))

    def _x(self, z: Array, p: Parameters) -> Array:
        low, high = self._ends(p)
        v = (z - p[0]) / p[1]
        # from the nearer end, so that a value close to it keeps its distance
        near_low = low + (high - low) / (1 + np.exp(-v))
        near_high = high - (high - low) / (1 + np.exp(v))
        return np.asarray(np.where(v < 0, near_low, near_high))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._x(NORMAL.quantile(probability), p)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._x(NORMAL.upper_quantile(q), p)


class JohnsonSB(_Bounded):
    """gamma + delta log((x - xi) / (xi + lambda - x)) is standard normal; both ends are fitted.

    The likelihood is unbounded as an end reaches the values: the fit is the best one with both ends at least 0.05
    standard deviations (divisor n) outside them.
    """

    parameter_names = ("gamma", "delta", "xi", "lambda")
    positive = ("delta", "lambda")

    def _ends(self, p: Parameters) -> tuple[Array, Array]:
        return p[2], p[2] + p[3]

    def _cells(self) -> tuple[str, str]:
        return "{xi}", "({xi}+{lambda})"

    def within(self, lower: float | None, upper: float | None) -> Family:
        return self if lower is None or upper is None else JohnsonSBWithin(lower, upper)

    def _fit(self, x: Array) -> Array:
        return fit_sb(x)

    def refusal(self, x: ArrayLike) -> str:
        return "needs at least 5 values" if np.shape(x)[-1] < 5 else ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        table = np.asarray(theta, dtype=float)
        return table[..., 2].copy(), table[..., 2] + table[..., 3]


class JohnsonSBWithin(_Bounded):
    """The same between two given ends."""

    parameter_names = ("gamma", "delta")
    positive = ("delta",)

    def __init__(self, lower: float, upper: float) -> None:
        self.lower, self.upper = lower, upper

    def _ends(self, p: Parameters) -> tuple[Array, Array]:
        return np.asarray(self.lower), np.asarray(self.upper)

    def _cells(self) -> tuple[str, str]:
        return f"({self.lower!r})", f"({self.upper!r})"

    def normal_scale(self, x: ArrayLike) -> Array:
        values = np.asarray(x, dtype=float)
        return np.log(values - self.lower) - np.log(self.upper - values)

    def _fit(self, x: Array) -> Array:
        return fit_sb_within(x, self.lower, self.upper)

    def refusal(self, x: ArrayLike) -> str:
        return outside(x, self.lower, self.upper)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        lead = np.shape(theta)[:-1]
        return np.full(lead, self.lower), np.full(lead, self.upper)


def outside(x: ArrayLike, lower: float, upper: float) -> str:
    """The refusal of a family between two ends that no value may reach."""
    values = np.asarray(x)
    if np.min(values) <= lower or np.max(values) >= upper:
        return f"needs values between {lower:g} and {upper:g}"
    return ""
