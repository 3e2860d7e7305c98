"""Bands for a probability plot: between which probabilities an ordered value of the model lies.

The model's quantiles of the probabilities are the band in the unit of the values. Each ordered value of n has a
probability with a beta distribution; a band that is to hold all of them at once takes the same, higher, confidence for
each of them.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.errors import DataError

Array = NDArray[np.float64]

REPETITIONS = 4000
BLOCK = 500_000
"""Values drawn at once."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlotBand:
    """Probabilities for each ordered value, shape (n,), and the confidence each has for itself."""

    lower: Array
    upper: Array
    each: float


def pointwise_band(n: int, confidence: float = 0.95) -> PlotBand:
    """The band that holds each ordered value with the confidence, one at a time.

    Parameters
    ----------
    n : number of values
    confidence : between 0 and 1

    Raises
    ------
    DataError : for anything else

    Reference: David & Nagaraja (2003), Order Statistics: a uniform order statistic has the beta distribution (i,
    n + 1 - i).
    """
    if n < 1 or not 0 < confidence < 1:
        raise DataError("a band needs at least one value and a confidence between 0 and 1")
    i = np.arange(1, n + 1)
    tail = (1 - confidence) / 2
    lower = np.asarray(special.betaincinv(i, n + 1.0 - i, tail), dtype=float)
    upper = np.asarray(special.betainccinv(i, n + 1.0 - i, tail), dtype=float)
    lower.flags.writeable = upper.flags.writeable = False
    return PlotBand(lower=lower, upper=upper, each=confidence)


@lru_cache(maxsize=64)
def simultaneous_band(n: int, confidence: float = 0.95) -> PlotBand:
    """The band that holds all ordered values of a fully known model at once with the confidence, exact.

    Reference: Aldor-Noiman, Brown, Buja, Rolke & Stine (2013), Amer. Statist. 67, 249-260, for equal confidence of
    each value; the probability of staying within by Khmaladze & Shinjikashvili (2001), Adv. Appl. Probab. 33, 702-716.
    """
    from scipy.optimize import brentq

    band = pointwise_band(n, confidence)
    if n == 1:
        return band

    def excess(log_tail: float) -> float:
        trial = pointwise_band(n, -math.expm1(log_tail))
        return staying_probability(trial.lower, trial.upper) - confidence

    # at one n-th of the tail the band holds all by Bonferroni's inequality, at the whole tail it does not
    whole = math.log1p(-confidence)
    found = float(brentq(excess, whole - math.log(n), whole, xtol=1e-10))
    return pointwise_band(n, -math.expm1(found))


@lru_cache(maxsize=64)
def fitted_normal_band(n: int, confidence: float = 0.95, *, repetitions: int = REPETITIONS, seed: int = 1) -> PlotBand:
    """The same when mean and s of the normal model are those of the values: a fit draws the values to the line.

    By simulation; narrower than the band of a known model.

    Parameters
    ----------
    n : number of values, at least 3
    """
    if n < 3:
        raise DataError("a band about a fitted line needs at least 3 values")
    pointwise_band(n, confidence)
    rng = np.random.default_rng(seed)
    rows = max(1, BLOCK // n)
    tails = [_smallest_tails(rng, min(rows, repetitions - done), n) for done in range(0, repetitions, rows)]
    tail = float(np.quantile(np.concatenate(tails), 1 - confidence))
    return pointwise_band(n, 1 - tail)


def _smallest_tails(rng: np.random.Generator, samples: int, n: int) -> Array:
    """Of each sample the smallest two-sided tail of its ordered values under the fitted normal; shape (samples,)."""
    drawn = np.sort(rng.standard_normal((samples, n)), axis=1)
    z = (drawn - drawn.mean(axis=1, keepdims=True)) / drawn.std(axis=1, ddof=1, keepdims=True)
    i = np.arange(1, n + 1)
    below = special.betainc(i, n + 1.0 - i, special.ndtr(z))
    return np.asarray(2 * np.minimum(below, 1 - below).min(axis=1))


def staying_probability(lower: Array, upper: Array) -> float:
    """Probability that each of n ordered uniform values lies between its two ends.

    Parameters
    ----------
    lower, upper : shape (n,), not falling, between 0 and 1
    """
    n = len(lower)
    times = np.unique(np.concatenate([lower, upper, [1.0]]))
    # at each time so many values may have come, so many must have
    most, least = np.searchsorted(lower, times, side="left"), np.searchsorted(upper, times, side="right")
    state, first, before = np.ones(1), 0, 0.0
    for time, high, low in zip(times, most, np.minimum(least, n), strict=True):
        if high < low:
            return 0.0
        # given that n come in all, uniform values are the times of a Poisson process
        state = np.convolve(state, _poisson(n * (time - before), high - first))[low - first : high - first + 1]
        first, before = int(low), float(time)
    return float(state[-1] / math.exp(n * math.log(n) - n - math.lgamma(n + 1)))


def _poisson(mean: float, most: int) -> Array:
    """Probabilities of 0, 1, ..., `most` events."""
    k = np.arange(most + 1)
    return np.asarray(np.exp(special.xlogy(k, mean) - mean - special.gammaln(k + 1)))
