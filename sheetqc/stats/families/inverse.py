"""Quantiles by inversion, for families without a closed inverse."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.families.newton import Rows, falling_root

if TYPE_CHECKING:
    from sheetqc.stats.families.base import Family, Parameters

Array = NDArray[np.float64]


def invert(
    family: Family, tail: Array, p: Parameters, low: Array, high: Array, *, upper: bool, logarithmic: bool
) -> Array:
    """The value with probability `tail` below it (above it when `upper`), between `low` and `high`.

    Newton steps on the logarithm of the nearer tail, so that a probability of 1e-15 is met to the last digits; in
    log x when `logarithmic`, which is close to linear at an origin at 0.
    """
    tail, low, high, *columns = np.broadcast_arrays(tail, low, high, *p)
    shape = tail.shape
    tail, low, high = tail.ravel(), low.ravel(), high.ravel()
    table = tuple(c.ravel() for c in columns)
    above = (tail <= 0.5) if upper else (tail > 0.5)
    near = np.where(above == upper, tail, 1 - tail)
    target = np.log(near)

    def equation(u: Array, rows: Rows) -> tuple[Array, Array]:
        q = tuple(c[rows] for c in table)
        x = np.exp(u) if logarithmic else u
        is_above = above[rows]
        log_tail = np.where(is_above, family._log_survival(x, q), family._log_cdf(x, q))
        steep = np.exp(family._log_density(x, q) - log_tail) * (x if logarithmic else 1.0)
        sign = np.where(is_above, 1.0, -1.0)
        return sign * (log_tail - target[rows]), -steep

    inner = (near > 0) & (high > low)
    found = np.where(high > low, np.nan, low)
    if np.any(inner):
        a, b = (np.log(low), np.log(high)) if logarithmic else (low, high)
        take = np.flatnonzero(inner)
        table, above, target = tuple(c[take] for c in table), above[take], target[take]
        root = falling_root(equation, 0.5 * (a[take] + b[take]), a[take], b[take])
        found[take] = np.exp(root) if logarithmic else root
    at_bottom = (tail >= 1) if upper else (tail <= 0)
    at_top = (tail <= 0) if upper else (tail >= 1)
    lowest, highest = family.support(np.stack([c.ravel() for c in columns], axis=-1))
    found = np.where(at_bottom, lowest, np.where(at_top, highest, found))
    return found.reshape(shape)
