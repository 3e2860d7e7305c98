"""Do values in time order know of each other: runs, trend, resemblance of neighbours."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError


@dataclass(frozen=True, slots=True, kw_only=True)
class Runs:
    """Runs about the median; `statistic` is the number of runs, `p_value` two-sided and exact."""

    statistic: int
    p_value: float
    above: int
    below: int
    expected: float
    sd: float
    z: float
    p_at_most: float
    """Probability of so few runs or fewer."""
    p_at_least: float
    """Probability of so many runs or more."""
    p_normal: float
    """Two-sided, by the normal approximation without a correction for continuity."""


def runs_test(x: ArrayLike) -> Runs:
    """Runs about the median; values equal to the median are dropped.

    Parameters
    ----------
    x : shape (n,), in time order

    Raises
    ------
    DataError : when nothing lies on one of the sides of the median

    Reference: Wald & Wolfowitz (1940), Ann. Math. Statist. 11, 147-162.
    """
    values = measured_values(x)
    kept = values[values != np.median(values)]
    high = kept > np.median(values)
    above, below = int(high.sum()), int((~high).sum())
    if above == 0 or below == 0:
        raise DataError("all values that differ from the median lie on one side of it")
    runs = 1 + int(np.sum(high[1:] != high[:-1]))
    total = above + below
    expected = 1 + 2 * above * below / total
    variance = 2 * above * below * (2 * above * below - total) / (total**2 * (total - 1))
    z = (runs - expected) / math.sqrt(variance) if variance > 0 else 0.0
    few, many = runs_probability_at_most(runs, above, below), runs_probability_at_least(runs, above, below)
    return Runs(
        statistic=runs,
        p_value=min(1.0, 2 * min(few, many)),
        above=above,
        below=below,
        expected=expected,
        sd=math.sqrt(variance),
        z=z,
        p_at_most=few,
        p_at_least=many,
        p_normal=float(2 * special.ndtr(-abs(z))),
    )


def runs_probability_at_most(runs: int, above: int, below: int) -> float:
    """Probability of at most so many runs of two kinds in random order (exact).

    Reference: Wald & Wolfowitz (1940).
    """
    return min(1.0, math.fsum(_exactly(r, above, below) for r in range(2, runs + 1)))


def runs_probability_at_least(runs: int, above: int, below: int) -> float:
    """Probability of at least so many runs, summed from its own end, which keeps the digits of a small one."""
    most = 2 * min(above, below) + 1
    return min(1.0, math.fsum(_exactly(r, above, below) for r in range(max(runs, 2), most + 1)))


def _exactly(runs: int, above: int, below: int) -> float:
    half, odd = divmod(runs, 2)
    ways = _log_choose(above + below, above)
    if not odd:
        return 2 * math.exp(_log_choose(above - 1, half - 1) + _log_choose(below - 1, half - 1) - ways)
    return math.exp(_log_choose(above - 1, half) + _log_choose(below - 1, half - 1) - ways) + math.exp(
        _log_choose(above - 1, half - 1) + _log_choose(below - 1, half) - ways
    )


def _log_choose(n: int, k: int) -> float:
    if k < 0 or k > n:
        return -math.inf
    return math.lgamma(n + 1) - math.lgamma(k + 1) - math.lgamma(n - k + 1)


@dataclass(frozen=True, slots=True, kw_only=True)
class RunsUpDown:
    """Runs up and down; `statistic` is their number among `n` values left after ties are dropped.

    `p_value` is two-sided.
    """

    statistic: int
    p_value: float
    n: int
    expected: float
    sd: float
    z: float
    p_at_most: float
    p_at_least: float


def runs_up_and_down(x: ArrayLike) -> RunsUpDown:
    """Runs up and down; steps between equal neighbours are dropped.

    Reference: Levene & Wolfowitz (1944), Ann. Math. Statist. 15, 58-69; exact for up to 60 values, normal above.
    """
    steps = np.diff(measured_values(x))
    steps = steps[steps != 0]
    n = len(steps) + 1
    runs = 1 + int(np.sum((steps[1:] > 0) != (steps[:-1] > 0)))
    expected, sd = (2 * n - 1) / 3, math.sqrt((16 * n - 29) / 90)
    z = (runs - expected) / sd
    if n <= 60:
        share = _runs_up_and_down_shares(n)
        few, many = min(1.0, math.fsum(share[:runs])), min(1.0, math.fsum(share[runs - 1 :]))
    else:
        few, many = float(special.ndtr(z + 0.5 / sd)), float(special.ndtr(0.5 / sd - z))
    p = min(1.0, 2 * min(few, many))
    return RunsUpDown(statistic=runs, p_value=p, n=n, expected=expected, sd=sd, z=z, p_at_most=few, p_at_least=many)


def runs_up_and_down_cdf(n: int) -> NDArray[np.float64]:
    """Probability of at most 1, 2, ..., n - 1 runs up and down in n values in random order; shape (n - 1,)."""
    return np.asarray(np.minimum(np.cumsum(_runs_up_and_down_shares(n)), 1.0))


def _runs_up_and_down_shares(n: int) -> NDArray[np.float64]:
    """Probability of exactly so many.

    By the recurrence of Andre (1884) for the number of permutations of n with r runs:
    P(n, r) = r P(n-1, r) + 2 P(n-1, r-1) + (n - r) P(n-1, r-2), here divided by n at each step.
    """
    share = np.array([1.0])
    for size in range(3, n + 1):
        r = np.arange(1, size)
        before = np.concatenate([share, [0.0]])
        one_less = np.concatenate([[0.0], share])
        two_less = np.concatenate([[0.0, 0.0], share[:-1]]) if size > 3 else np.zeros(2)
        share = (r * before + 2 * one_less + (size - r) * two_less) / size
    return share


@dataclass(frozen=True, slots=True, kw_only=True)
class Trend:
    """A straight line over the order of the values; `statistic` is t, infinite for values on a perfect line."""

    slope: float
    """Unit of the values per value."""
    statistic: float
    p_value: float


def linear_trend(x: ArrayLike) -> Trend:
    """Least-squares slope over the order, with its two-sided t-test.

    Parameters
    ----------
    x : shape (n,), n >= 3
    """
    values = measured_values(x, at_least=3)
    n = len(values)
    order = np.arange(n) - (n - 1) / 2
    slope = float(order @ values / (order @ order))
    rest = values - values.mean() - slope * order
    variance = float(rest @ rest) / (n - 2) / float(order @ order)
    if variance <= 1e-28 * slope * slope:
        return Trend(slope=slope, statistic=math.copysign(math.inf, slope), p_value=0.0)
    t = slope / math.sqrt(variance)
    return Trend(slope=slope, statistic=t, p_value=float(2 * special.stdtr(n - 2, -abs(t))))


@dataclass(frozen=True, slots=True, kw_only=True)
class SuccessiveDifferences:
    """Ratio of the mean squared successive difference to the variance (2 for independent values).

    `p_value` is that of so small a ratio or a smaller one: neighbours resemble each other.
    """

    statistic: float
    p_value: float


def von_neumann(x: ArrayLike) -> SuccessiveDifferences:
    """Ratio of mean squared successive difference and variance.

    Parameters
    ----------
    x : shape (n,), n >= 4, not all equal, in time order

    Reference: von Neumann (1941), Ann. Math. Statist. 12, 367-395; the p-value by the beta distribution with the exact
    first two moments of the ratio for normal values, as Bartels (1982) uses it for ranks.
    """
    values = measured_values(x, at_least=4)
    n = len(values)
    deviations = values - values.mean()
    ratio = float(np.sum(np.diff(values) ** 2) / np.sum(deviations**2))
    # the ratio lies between 0 and 4; mean 2, variance 4 (n - 2) / (n^2 - 1)
    variance = 4 * (n - 2) / (n * n - 1)
    a = 2 / variance - 0.5
    return SuccessiveDifferences(statistic=ratio * n / (n - 1), p_value=float(special.betainc(a, a, ratio / 4)))


def rank_von_neumann(x: ArrayLike) -> SuccessiveDifferences:
    """The same of the ranks, which a few wild values or a skewed shape do not move; ties share their ranks.

    Parameters
    ----------
    x : shape (n,), n >= 10, not all equal, in time order

    Reference: Bartels (1982), J. Amer. Statist. Assoc. 77, 40-46, with his beta approximation.
    """
    values = measured_values(x, at_least=10)
    n = len(values)
    _, place, count = np.unique(values, return_inverse=True, return_counts=True)
    ranks = (np.cumsum(count) - (count - 1) / 2)[place]
    deviations = ranks - ranks.mean()
    ratio = float(np.sum(np.diff(ranks) ** 2) / np.sum(deviations**2))
    a = 5 * n * (n + 1) * (n - 1) ** 2 / (2 * (n - 2) * (5 * n * n - 2 * n - 9)) - 0.5
    return SuccessiveDifferences(statistic=ratio, p_value=float(special.betainc(a, a, ratio / 4)))


def effective_count(n: int, correlation: float) -> float:
    """Number of independent values that tell as much of the mean as n with that lag-1 correlation.

    Reference: Bayley & Hammersley (1946), for a first-order autoregressive process.
    """
    rho = min(max(correlation, -0.99), 0.99)
    lags = np.arange(1, n)
    return float(n / (1 + 2 * np.sum((1 - lags / n) * rho**lags)))
