"""Maxima of several coordinates per row, all rows at once."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Rows = NDArray[np.intp]
Objective = Callable[[Array, Rows], tuple[Array, Array]]
"""Gives value (rows,) and gradient (rows, k) at coordinates (rows, k) for the rows asked for; -inf where forbidden."""

_DIFFERENCE = 1e-5
_LONGEST = 1.0
_GAIN = 1e-8
_FEW = 16
"""Up to so many rows one call for all shifted places is faster than a call for each."""


def at_rows(x: Array, rows: Rows) -> Array:
    """The rows of x asked for, without a copy when these are all of them in order."""
    return x if len(rows) == len(x) and rows[0] == 0 and rows[-1] == len(x) - 1 and _rising(rows) else x[rows]


def _rising(rows: Rows) -> bool:
    return len(rows) == 1 or bool(np.all(rows[1:] > rows[:-1]))


class Maximum(NamedTuple):
    """Coordinates (rows, k), value (rows,), and the numbers of the rows that were not done when the rounds ran out."""

    place: Array
    value: Array
    unfinished: Rows


def maximum(objective: Objective, start: Array, low: Array, high: Array, *, rounds: int = 80) -> Maximum:
    """The local maximum above each start, inside a box, by Newton steps with a line search.

    Second derivatives are differences of the gradient; directions of positive curvature are turned round, so that
    every step leads upwards. A row is done when the step taken promised less than 1e-8, which leaves about its square.

    Parameters
    ----------
    objective : value and gradient; coordinates of a size near 1
    start : shape (rows, k)
    low, high : shape (k,) or (rows, k)

    """
    count = len(start)
    low, high = (np.broadcast_to(b, start.shape) for b in (low, high))
    here = np.clip(start, low, high)
    active = np.arange(count)
    value, gradient = objective(here, active)
    for _ in range(rounds):
        step, expected = _newton_step(objective, here[active], gradient[active], low[active], high[active], active)
        moved, new_value, new_gradient = _line_search(
            objective, here[active], value[active], step, expected, low[active], high[active], active
        )
        gained = new_value - value[active]
        here[active], value[active], gradient[active] = moved, new_value, new_gradient
        active = active[(expected > _GAIN) & (gained > 0)]
        if not len(active):
            break
    return Maximum(here, value, active)


def _newton_step(
    objective: Objective, here: Array, gradient: Array, low: Array, high: Array, rows: Rows
) -> tuple[Array, Array]:
    """The step and half the gain it promises; coordinates pressed against the box stay."""
    k = here.shape[1]
    free = ~(((here <= low) & (gradient < 0)) | ((here >= high) & (gradient > 0)))
    curvature = _differences(objective, here, gradient, high, rows)
    curvature = 0.5 * (curvature + np.swapaxes(curvature, 1, 2))
    both = free[:, :, None] & free[:, None, :]
    curvature = np.where(both & np.isfinite(curvature), curvature, 0.0)
    curvature += np.where(free, 0.0, 1.0)[:, :, None] * np.eye(k)
    pull = np.where(free & np.isfinite(gradient), gradient, 0.0)
    sizes, axes = np.linalg.eigh(curvature)
    largest = np.abs(sizes).max(axis=-1, keepdims=True)
    sizes = np.maximum(np.abs(sizes), 1e-10 * largest + 1e-12)
    step = np.einsum("rij,rj->ri", axes, np.einsum("rij,ri->rj", axes, pull) / sizes)
    length = np.abs(step).max(axis=-1, keepdims=True)
    step = step * np.where(length > _LONGEST, _LONGEST / length, 1.0)
    return step, 0.5 * np.einsum("ri,ri->r", step, pull)


def _differences(objective: Objective, here: Array, gradient: Array, high: Array, rows: Rows) -> Array:
    """Minus the second derivatives, as differences of the gradient; few rows are asked for in one call."""
    count, k = here.shape
    side = np.where(here + _DIFFERENCE > high, -_DIFFERENCE, _DIFFERENCE)
    shifted = here[None] + side.T[:, :, None] * np.eye(k)[:, None, :]
    if count <= _FEW:
        _, stacked = objective(shifted.reshape(-1, k), np.tile(rows, k))
        others = stacked.reshape(k, count, k)
    else:
        others = np.stack([objective(place, rows)[1] for place in shifted])
    return np.asarray(-(others - gradient[None]).transpose(1, 2, 0) / side[:, None, :])


def _line_search(
    objective: Objective, here: Array, value: Array, step: Array, expected: Array, low: Array, high: Array, rows: Rows
) -> tuple[Array, Array, Array]:
    """The first of the halved steps that gains; where none does the row stays."""
    place, best = here.copy(), value.copy()
    _, gradient = None, np.zeros_like(here)
    pending = np.arange(len(here))
    share = 1.0
    for _ in range(25):
        trial = np.clip(here[pending] + share * step[pending], low[pending], high[pending])
        new_value, new_gradient = objective(trial, rows[pending])
        good = new_value >= value[pending] + 1e-4 * share * expected[pending]
        # close to the top the gain drowns in rounding: a step that loses nothing measurable is kept
        good |= (expected[pending] < 1e-7) & (new_value >= value[pending] - 1e-9)
        taken = pending[good]
        place[taken], best[taken], gradient[taken] = trial[good], new_value[good], new_gradient[good]
        pending = pending[~good]
        if not len(pending):
            break
        share *= 0.4
    if len(pending):
        _, gradient[pending] = objective(here[pending], rows[pending])
    return place, best, gradient


def best_start(objective: Objective, starts: Array) -> Array:
    """For each row the start with the highest value.

    Parameters
    ----------
    objective : value and gradient
    starts : shape (starts, rows, k)
    """
    count, rows, k = starts.shape
    every = np.arange(rows)
    if rows <= _FEW:
        values = objective(starts.reshape(-1, k), np.tile(every, count))[0].reshape(count, rows)
    else:
        values = np.stack([objective(start, every)[0] for start in starts])
    values = np.where(np.isfinite(values), values, -np.inf)
    chosen = np.argmax(values, axis=0)
    return np.asarray(starts[chosen, np.arange(starts.shape[1])])
