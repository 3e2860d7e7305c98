"""The spread within subgroups or from value to value, by every usual estimator."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.constants import c4_of, control_chart_constants
from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError

Rows = Sequence[NDArray[np.float64]]


@dataclass(frozen=True, slots=True, kw_only=True)
class Spread:
    """An estimate of sigma, with the (equivalent) degrees of freedom behind it and how it was made."""

    sigma: float
    degrees: float
    method: str


def moving_range_spread(x: ArrayLike) -> Spread:
    """Mean moving range over d2.

    Equivalent degrees of freedom from the relative variance of the mean moving range of independent normal values
    (Cryer & Ryan 1990, J. Qual. Technol. 22, 187-192, from memory; checked by simulation).
    """
    values = measured_values(x)
    n = len(values)
    ranges = np.abs(np.diff(values))
    # variance of one moving range and covariance of neighbouring ones, in units of sigma squared
    single = 2 - 4 / np.pi
    neighbours = 1 / 3 + (2 * np.sqrt(3) - 4) / np.pi
    m = n - 1
    variance = (m * single + 2 * (m - 1) * neighbours) / m**2 / (4 / np.pi)
    return Spread(
        sigma=float(ranges.mean() / control_chart_constants(2).d2),
        degrees=float(1 / (2 * variance)),
        method="mean moving range / d2",
    )


def median_moving_range_spread(x: ArrayLike) -> float:
    """Median moving range over its own d: sqrt(2) times the upper quartile of the standard normal."""
    return float(np.median(np.abs(np.diff(measured_values(x)))) / (np.sqrt(2) * special.ndtri(0.75)))


def successive_difference_spread(x: ArrayLike) -> float:
    """Root of half the mean squared successive difference (von Neumann 1941)."""
    return float(np.sqrt(np.mean(np.diff(measured_values(x)) ** 2) / 2))


def pooled_spread(rows: Rows) -> Spread:
    """Root of the pooled variance within groups."""
    degrees = sum(len(row) - 1 for row in rows)
    if degrees < 1:
        raise DataError("no subgroup has more than one value")
    squares = sum(float(np.sum((row - row.mean()) ** 2)) for row in rows)
    return Spread(sigma=float(np.sqrt(squares / degrees)), degrees=float(degrees), method="pooled s")


def mean_range_spread(rows: Rows) -> Spread:
    """Mean of range over d2 of each group, weighted by the group's precision; R-bar/d2 for equal sizes.

    Equivalent degrees of freedom from the relative variance of the mean range.
    """
    constants = [control_chart_constants(len(row)) for row in rows if len(row) > 1]
    if not constants:
        raise DataError("no subgroup has more than one value")
    ranges = np.array([np.ptp(row) for row in rows if len(row) > 1])
    d2, d3 = np.array([c.d2 for c in constants]), np.array([c.d3 for c in constants])
    weights = (d2 / d3) ** 2
    return Spread(
        sigma=float(np.sum(weights * ranges / d2) / weights.sum()),
        degrees=float(weights.sum() / 2),
        method="R-bar / d2",
    )


def mean_s_spread(rows: Rows) -> Spread:
    """Mean of s over c4 of each group, weighted by the group's precision; s-bar/c4 for equal sizes."""
    sizes = np.array([len(row) for row in rows if len(row) > 1])
    if not len(sizes):
        raise DataError("no subgroup has more than one value")
    s = np.array([row.std(ddof=1) for row in rows if len(row) > 1])
    c4 = np.array([c4_of(size) for size in sizes])
    weights = c4**2 / (1 - c4**2)
    return Spread(
        sigma=float(np.sum(weights * s / c4) / weights.sum()),
        degrees=float(weights.sum() / 2),
        method="s-bar / c4",
    )
