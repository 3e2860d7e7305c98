"""Roots of one equation per row, all rows at once."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Rows = NDArray[np.intp] | slice
Equation = Callable[[Array, Rows], tuple[Array, Array]]
"""Gives value and slope at one point for each of the rows asked for."""


def falling_root(
    equation: Equation, start: Array, low: Array, high: Array, *, rounds: int = 100, last: float = 1e-8
) -> Array:
    """The root of a function that is positive at `low` and negative at `high`: Newton steps kept inside the bracket.

    Rows that have converged leave the computation; a step below `last` of the value is the last one, which with
    quadratic convergence leaves an error near its square.

    Parameters
    ----------
    equation : value and slope for the rows asked for
    start, low, high : shape (rows,)

    Returns
    -------
    shape (rows,)
    """
    count = len(start)
    root, floor, ceiling = start.copy(), low.copy(), high.copy()
    active = np.arange(count)
    for _ in range(rounds):
        rows: Rows = slice(None) if len(active) == count else active
        here = root[rows].copy()
        value, slope = equation(here, rows)
        floor[rows] = np.where(value >= 0, here, floor[rows])
        ceiling[rows] = np.where(value <= 0, here, ceiling[rows])
        step = here - value / slope
        inside = (step > floor[rows]) & (step < ceiling[rows])
        root[rows] = np.where(inside, step, np.where(value == 0, here, 0.5 * (floor[rows] + ceiling[rows])))
        moved = np.abs(root[rows] - here) > last * np.abs(here) + 1e-15
        active = active[moved & (value != 0)]
        if not len(active):
            break
    return root
