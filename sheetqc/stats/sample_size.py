"""How many values it takes: for a precision, for a proof without a failure, to see a difference."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from scipy import special

from sheetqc.stats.errors import DataError
from sheetqc.stats.intervals import sigma_factors

MOST = 10_000_000
"""Sizes beyond which nobody would ask."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GroupSize:
    """Values needed in each of two groups, as solved for and rounded up."""

    exact: float
    n: int


def mean_precision_size(sigma: float, half_width: float, confidence: float = 0.95) -> int:
    """Values needed for an interval of the mean no wider than +- half_width when sigma is known.

    Raises
    ------
    DataError : sigma or half_width not above 0, confidence outside (0, 1)

    Reference: the interval of a normal mean; n = (z sigma / half_width)^2 rounded up.
    """
    _above_zero(sigma=sigma, half_width=half_width)
    _between_zero_and_one(confidence=confidence)
    z = float(special.ndtri((1 + confidence) / 2))
    return max(1, math.ceil((z * sigma / half_width) ** 2 - 1e-9))


def sigma_precision_size(excess: float, confidence: float = 0.95, sides: int = 2) -> int:
    """Smallest number of values whose upper limit of sigma is at most (1 + excess) s.

    Parameters
    ----------
    excess : e.g. 0.1 for a limit 10 per cent above s
    confidence, sides : 2 for the upper limit of an interval, 1 for a bound

    Reference: the chi-square interval of sigma.
    """
    _above_zero(excess=excess)
    return _smallest(lambda n: sigma_factors(n - 1, confidence, sides)[1] <= 1 + excess, start=2)


def success_run_size(reliability: float, confidence: float = 0.95) -> int:
    """Parts that have to pass without a failure to show a reliability.

    Reference: n = ln(1 - confidence) / ln(reliability) rounded up; a binomial with no failure.
    """
    _between_zero_and_one(reliability=reliability, confidence=confidence)
    return max(1, math.ceil(math.log1p(-confidence) / math.log(reliability) - 1e-12))


def two_mean_size(difference: float, sigma: float, alpha: float = 0.05, power: float = 0.8) -> GroupSize:
    """Values in each of two groups for a two-sided t test to see a difference of means.

    Parameters
    ----------
    difference : in the unit of sigma, either sign
    alpha, power : between 0 and 1; the power counts rejections on the side of the difference only

    Reference: the noncentral t distribution; Cohen (1988), Statistical Power Analysis.
    """
    _above_zero(difference=abs(difference), sigma=sigma)
    _between_zero_and_one(alpha=alpha, power=power)
    effect = abs(difference) / sigma

    def excess(n: float) -> float:
        degrees = 2 * n - 2
        limit = float(special.stdtrit(degrees, 1 - alpha / 2))
        return 1 - float(special.nctdtr(degrees, math.sqrt(n / 2) * effect, limit)) - power

    return _solved(excess, start=2.0)


def two_proportion_size(first: float, second: float, alpha: float = 0.05, power: float = 0.8) -> GroupSize:
    """Values in each of two groups for a two-sided test to see a difference of proportions.

    Reference: Fleiss (1981), Statistical Methods for Rates and Proportions, normal approximation without correction.
    """
    _between_zero_and_one(first=first, second=second, alpha=alpha, power=power)
    if first == second:
        raise DataError("two equal proportions cannot be told apart")
    mean = (first + second) / 2
    under_none = float(special.ndtri(1 - alpha / 2)) * math.sqrt(2 * mean * (1 - mean))
    under_some = float(special.ndtri(power)) * math.sqrt(first * (1 - first) + second * (1 - second))
    exact = ((under_none + under_some) / (first - second)) ** 2
    return GroupSize(exact=exact, n=max(2, math.ceil(exact - 1e-9)))


def _solved(excess: Callable[[float], float], start: float) -> GroupSize:
    """Where a rising function of the size crosses 0."""
    from scipy.optimize import brentq

    if excess(start) >= 0:
        return GroupSize(exact=start, n=math.ceil(start))
    high = 2 * start
    while excess(high) < 0:
        high *= 2
        if high > MOST:
            raise DataError(f"more than {MOST} values would be needed")
    exact = float(brentq(excess, high / 2, high, xtol=1e-10))
    return GroupSize(exact=exact, n=math.ceil(exact - 1e-9))


def _smallest(holds: Callable[[int], bool], start: int) -> int:
    """Smallest number for which something holds, that goes on holding for every larger one."""
    low, high = start - 1, start
    while not holds(high):
        low, high = high, 2 * high
        if high > MOST:
            raise DataError(f"more than {MOST} values would be needed")
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (low, middle) if holds(middle) else (middle, high)
    return high


def _above_zero(**named: float) -> None:
    for name, value in named.items():
        if not value > 0 or not math.isfinite(value):
            raise DataError(f"{name} is {value}, it has to be above 0")


def _between_zero_and_one(**named: float) -> None:
    for name, value in named.items():
        if not 0 < value < 1:
            raise DataError(f"{name} is {value}, it has to be between 0 and 1")
