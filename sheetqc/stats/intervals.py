"""Intervals for proportions and standard deviations."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import special

from sheetqc.stats.errors import DataError


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """An estimate with the ends of its interval; an end of a one-sided interval lies at the border of what can be."""

    estimate: float
    lower: float
    upper: float


def proportion_interval(count: int, n: int, confidence: float = 0.95, sides: int = 2) -> Interval:
    """Exact interval of a proportion.

    Parameters
    ----------
    count, n : `count` of `n` had the property
    confidence : of the interval; with sides=1 of each bound on its own
    sides : 2 for an interval, 1 for a lower and an upper bound each at the confidence

    Raises
    ------
    DataError : count outside 0..n, n < 1, or a confidence outside (0, 1)

    Reference: Clopper & Pearson (1934), Biometrika 26, 404-413.
    """
    if n < 1 or not 0 <= count <= n:
        raise DataError(f"{count} of {n} is no proportion")
    tail = _tail(confidence, sides)
    lower = 0.0 if count == 0 else float(special.betaincinv(count, n - count + 1, tail))
    upper = 1.0 if count == n else float(special.betainccinv(count + 1, n - count, tail))
    return Interval(estimate=count / n, lower=lower, upper=upper)


def sigma_factors(degrees: float, confidence: float, sides: int = 2) -> tuple[float, float]:
    """Factors on s that give the lower and the upper limit of sigma.

    Parameters
    ----------
    degrees : degrees of freedom of s
    """
    tail = _tail(confidence, sides)
    return (
        float(np.sqrt(degrees / special.chdtri(degrees, tail))),
        float(np.sqrt(degrees / special.chdtri(degrees, 1 - tail))),
    )


def _tail(confidence: float, sides: int) -> float:
    if not 0 < confidence < 1:
        raise DataError(f"a confidence of {confidence} is not between 0 and 1")
    if sides not in (1, 2):
        raise DataError(f"an interval has 1 or 2 sides, not {sides}")
    return (1 - confidence) / sides
