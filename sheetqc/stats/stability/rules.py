"""Rules for points of a control chart, each a function of standardised points.

A point is its distance from the centre in standard deviations of what is charted. Each rule gives the places, counted
from 1, of the last point of every window that breaks it. Comparisons are strict.

References: Western Electric (1956), Statistical Quality Control Handbook, zone tests; Nelson (1984), J. Qual. Technol.
16, 237-239; ISO 7870-2.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Points = NDArray[np.float64]
Rule = Callable[[Points], NDArray[np.bool_]]
"""Points of shape (..., n) to whether a window that breaks the rule ends there, same shape."""


def beyond_the_limits(z: Points) -> NDArray[np.bool_]:
    """One point farther than 3 standard deviations from the centre."""
    return np.abs(z) > 3


def two_of_three_beyond_two(z: Points) -> NDArray[np.bool_]:
    """Two of three points in a row, the last among them, farther than 2 on one side."""
    return _so_many_of(z > 2, 2, 3) | _so_many_of(z < -2, 2, 3)


def four_of_five_beyond_one(z: Points) -> NDArray[np.bool_]:
    """Four of five points in a row, the last among them, farther than 1 on one side."""
    return _so_many_of(z > 1, 4, 5) | _so_many_of(z < -1, 4, 5)


def eight_on_one_side(z: Points) -> NDArray[np.bool_]:
    """Eight points in a row on one side of the centre."""
    return _all_of(z > 0, 8) | _all_of(z < 0, 8)


def nine_on_one_side(z: Points) -> NDArray[np.bool_]:
    """Nine points in a row on one side of the centre."""
    return _all_of(z > 0, 9) | _all_of(z < 0, 9)


def six_rising_or_falling(z: Points) -> NDArray[np.bool_]:
    """Six points in a row, each above (or each below) the one before."""
    step = _steps(z)
    return _all_of(step > 0, 5) | _all_of(step < 0, 5)


def fourteen_up_and_down(z: Points) -> NDArray[np.bool_]:
    """Fourteen points in a row going up and down in turn."""
    step = _steps(z)
    turned = np.zeros(z.shape, dtype=bool)
    turned[..., 1:] = step[..., 1:] * step[..., :-1] < 0
    return _all_of(turned, 12)


def fifteen_near_the_centre(z: Points) -> NDArray[np.bool_]:
    """Fifteen points in a row nearer than 1 to the centre."""
    return _all_of(np.abs(z) < 1, 15)


def eight_far_from_the_centre(z: Points) -> NDArray[np.bool_]:
    """Eight points in a row farther than 1 from the centre, on either side."""
    return _all_of(np.abs(z) > 1, 8)


RULES: tuple[tuple[str, Rule], ...] = (
    ("one point beyond the limits", beyond_the_limits),
    ("two of three points beyond 2 s on one side", two_of_three_beyond_two),
    ("four of five points beyond 1 s on one side", four_of_five_beyond_one),
    ("eight points in a row on one side", eight_on_one_side),
    ("nine points in a row on one side", nine_on_one_side),
    ("six points in a row rising or falling", six_rising_or_falling),
    ("fourteen points going up and down in turn", fourteen_up_and_down),
    ("fifteen points in a row within 1 s", fifteen_near_the_centre),
    ("eight points in a row outside 1 s", eight_far_from_the_centre),
)
"""Every rule with its name in words."""


def places(z: Points, rule: Rule) -> tuple[int, ...]:
    """Places of the points, shape (n,), that end a window breaking the rule, counted from 1."""
    return tuple(int(i) + 1 for i in np.flatnonzero(rule(np.asarray(z, dtype=float))))


def _steps(z: Points) -> Points:
    """Step into each point; 0 into the first."""
    step = np.zeros(z.shape)
    step[..., 1:] = np.diff(z, axis=-1)
    return step


def _count(hit: NDArray[np.bool_], window: int) -> NDArray[np.int_]:
    """How many of the last `window` points were hit, at each point; 0 before a window is full."""
    total = np.cumsum(hit, axis=-1)
    before = np.zeros_like(total)
    before[..., window:] = total[..., :-window]
    count: NDArray[np.int_] = total - before
    count[..., : window - 1] = 0
    return count


def _so_many_of(hit: NDArray[np.bool_], many: int, window: int) -> NDArray[np.bool_]:
    return np.asarray((_count(hit, window) >= many) & hit)


def _all_of(hit: NDArray[np.bool_], window: int) -> NDArray[np.bool_]:
    return np.asarray(_count(hit, window) >= window)
