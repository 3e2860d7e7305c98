"""Maximum likelihood of the folded normal family, with its border at mu = 0 treated honestly."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.families.newton import Equation, Rows, falling_root

Array = NDArray[np.float64]

_STEPS = (0.98, 0.9, 0.8, 0.7, 0.6, 0.5, 0.4, 0.3, 0.2, 0.1, 0.03)


def fit_folded(x: Array) -> Array:
    """mu and sigma for each row, shape (rows, n) -> (rows, 2).

    At an optimum mu = mean(x tanh(mu x / sigma^2)) and mu^2 + sigma^2 = mean(x^2): one equation in r = mu / sigma.
    mu = 0 always solves it. The largest other root lies below mean / sd and is bracketed from there downwards; it is
    taken when its likelihood is higher than that of mu = 0. A fourth moment of at least 3 (in units of the second,
    squared) alone does not settle the border case.
    """
    root_square = np.sqrt(np.mean(x * x, axis=-1, keepdims=True))
    u = x / root_square
    mean, sd = u.mean(axis=-1), u.std(axis=-1)
    ceiling = mean / np.maximum(sd, 1e-12)

    def equation(r: Array, rows: Rows) -> tuple[Array, Array]:
        v, root = u[rows], np.sqrt(1 + r * r)
        # tanh by way of one exponential; the argument is never below 0
        e = np.exp((-2 * r * root)[:, None] * v)
        t = (1 - e) / (1 + e)
        slope_of_c = (1 + 2 * r * r) / root
        curve = np.einsum("ij,ij,ij->i", 1 - t * t, v, v)
        n = v.shape[-1]
        value = np.einsum("ij,ij->i", t, v) / n - r / root
        return value, slope_of_c * curve / n - root**-3.0

    low, high = _bracket(equation, ceiling)
    interior = np.isfinite(low)
    r = np.zeros(len(u))
    if np.any(interior):
        take = np.flatnonzero(interior)

        def part(s: Array, rows: Rows) -> tuple[Array, Array]:
            return equation(s, take[rows])

        r[take] = falling_root(part, high[take], low[take], high[take], last=1e-6)
        r[take] = np.where(_gain(u[take], r[take]) > 0, r[take], 0.0)
    return _parameters(x, r, root_square[:, 0])


def _bracket(equation: Equation, ceiling: Array) -> tuple[Array, Array]:
    """Where the equation changes from positive to negative nearest below the ceiling; nan where it never does."""
    low, high = np.full(len(ceiling), np.nan), ceiling.copy()
    open_rows = np.arange(len(ceiling))
    for step in _STEPS:
        rows: Rows = slice(None) if len(open_rows) == len(ceiling) else open_rows
        r = step * ceiling[rows]
        value, _ = equation(r, rows)
        low[rows] = np.where(value > 0, r, np.nan)
        high[rows] = np.where(value > 0, high[rows], r)
        open_rows = open_rows[value <= 0]
        if not len(open_rows):
            break
    return low, high


def _gain(u: Array, r: Array) -> Array:
    """Mean log-likelihood at r above that at 0; rows of u have mean square 1."""
    square = 1 + r * r
    size = np.abs((r * np.sqrt(square))[:, None] * u)
    log_cosh = size + np.log1p(np.exp(-2 * size)) - np.log(2)
    return np.asarray(0.5 * np.log(square) - 0.5 * (square + r * r) + 0.5 + log_cosh.mean(axis=-1))


def _parameters(x: Array, r: Array, root_square: Array) -> Array:
    """mu and sigma in the unit of x; sigma from a sum of squares, without cancellation for r large."""
    c = r * np.sqrt(1 + r * r) / root_square
    t = np.tanh(c[:, None] * x)
    mu = np.mean(x * t, axis=-1)
    spread = np.mean((x - mu[:, None] * t) ** 2 + (mu[:, None] ** 2) * (1 - t * t), axis=-1)
    return np.stack([mu, np.sqrt(spread)], axis=-1)
