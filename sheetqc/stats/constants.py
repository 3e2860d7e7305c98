"""Control-chart constants, computed from the distribution of the range and of s in normal samples."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from scipy import special

from sheetqc.stats.errors import DataError

REACH = 9.0
"""Standard normal values beyond which nothing is integrated: the probability there is below 1e-18."""

EVEN_POINTS = 361
NODES = 120


@dataclass(frozen=True, slots=True, kw_only=True)
class ControlChartConstants:
    """Constants of control charts for subgroups of n values; the names are those of the trade."""

    n: int
    A2: float
    A3: float
    c4: float
    B3: float
    B4: float
    d2: float
    d3: float
    D3: float
    D4: float
    E2: float


@lru_cache(maxsize=256)
def control_chart_constants(n: int) -> ControlChartConstants:
    """The constants for subgroups of n values.

    Parameters
    ----------
    n : size of the subgroup, at least 2

    Raises
    ------
    DataError : when n is not a whole number of at least 2

    Reference: Tippett (1925), Biometrika 17, 364-387, for the moments of the range; factors as in ISO 7870-2.
    """
    if int(n) != n or n < 2:
        raise DataError(f"a subgroup has a whole number of at least 2 values, not {n}")
    d2, d3 = range_moments(int(n))
    c4 = c4_of(int(n))
    spread = math.sqrt(1 - c4 * c4)
    return ControlChartConstants(
        n=int(n),
        A2=3 / (d2 * math.sqrt(n)),
        A3=3 / (c4 * math.sqrt(n)),
        c4=c4,
        B3=max(0.0, 1 - 3 * spread / c4),
        B4=1 + 3 * spread / c4,
        d2=d2,
        d3=d3,
        D3=max(0.0, 1 - 3 * d3 / d2),
        D4=1 + 3 * d3 / d2,
        E2=3 / d2,
    )


def c4_of(n: float) -> float:
    """Mean of s in normal samples of n values, in units of sigma."""
    return float(np.sqrt(2 / (n - 1)) * np.exp(special.gammaln(n / 2) - special.gammaln((n - 1) / 2)))


@lru_cache(maxsize=256)
def range_moments(n: int) -> tuple[float, float]:
    """d2 and d3: mean and standard deviation of the range of n standard normal values.

    The range is at most r with probability n times the integral over x of f(x) (F(x + r) - F(x))^(n - 1); its mean is
    the integral of the probability beyond r, its second moment that of 2 r times it. The inner integrand vanishes with
    all its derivatives at both ends, which makes evenly spaced points exact; the outer one takes Gauss-Legendre nodes.
    """
    nodes, weights = np.polynomial.legendre.leggauss(NODES)
    r, weights = REACH * (nodes + 1), REACH * weights
    x = np.linspace(-REACH, REACH, EVEN_POINTS)
    density = np.exp(-0.5 * x * x) / math.sqrt(2 * math.pi)
    between = special.ndtr(x + r[:, None]) - special.ndtr(x)
    at_most = n * (x[1] - x[0]) * (between ** (n - 1) @ density)
    d2 = float(weights @ (1 - at_most))
    second = float(weights @ (2 * r * (1 - at_most)))
    return d2, math.sqrt(second - d2 * d2)


def range_constant(groups: int, n: int) -> float:
    """d2*: what the mean of so many ranges of n values is divided by, so that its square is right on average.

    Parameters
    ----------
    groups : number of ranges behind the mean
    n : values behind each range, at least 2

    Reference: Duncan (1955), Industrial Quality Control 11, 18-22, by d2*^2 = d2^2 + d3^2 / groups.
    """
    if groups < 1:
        raise DataError("a mean range needs at least one range")
    c = control_chart_constants(n)
    return math.sqrt(c.d2**2 + c.d3**2 / groups)
