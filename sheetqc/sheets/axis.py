"""Ends of axes: they cannot be formulas, so they leave room for a limit that is moved."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

STEPS = (1.0, 2.0, 2.5, 5.0, 10.0)
ROOM = 0.08
"""Share of the range left free on each side."""

FARTHEST = 6.0
"""Ranges of the values beyond which a far limit is left out of the picture, lest it squeezes them."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Axis:
    """Ends and step of a numeric axis."""

    minimum: float
    maximum: float
    step: float

    @property
    def length(self) -> float:
        """From end to end."""
        return self.maximum - self.minimum

    @property
    def number_format(self) -> str:
        """With as many decimals as the steps need."""
        size = abs(self.step)
        decimals = max(0, -math.floor(math.log10(size) + 1e-9))
        if not math.isclose(round(size, decimals), size, rel_tol=1e-6):
            decimals += 1
        return "0" if decimals == 0 else "0." + "0" * decimals


def nice_step(length: float, pieces: int) -> float:
    """A step of 1, 2, 2.5 or 5 times a power of ten that cuts a length into about so many pieces."""
    raw = length / pieces
    power = 10.0 ** math.floor(math.log10(raw))
    return next(step * power for step in STEPS if step * power >= raw * (1 - 1e-9))


def axis_around(
    values: Sequence[float], others: Sequence[float], *, pieces: int = 6, floor: float | None = None
) -> Axis:
    """An axis that holds the values and, where they are not too far away, limits and quantiles.

    Parameters
    ----------
    values : what must be seen
    others : what should be seen
    pieces : about how many steps
    floor : where the axis begins at the lowest, such as a natural bound at 0
    """
    low, high = min(values), max(values)
    spread = (high - low) or abs(high) or 1.0
    near = [x for x in others if low - FARTHEST * spread <= x <= high + FARTHEST * spread]
    low, high = min(low, *near, low), max(high, *near, high)
    if high - low <= 0:
        low, high = low - spread / 2, high + spread / 2
    room = ROOM * (high - low)
    step = nice_step(high - low + 2 * room, pieces)
    first = math.floor((low - room) / step)
    if floor is not None and low >= floor:
        first = max(first, math.floor(floor / step + 1e-9))
    return Axis(minimum=_clean(first * step), maximum=_clean(math.ceil((high + room) / step) * step), step=_clean(step))


def _clean(value: float) -> float:
    return float(f"{value:.12g}")


def decimals_within(axis: Axis) -> int:
    """Decimals that place a point on the axis to a hundred-thousandth of its length: finer than can be drawn."""
    return 5 - math.floor(math.log10(axis.length))
