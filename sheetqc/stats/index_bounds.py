"""Further limits of Ppk and Cpk under the normal model, beside Bissell's."""

from __future__ import annotations

import math

import numpy as np
from scipy import special

from sheetqc.stats.errors import DataError
from sheetqc.stats.indices import Bounded

REACH = 9.0
"""Standard normal values beyond which nothing is integrated."""
NODES = 200


def kushler_hurley(index: float, n: int, confidence: float = 0.95, sides: int = 2) -> Bounded:
    """Ppk with limits that leave out the uncertainty of the mean.

    Parameters
    ----------
    index : the estimate, from s with n - 1 degrees of freedom
    n : number of values, at least 2
    confidence, sides : 2 for limits of an interval, 1 for bounds each at the confidence

    Reference: Kushler & Hurley (1992), J. Qual. Technol. 24, 188-195.
    """
    _check(n, confidence)
    half = index * float(special.ndtri(1 - (1 - confidence) / sides)) / math.sqrt(2 * n - 2)
    return Bounded(estimate=index, lower=index - half, upper=index + half)


def pearn_lin(index: float, n: int, off_centre: float, confidence: float = 0.95) -> float:
    """Exact lower bound of Cpk of two-sided limits, given how far off the middle the process stands.

    Parameters
    ----------
    index : the estimate, above 0
    n : number of values, at least 2
    off_centre : (mean - middle of the limits) / sigma, either sign; 0 gives the highest bound, for few values even one
        above the estimate, since the mean is then known to lie off by chance; from about 0.5 on it hardly changes
    confidence : of the bound

    Raises
    ------
    DataError : an index not above 0, n below 2, a confidence outside (0, 1)

    Reference: Pearn & Lin (2004), Qual. Reliab. Engng. Int. 20, 235-249.
    """
    from scipy.optimize import brentq

    _check(n, confidence)
    if not index > 0:
        raise DataError("the bound is known for an index above 0")

    def excess(true: float) -> float:
        return _probability_above(index, true, n, abs(off_centre)) - (1 - confidence)

    if excess(0.0) >= 0:
        return 0.0
    high = index + 1
    while excess(high) < 0:
        high *= 2
    return float(brentq(excess, 0.0, high, xtol=1e-12))


def _probability_above(index: float, true: float, n: int, off_centre: float) -> float:
    """Probability of an estimate above `index` when the true Cpk is `true`."""
    root = math.sqrt(n)
    top = (3 * true + off_centre) * root
    # the density of the shift of the mean vanishes beyond its peak by REACH
    low, high = max(0.0, off_centre * root - REACH), min(top, off_centre * root + REACH)
    if high <= low:
        return 0.0
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    t = low + (high - low) * (nodes + 1) / 2
    spread = special.chdtr(n - 1, (n - 1) * (top - t) ** 2 / (9 * n * index**2))
    density = np.exp(-0.5 * (t + off_centre * root) ** 2) + np.exp(-0.5 * (t - off_centre * root) ** 2)
    return float((high - low) / 2 * (weights @ (spread * density)) / math.sqrt(2 * math.pi))


def _check(n: int, confidence: float) -> None:
    if n < 2 or not 0 < confidence < 1:
        raise DataError("a bound needs at least 2 values and a confidence between 0 and 1")
