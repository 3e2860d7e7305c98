"""Johnson's system from four moments: the member that has the mean, spread, skewness and kurtosis of the values.

The form follows from where skewness and kurtosis lie against the line of the lognormal distributions: SB below, SU
above, SL on it. Each form is standardised, so that two of its parameters answer for skewness and kurtosis alone.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.descriptive import describe
from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.johnson_system import Form, Johnson

Array = NDArray[np.float64]

LINE_BAND = 1e-3
"""Distance of the kurtosis from the lognormal line, as a share, within which the form is taken for lognormal."""
CLOSE = 1e-9
"""Distance of skewness and kurtosis at which a fit is good."""


def johnson_by_moments(x: ArrayLike) -> Johnson:
    """The member of Johnson's system with the first four moments of the values (divisor n).

    Parameters
    ----------
    x : shape (n,), n >= 10

    Raises
    ------
    DataError : when no member has these moments, or left-leaning values lie on the lognormal line

    Reference: Johnson (1949), Biometrika 36, 149-176; Hill, Hill & Holder (1976), Applied Statistics 25, 180-189, fit
    the same moments; solved here to full precision.
    """
    values = measured_values(x, at_least=10)
    found = describe(values)
    sd = found.s * math.sqrt((found.n - 1) / found.n)
    return johnson_of_moments(found.mean, sd, found.g1 or 0.0, (found.g2 or 0.0) + 3)


def johnson_of_moments(mean: float, sd: float, skewness: float, kurtosis: float) -> Johnson:
    """The member of Johnson's system with given moments.

    Parameters
    ----------
    mean, sd : in the unit of the values
    skewness : third standardised moment
    kurtosis : fourth standardised moment (3 for the normal distribution)

    Raises
    ------
    DataError : when no member has these moments
    """
    if not sd > 0 or kurtosis <= 1 + skewness**2:
        raise DataError("no distribution has these moments")
    line = _lognormal_kurtosis(_omega(skewness))
    if abs(kurtosis / line - 1) <= LINE_BAND:
        return _lognormal(mean, sd, skewness)
    form: Form = "SB" if kurtosis < line else "SU"
    moments = _bounded_moments if form == "SB" else _unbounded_moments
    gamma, delta = _solved(moments, abs(skewness), kurtosis, 1.0 if form == "SB" else -1.0)
    if skewness < 0:
        gamma = -gamma
    centre, variance, _, _ = moments(gamma, delta)
    scale = sd / math.sqrt(variance)
    return Johnson(form=form, gamma=gamma, delta=delta, xi=mean - scale * centre, scale=scale)


Moments = Callable[[float, float], tuple[float, float, float, float]]
"""gamma and delta to mean, variance, skewness and kurtosis of the standardised form."""


def _unbounded_moments(gamma: float, delta: float) -> tuple[float, float, float, float]:
    """Johnson's (1949) closed form."""
    w, shift = math.exp(1 / delta**2), gamma / delta
    mean = -math.sqrt(w) * math.sinh(shift)
    variance = 0.5 * (w - 1) * (w * math.cosh(2 * shift) + 1)
    third = -0.25 * math.sqrt(w) * (w - 1) ** 2 * (w * (w + 2) * math.sinh(3 * shift) + 3 * math.sinh(shift))
    fourth = (
        (w - 1) ** 2
        / 8
        * (
            w**2 * (w**4 + 2 * w**3 + 3 * w**2 - 3) * math.cosh(4 * shift)
            + 4 * w**2 * (w + 2) * math.cosh(2 * shift)
            + 3 * (2 * w + 1)
        )
    )
    return mean, variance, third / variance**1.5, fourth / variance**2


_Z = np.linspace(-9.0, 9.0, 1801)
# evenly spaced points are exact for a smooth function that vanishes with its derivatives at both ends
_WEIGHT = np.exp(-0.5 * _Z * _Z) * (_Z[1] - _Z[0]) / math.sqrt(2 * math.pi)


def _bounded_moments(gamma: float, delta: float) -> tuple[float, float, float, float]:
    u = special.expit((_Z - gamma) / delta)
    mean = float(_WEIGHT @ u)
    away = u - mean
    variance = float(_WEIGHT @ away**2)
    return (
        mean,
        variance,
        float(_WEIGHT @ away**3) / variance**1.5,
        float(_WEIGHT @ away**4) / variance**2,
    )


def _solved(moments: Moments, skewness: float, kurtosis: float, sign: float) -> tuple[float, float]:
    """gamma and delta for a skewness of at least 0, from the nearest points of a coarse grid."""
    from scipy.optimize import root

    def gap(at: Array) -> Array:
        # gamma / delta and log delta move skewness and kurtosis at comparable rates
        delta = math.exp(min(max(float(at[1]), -3.0), 6.0))
        _, _, b1, b2 = moments(sign * float(np.clip(at[0], -8.0, 8.0)) * delta, delta)
        return np.array([b1 - skewness, b2 - kurtosis])

    grid = [np.array([shift, log_delta]) for shift in np.linspace(0, 4, 17) for log_delta in np.linspace(-1.5, 3, 19)]
    with np.errstate(all="ignore"):
        starts = sorted(grid, key=lambda at: float(np.sum(gap(at) ** 2)))[:6]
        for start in starts:
            found = root(gap, start, tol=1e-13)
            if np.max(np.abs(gap(found.x))) < CLOSE:
                delta = math.exp(float(found.x[1]))
                return sign * float(found.x[0]) * delta, delta
    raise DataError("no member of the system was found with these moments")


def _omega(skewness: float) -> float:
    """w with (w - 1) (w + 2)^2 = skewness^2, by Cardano."""
    b = 1 + skewness**2 / 2
    c: float = (b + math.sqrt(b * b - 1)) ** (1 / 3)
    return c + 1 / c - 1


def _lognormal_kurtosis(w: float) -> float:
    return w**4 + 2 * w**3 + 3 * w**2 - 3


def _lognormal(mean: float, sd: float, skewness: float) -> Johnson:
    if skewness <= 0:
        raise DataError("the values are as good as normal, or lean to the left with no bound above: use another family")
    w = _omega(skewness)
    delta = 1 / math.sqrt(math.log(w))
    stretch = sd / math.sqrt(w * (w - 1))
    return Johnson(
        form="SL", gamma=-delta * math.log(stretch), delta=delta, xi=mean - stretch * math.sqrt(w), scale=1.0
    )
