"""The beta family between two given bounds."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters
from sheetqc.stats.families.johnson_sb import outside
from sheetqc.stats.families.maximise import Rows, maximum
from sheetqc.stats.families.worksheet import Worksheet


class Beta(Family):
    """u = (x - lower) / (upper - lower) has the density u^(alpha-1) (1-u)^(beta-1) / B(alpha, beta)."""

    name = "beta"
    title = "beta"
    use = "Shares, yields and other values held between two known ends, 0 and 1 unless given."
    parameter_names = ("alpha", "beta")
    positive = ("alpha", "beta")

    def __init__(self, lower: float = 0.0, upper: float = 1.0) -> None:
        self.lower, self.upper = float(lower), float(upper)

    def within(self, lower: float | None, upper: float | None) -> Family:
        return self if lower is None or upper is None else Beta(lower, upper)

    @property
    def worksheet(self) -> Worksheet:
        low, high = f"({self.lower!r})", f"({self.upper!r})"
        mirror = f"({low}+{high}-{{x}})"

        def inside(text: str, below: str, beyond: str) -> str:
            return f"IF({{x}}<={low},{below},IF({{x}}>={high},{beyond},{text}))"

        return Worksheet(
            density=inside(f"BETA.DIST({{x}},{{alpha}},{{beta}},FALSE,{low},{high})", "0", "0"),
            cdf=inside(f"BETA.DIST({{x}},{{alpha}},{{beta}},TRUE,{low},{high})", "0", "1"),
            survival=inside(f"BETA.DIST({mirror},{{beta}},{{alpha}},TRUE,{low},{high})", "1", "0"),
            quantile=f"BETA.INV({{p}},{{alpha}},{{beta}},{low},{high})",
            upper_quantile=f"{low}+{high}-BETA.INV({{q}},{{beta}},{{alpha}},{low},{high})",
        )

    def _shares(self, x: Array) -> tuple[Array, Array]:
        width = self.upper - self.lower
        return np.clip((x - self.lower) / width, 0.0, 1.0), np.clip((self.upper - x) / width, 0.0, 1.0)

    def _log_density(self, x: Array, p: Parameters) -> Array:
        u, rest = self._shares(x)
        inside = (u > 0) & (rest > 0)
        u, rest = np.where(inside, u, 0.5), np.where(inside, rest, 0.5)
        value = (p[0] - 1) * np.log(u) + (p[1] - 1) * np.log(rest) - special.betaln(p[0], p[1])
        return np.where(inside, value - np.log(self.upper - self.lower), -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        u, rest = self._shares(x)
        return _share_below(p[0], p[1], u, rest)

    def _survival(self, x: Array, p: Parameters) -> Array:
        u, rest = self._shares(x)
        return _share_below(p[1], p[0], rest, u)

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return np.log(self._cdf(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return np.log(self._survival(x, p))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        width = self.upper - self.lower
        u = special.betaincinv(p[0], p[1], probability)
        rest = special.betainccinv(p[1], p[0], probability)
        return np.asarray(np.where(u < 0.5, self.lower + width * u, self.upper - width * rest))

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        width = self.upper - self.lower
        rest = special.betaincinv(p[1], p[0], q)
        u = special.betainccinv(p[0], p[1], q)
        return np.asarray(np.where(rest < 0.5, self.upper - width * rest, self.lower + width * u))

    def _fit(self, x: Array) -> Array:
        u, rest = self._shares(x)
        return _fit_shares(u, rest)

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        table = np.asarray(theta, dtype=float)
        u = rng.beta(table[..., :1], table[..., 1:], size=(*table.shape[:-1], size))
        return np.asarray(self.lower + (self.upper - self.lower) * u)

    def refusal(self, x: ArrayLike) -> str:
        return outside(x, self.lower, self.upper)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        lead = np.shape(theta)[:-1]
        return np.full(lead, self.lower), np.full(lead, self.upper)


def _share_below(a: Array, b: Array, u: Array, rest: Array) -> Array:
    """Probability below the share u, with u + rest = 1; above one half counted from the other side."""
    a, b, u, rest = np.broadcast_arrays(a, b, u, rest)
    below = np.array(special.betainc(a, b, u), dtype=np.float64)
    upper = below > 0.5
    if np.any(upper):
        below[upper] = 1 - special.betainc(b[upper], a[upper], rest[upper])
    return np.asarray(below, dtype=np.float64)


def _fit_shares(u: Array, rest: Array) -> Array:
    """alpha and beta from the mean logarithms of both shares, which say all; the likelihood is concave."""
    left, right = np.log(u).mean(axis=-1), np.log(rest).mean(axis=-1)
    n = u.shape[-1]

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        a, b = np.exp(phi[:, 0]), np.exp(phi[:, 1])
        value = n * ((a - 1) * left[rows] + (b - 1) * right[rows] - special.betaln(a, b))
        both = special.digamma(a + b)
        by_a = n * a * (left[rows] - special.digamma(a) + both)
        by_b = n * b * (right[rows] - special.digamma(b) + both)
        return value, np.stack([by_a, by_b], axis=-1)

    mean, variance = u.mean(axis=-1), u.var(axis=-1)
    total = np.clip(mean * (1 - mean) / variance - 1, 0.05, 1e9)
    start = np.log(np.stack([mean * total, (1 - mean) * total], axis=-1))
    phi = maximum(objective, start, np.full(2, -12.0), np.full(2, 24.0)).place
    return np.exp(phi)
