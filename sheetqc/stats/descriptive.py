"""Moments and extremes of measured values, to the last digit that double precision can give."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.door import measured_values


@dataclass(frozen=True, slots=True, kw_only=True)
class Description:
    """Moments and extremes; `s` has divisor n - 1.

    `skewness` is G1 and `kurtosis` the excess G2, both adjusted for small samples; None where n is too small for them
    or all values are equal. `g1` and `g2` are the unadjusted ones.
    """

    n: int
    mean: float
    s: float
    median: float
    minimum: float
    maximum: float
    g1: float | None
    g2: float | None
    skewness: float | None
    kurtosis: float | None


def describe(x: ArrayLike) -> Description:
    """Moments and extremes of one row of values.

    Sums are exact (`math.fsum`), of the values and then of the powers of their deviations.

    Parameters
    ----------
    x : shape (n,), n >= 2

    Raises
    ------
    DataError : as for every statistic at the door

    Reference: Joanes & Gill (1998), The Statistician 47, 183-189, for the adjusted skewness and kurtosis.
    """
    values = measured_values(x, varying=False)
    n = len(values)
    mean = math.fsum(values) / n
    # the rounding of the mean is put right: the deviations of a perfect mean would sum to 0
    mean += math.fsum(values - mean) / n
    deviations = values - mean
    m2 = math.fsum(deviations**2) / n
    g1, g2 = (None, None) if m2 == 0 else (_standard(deviations, 3, m2), _standard(deviations, 4, m2) - 3)
    return Description(
        n=n,
        mean=mean,
        s=math.sqrt(m2 * n / (n - 1)),
        median=float(np.median(values)),
        minimum=float(values.min()),
        maximum=float(values.max()),
        g1=g1,
        g2=g2,
        skewness=None if g1 is None or n < 3 else g1 * math.sqrt(n * (n - 1)) / (n - 2),
        kurtosis=None if g2 is None or n < 4 else (n - 1) / ((n - 2) * (n - 3)) * ((n + 1) * g2 + 6),
    )


def _standard(deviations: np.ndarray[tuple[int], np.dtype[np.float64]], power: int, m2: float) -> float:
    return math.fsum((deviations / math.sqrt(m2)) ** power) / len(deviations)


def lag_one_correlation(x: ArrayLike) -> float:
    """Correlation of each value with the one before it, about the common mean.

    Parameters
    ----------
    x : shape (n,), n >= 2, not all equal, in time order
    """
    values = measured_values(x)
    deviations = values - describe(values).mean
    return math.fsum(deviations[1:] * deviations[:-1]) / math.fsum(deviations**2)
