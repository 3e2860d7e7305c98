"""Control charts: points, centre and limits of single values and of subgroups, of equal or unequal sizes.

Limits stand three standard deviations of the charted statistic from its centre, by the spread within the subgroups
(Shewhart 1931; ISO 7870-2). Where the sizes differ, so do centre and limits from point to point.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.constants import control_chart_constants
from sheetqc.stats.door import SMALLEST_SPREAD, measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.within import Spread, mean_range_spread, mean_s_spread, moving_range_spread

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Track:
    """One half of a chart: arrays of shape (points,), in the unit of the values."""

    points: Array
    centre: Array
    lower: Array
    upper: Array

    @property
    def beyond(self) -> tuple[int, ...]:
        """Places of the points beyond the limits, counted from 1."""
        outside = (self.points < self.lower) | (self.points > self.upper)
        return tuple(int(i) + 1 for i in np.flatnonzero(outside))

    @property
    def standardised(self) -> Array:
        """Distance of each point from the centre, a third of the way to the limit on its side being 1.

        What the rules of `sheetqc.stats.stability` take. A lower limit cut off at 0 is no third of anything: the
        upper one stands for both.
        """
        return (self.points - self.centre) / ((self.upper - self.centre) / 3)


@dataclass(frozen=True, slots=True, kw_only=True)
class ControlChart:
    """A chart of location and of spread, and the spread within that both rest on."""

    location: Track
    spread: Track
    within: Spread
    sizes: tuple[int, ...]
    """Values behind each point of the location."""


def individuals_chart(x: ArrayLike) -> ControlChart:
    """Single values and their moving ranges; the latter have one point fewer.

    Parameters
    ----------
    x : shape (n,), n >= 2, not all equal, in time order

    Raises
    ------
    DataError : as for every statistic at the door
    """
    values = measured_values(x)
    within = moving_range_spread(values)
    ranges = np.abs(np.diff(values))
    k = control_chart_constants(2)
    mean = np.full(len(values), values.mean())
    mean_range = np.full(len(ranges), ranges.mean())
    return ControlChart(
        location=Track(points=values, centre=mean, lower=mean - 3 * within.sigma, upper=mean + 3 * within.sigma),
        spread=Track(points=ranges, centre=mean_range, lower=k.D3 * mean_range, upper=k.D4 * mean_range),
        within=within,
        sizes=(1,) * len(values),
    )


def mean_range_chart(subgroups: Sequence[ArrayLike]) -> ControlChart:
    """X-bar and R.

    Parameters
    ----------
    subgroups : each of shape (n_i,), n_i >= 2, in time order; at least two

    Raises
    ------
    DataError : fewer than two subgroups, one of fewer than two values, or no spread in any of them
    """
    rows = _rows(subgroups)
    within = mean_range_spread(rows)
    k = [control_chart_constants(len(row)) for row in rows]
    centre = within.sigma * np.array([c.d2 for c in k])
    spread = Track(
        points=np.array([np.ptp(row) for row in rows]),
        centre=centre,
        lower=centre * np.array([c.D3 for c in k]),
        upper=centre * np.array([c.D4 for c in k]),
    )
    return _chart(rows, spread, within)


def mean_s_chart(subgroups: Sequence[ArrayLike]) -> ControlChart:
    """X-bar and s; parameters and refusals are those of `mean_range_chart`."""
    rows = _rows(subgroups)
    within = mean_s_spread(rows)
    k = [control_chart_constants(len(row)) for row in rows]
    centre = within.sigma * np.array([c.c4 for c in k])
    spread = Track(
        points=np.array([row.std(ddof=1) for row in rows]),
        centre=centre,
        lower=centre * np.array([c.B3 for c in k]),
        upper=centre * np.array([c.B4 for c in k]),
    )
    return _chart(rows, spread, within)


def _chart(rows: list[Array], spread: Track, within: Spread) -> ControlChart:
    sizes = tuple(len(row) for row in rows)
    # of unequal subgroups every value counts alike, so that the centre is the mean of all values
    centre = np.full(len(rows), np.concatenate(rows).mean())
    half = 3 * within.sigma / np.sqrt(sizes)
    means = np.array([row.mean() for row in rows])
    location = Track(points=means, centre=centre, lower=centre - half, upper=centre + half)
    return ControlChart(location=location, spread=spread, within=within, sizes=sizes)


def _rows(subgroups: Sequence[ArrayLike]) -> list[Array]:
    if len(subgroups) < 2:
        raise DataError("a chart of subgroups needs at least two of them")
    rows = [measured_values(row, varying=False) for row in subgroups]
    if all(np.ptp(row) < SMALLEST_SPREAD for row in rows):
        raise DataError("no subgroup has any spread within")
    return rows
