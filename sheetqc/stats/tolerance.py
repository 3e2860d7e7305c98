"""Tolerance intervals: what holds a given share of the process with a given confidence."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import lru_cache

import numpy as np
from scipy import special

from sheetqc.stats.errors import DataError

EVEN_POINTS = 201
REACH = 8.5
"""Standard normal values beyond which nothing is integrated."""


@lru_cache(maxsize=512)
def tolerance_factor(n: int, coverage: float, confidence: float, sides: int = 2) -> float:
    """Factor k such that mean +- k s (or mean + k s) holds the share `coverage` with `confidence`, exact.

    Parameters
    ----------
    n : number of values, at least 2
    coverage, confidence : each between 0 and 1
    sides : 2 for mean +- k s, 1 for one bound

    Raises
    ------
    DataError : for anything else

    Reference: ISO 16269-6; one-sided by the noncentral t distribution (Owen 1963), two-sided by the integral of Wald &
    Wolfowitz (1946), Ann. Math. Statist. 17, 208-215, over the mean.
    """
    _check(n, coverage, confidence)
    if sides == 1:
        root = math.sqrt(n)
        return float(special.nctdtrit(n - 1, root * special.ndtri(coverage), confidence)) / root
    if sides != 2:
        raise DataError(f"a tolerance interval has 1 or 2 sides, not {sides}")
    return _bisected(lambda k: _two_sided_confidence(k, n, coverage), confidence, howe_factor(n, coverage, confidence))


def howe_factor(n: int, coverage: float, confidence: float) -> float:
    """Approximate two-sided factor; reference: Howe (1969), J. Amer. Statist. Assoc. 64, 610-620."""
    _check(n, coverage, confidence)
    z = special.ndtri((1 + coverage) / 2)
    return float(z * math.sqrt((n - 1) * (1 + 1 / n) / special.chdtri(n - 1, confidence)))


def _check(n: int, coverage: float, confidence: float) -> None:
    if n < 2 or not 0 < coverage < 1 or not 0 < confidence < 1:
        raise DataError("a tolerance factor needs at least 2 values, and a coverage and a confidence between 0 and 1")


def _two_sided_confidence(k: float, n: int, coverage: float) -> float:
    """Probability that mean +- k s holds the coverage: an integral over the standardised error of the mean."""
    z = np.linspace(0.0, REACH, EVEN_POINTS)
    half_width = _half_width(z / math.sqrt(n), coverage)
    at_least = special.chdtrc(n - 1, (n - 1) * (half_width / k) ** 2)
    # an even function with vanishing ends: evenly spaced points are exact
    weight = np.exp(-0.5 * z * z) * math.sqrt(2 / math.pi)
    weight[0] *= 0.5
    return float((z[1] - z[0]) * (weight @ at_least))


def _half_width(
    shift: np.ndarray[tuple[int], np.dtype[np.float64]], coverage: float
) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    """Half-width r with F(shift + r) - F(shift - r) = coverage, by Newton steps."""
    r = shift + special.ndtri((1 + coverage) / 2)
    for _ in range(60):
        held = special.ndtr(shift + r) - special.ndtr(shift - r)
        slope = (np.exp(-0.5 * (shift + r) ** 2) + np.exp(-0.5 * (shift - r) ** 2)) / math.sqrt(2 * math.pi)
        step = np.clip((held - coverage) / slope, -0.5, 0.5)
        r = r - step
        if np.max(np.abs(step)) < 1e-14:
            break
    return r


def _bisected(rising: Callable[[float], float], target: float, start: float) -> float:
    from scipy.optimize import brentq

    low, high = 0.5 * start, 2.0 * start
    while rising(low) > target:
        low *= 0.5
    while rising(high) < target:
        high *= 2
    return float(brentq(lambda k: rising(k) - target, low, high, xtol=1e-13, rtol=1e-13))


def distribution_free_confidence(n: int, coverage: float, rank: int = 1, sides: int = 1) -> float:
    """Confidence that the values from the rank-th smallest (to the rank-th largest) hold the share `coverage`.

    Parameters
    ----------
    n : number of values
    rank : 1 for the extreme value itself
    sides : 1 for one bound, 2 for both

    Reference: Wilks (1941), Ann. Math. Statist. 12, 91-96.
    """
    _check(max(n, 2), coverage, 0.5)
    outside = rank * sides
    if not 1 <= outside <= n:
        raise DataError(f"there is no rank {rank} among {n} values")
    return float(special.bdtr(n - outside, n, coverage))


def distribution_free_size(coverage: float, confidence: float, sides: int = 1) -> int:
    """Smallest number of values whose extremes hold the share `coverage` with `confidence` (Wilks 1941)."""
    _check(2, coverage, confidence)
    if sides not in (1, 2):
        raise DataError(f"a tolerance interval has 1 or 2 sides, not {sides}")
    n = sides + 1
    if sides == 1:
        return math.ceil(math.log1p(-confidence) / math.log(coverage) - 1e-12)
    while distribution_free_confidence(n, coverage, 1, sides) < confidence:
        n = max(n + 1, math.floor(n * 1.05))
    while distribution_free_confidence(n - 1, coverage, 1, sides) >= confidence:
        n -= 1
    return n
