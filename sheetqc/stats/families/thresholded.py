"""Families moved away from 0 by a threshold that is fitted too."""

from __future__ import annotations

from abc import abstractmethod
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.families.base import Array, Family, Parameters
from sheetqc.stats.families.maximise import Rows, at_rows, best_start, maximum
from sheetqc.stats.families.worksheet import Worksheet

NEAREST = 0.05
"""The threshold stays at least this many standard deviations (divisor n) below the smallest value."""
FARTHEST = 1000.0
"""And at most this many: beyond, the family is its own limit (normal or smallest-value) to the eye and to a test."""
_GRID = np.log([0.05, 0.12, 0.3, 0.7, 1.4, 2.5, 5.0, 12.0, 40.0, 300.0])


class Thresholded(Family):
    """x - threshold follows the parent family.

    The likelihood is unbounded as the threshold reaches the smallest value. The fit is therefore the best one whose
    threshold lies between 0.05 and 1000 standard deviations below the smallest value: the likelihood, profiled over
    the threshold. Of the remedies in use this one never fails and scatters least.
    """

    parent: ClassVar[Family]

    @property
    def worksheet(self) -> Worksheet:
        sheet = self.parent.worksheet
        moved = {
            name: getattr(sheet, name).replace("{x}", "({x}-{threshold})") for name in ("density", "cdf", "survival")
        }
        return Worksheet(
            **moved,
            quantile="{threshold}+" + sheet.quantile,
            upper_quantile="{threshold}+" + sheet.upper_quantile,
        )

    def _log_density(self, x: Array, p: Parameters) -> Array:
        return self.parent._log_density(x - p[-1], p[:-1])

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return self.parent._cdf(x - p[-1], p[:-1])

    def _survival(self, x: Array, p: Parameters) -> Array:
        return self.parent._survival(x - p[-1], p[:-1])

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return self.parent._log_cdf(x - p[-1], p[:-1])

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return self.parent._log_survival(x - p[-1], p[:-1])

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return p[-1] + self.parent._quantile(probability, p[:-1])

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return p[-1] + self.parent._upper_quantile(q, p[:-1])

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        table = np.asarray(theta, dtype=float)
        return table[..., -1:] + self.parent.sample(table[..., :-1], size, rng)

    def refusal(self, x: ArrayLike) -> str:
        return "needs at least 4 values" if np.shape(x)[-1] < 4 else ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        table = np.asarray(theta, dtype=float)
        return table[..., -1].copy(), np.full(table.shape[:-1], np.inf)

    @abstractmethod
    def _profile(self, v: Array, y: Array, inner: Array) -> tuple[Array, Array, Array]:
        """Log-likelihood of v = x - threshold with y = log v, at the parameters that are not profiled out.

        Returns value (rows,), gradient in those parameters (rows, k) and gradient in the threshold (rows,).
        """

    @abstractmethod
    def _inner_start(self, y: Array) -> Array:
        """Start values of the parameters that are not profiled out, shape (rows, k), k may be 0."""

    @abstractmethod
    def _parameters(self, v: Array, inner: Array) -> Array:
        """The parent's parameters at v and the inner ones, shape (rows, ...)."""

    def _fit(self, x: Array) -> Array:
        smallest, spread = x.min(axis=-1, keepdims=True), x.std(axis=-1, keepdims=True)
        u = (x - smallest) / spread

        def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
            gap = np.exp(phi[:, :1])
            v = at_rows(u, rows) + gap
            value, by_inner, by_threshold = self._profile(v, np.log(v), phi[:, 1:])
            gradient = np.concatenate([-by_threshold[:, None] * gap, by_inner], axis=-1)
            usable = np.isfinite(value)
            return np.where(usable, value, -np.inf), np.where(usable[:, None], gradient, 0.0)

        starts = np.stack([self._start(u, gap) for gap in _GRID])
        start = best_start(objective, starts)
        low, high = _box(starts.shape[-1])
        phi = maximum(objective, start, low, high).place
        gap = np.exp(phi[:, :1])
        inner = self._parameters(u + gap, phi[:, 1:])
        return np.concatenate([self._restored(inner, spread), smallest - spread * gap], axis=-1)

    def _start(self, u: Array, gap: float) -> Array:
        inner = self._inner_start(np.log(u + np.exp(gap)))
        return np.concatenate([np.full((len(u), 1), gap), inner], axis=-1)

    @abstractmethod
    def _restored(self, parameters: Array, spread: Array) -> Array:
        """The parent's parameters of values that were divided by `spread`, in the unit of x."""


def _box(k: int) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    low, high = np.full(k, -12.0), np.full(k, 16.0)
    low[0], high[0] = np.log(NEAREST), np.log(FARTHEST)
    return low, high
