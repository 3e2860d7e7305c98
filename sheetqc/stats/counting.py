"""Counts: limits of a Poisson mean, dispersion, ordered categories, limits of a chart of counts."""

from __future__ import annotations

import math
from collections.abc import Hashable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.intervals import Interval


@dataclass(frozen=True, slots=True, kw_only=True)
class Dispersion:
    """Are counts as even as a Poisson process makes them; `statistic` is chi-square with `degrees` of freedom."""

    statistic: float
    p_value: float
    """Probability of counts as uneven or more so."""
    p_even: float
    """Probability of counts as even or more so."""
    degrees: int
    mean: float
    index: float
    """Variance over mean; 1 for a Poisson process."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Ordered:
    """Categories by falling count; the tuples run in step, shares add up to 1."""

    categories: tuple[Hashable, ...]
    counts: tuple[int, ...]
    shares: tuple[float, ...]
    cumulative: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class CountLimits:
    """Centre line and three-sigma limits of a chart of counts."""

    centre: float
    lower: float
    upper: float


def poisson_interval(count: int, confidence: float = 0.95, sides: int = 2) -> Interval:
    """Exact interval of the mean behind one Poisson count.

    Parameters
    ----------
    count : what was counted; the sum, for several counts (divide the ends by their number)
    confidence : of the interval; with sides=1 of each bound on its own
    sides : 2 for an interval, 1 for a lower and an upper bound each at the confidence

    Raises
    ------
    DataError : for a count that is no whole number of at least 0, or a confidence outside (0, 1)

    Reference: Garwood (1936), Biometrika 28, 437-442.
    """
    whole = int(whole_counts([count], at_least=1)[0])
    if not 0 < confidence < 1 or sides not in (1, 2):
        raise DataError("an interval has a confidence between 0 and 1, and 1 or 2 sides")
    tail = (1 - confidence) / sides
    lower = 0.0 if whole == 0 else float(special.gammaincinv(whole, tail))
    return Interval(estimate=float(whole), lower=lower, upper=float(special.gammainccinv(whole + 1, tail)))


def dispersion_test(counts: ArrayLike, sizes: ArrayLike | None = None) -> Dispersion:
    """Fisher's test of the dispersion of counts.

    Parameters
    ----------
    counts : shape (n,), n >= 2, whole numbers
    sizes : shape (n,), how much was inspected for each count; alike when None

    Raises
    ------
    DataError : for counts that are no whole numbers of at least 0, no counts at all, or sizes not above 0

    Reference: Fisher (1925), Statistical Methods for Research Workers, section 16.
    """
    x = whole_counts(counts)
    area = np.ones(len(x)) if sizes is None else measured_values(sizes, varying=False)
    if len(area) != len(x) or area.min() <= 0:
        raise DataError("each count needs a size above 0")
    if x.sum() == 0:
        raise DataError("nothing was counted")
    expected = x.sum() / area.sum() * area
    statistic, degrees = float(np.sum((x - expected) ** 2 / expected)), len(x) - 1
    return Dispersion(
        statistic=statistic,
        p_value=float(special.chdtrc(degrees, statistic)),
        p_even=float(special.chdtr(degrees, statistic)),
        degrees=degrees,
        mean=float(x.mean()),
        index=statistic / degrees,
    )


def pareto(categories: Sequence[Hashable], counts: ArrayLike) -> Ordered:
    """Categories by falling count, with shares and running shares.

    A category that occurs several times is added up; equal counts keep the order in which they came.

    Parameters
    ----------
    categories, counts : in step

    Raises
    ------
    DataError : different lengths, counts that are no whole numbers of at least 0, or nothing counted

    Reference: Juran (1951), Quality Control Handbook, from memory.
    """
    x = whole_counts(counts, at_least=1)
    if len(categories) != len(x):
        raise DataError(f"there are {len(categories)} categories for {len(x)} counts")
    if x.sum() == 0:
        raise DataError("nothing was counted")
    sums: dict[Hashable, int] = {}
    for category, count in zip(categories, x, strict=True):
        sums[category] = sums.get(category, 0) + int(count)
    order = sorted(sums, key=lambda category: -sums[category])
    sorted_counts = [sums[category] for category in order]
    total = sum(sorted_counts)
    return Ordered(
        categories=tuple(order),
        counts=tuple(sorted_counts),
        shares=tuple(count / total for count in sorted_counts),
        cumulative=tuple(float(part) / total for part in np.cumsum(sorted_counts)),
    )


def c_chart_limits(counts: ArrayLike) -> CountLimits:
    """Limits of a chart of counts from inspections of one size; the lower one is never below 0.

    Parameters
    ----------
    counts : shape (n,), n >= 2, whole numbers

    Reference: Shewhart (1931); ISO 7870-2.
    """
    centre = float(whole_counts(counts).mean())
    half = 3 * math.sqrt(centre)
    return CountLimits(centre=centre, lower=max(0.0, centre - half), upper=centre + half)


def whole_counts(counts: ArrayLike, at_least: int = 2) -> NDArray[np.float64]:
    """Counts as an array of shape (n,).

    Raises
    ------
    DataError : for anything that is no whole number of at least 0, or too few of them
    """
    x = measured_values(counts, at_least=at_least, varying=False)
    if x.min() < 0 or np.any(x != np.round(x)):
        raise DataError("a count is a whole number of at least 0")
    return x
