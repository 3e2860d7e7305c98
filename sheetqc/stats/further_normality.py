"""Two more tests of the normal model: the largest distance of the distribution functions, and Shapiro-Francia."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.normality import NormalityTest
from sheetqc.stats.plotting import plotting_positions

# Stephens' table of the modified statistic as polynomials up to each border, highest power first
_STEPHENS: tuple[tuple[float, tuple[float, ...]], ...] = (
    (0.302, (1.0,)),
    (0.5, (81.218052, -138.55152, 80.709644, -19.828315, 2.76773)),
    (0.9, (-32.355711, 94.029866, -97.490286, 40.662806, -4.901232)),
    (1.31, (2.423045, -12.234627, 23.186922, -19.558097, 6.198765)),
)


def lilliefors(x: ArrayLike) -> NormalityTest:
    """Largest distance between the empirical and the fitted normal distribution function.

    Parameters
    ----------
    x : shape (n,), n >= 5, in any order

    Reference: Lilliefors (1967), J. Amer. Statist. Assoc. 62, 399-402; p-value by Dallal & Wilkinson (1986), Amer.
    Statist. 40, 294-296, and above 0.1 by the modified statistic of Stephens (1974), as R's nortest has it.
    """
    values = np.sort(measured_values(x, at_least=5))
    n = len(values)
    p = special.ndtr((values - values.mean()) / values.std(ddof=1))
    i = np.arange(1, n + 1)
    d = float(max(np.max(i / n - p), np.max(p - (i - 1) / n)))
    return NormalityTest(statistic=d, p_value=_distance_p_value(d, n))


def _distance_p_value(d: float, n: int) -> float:
    scaled, size = (d, n) if n <= 100 else (d * (n / 100) ** 0.49, 100)
    p = math.exp(
        -7.01256 * scaled**2 * (size + 2.78019)
        + 2.99587 * scaled * math.sqrt(size + 2.78019)
        - 0.122119
        + 0.974598 / math.sqrt(size)
        + 1.67997 / size
    )
    if p <= 0.1:
        return p
    k = (math.sqrt(n) - 0.01 + 0.85 / math.sqrt(n)) * d
    for up_to, coefficients in _STEPHENS:
        if k <= up_to:
            return min(1.0, max(0.0, float(np.polyval(coefficients, k))))
    return 0.0


def shapiro_francia(x: ArrayLike) -> NormalityTest:
    """Squared correlation of the ordered values with Blom's normal scores.

    Parameters
    ----------
    x : shape (n,), 5 <= n <= 5000, in any order

    Reference: Shapiro & Francia (1972), J. Amer. Statist. Assoc. 67, 215-216; p-value by Royston (1993), Statistician
    42, 37-43.
    """
    values = np.sort(measured_values(x, at_least=5))
    n = len(values)
    if n > 5000:
        raise DataError(f"Shapiro-Francia is known for up to 5000 values, there are {n}")
    scores = special.ndtri(plotting_positions(n, "blom"))
    deviations = values - values.mean()
    w = min(1.0, float((scores @ deviations) ** 2 / ((scores @ scores) * (deviations @ deviations))))
    if w >= 1:
        return NormalityTest(statistic=1.0, p_value=1.0)
    u = math.log(n)
    v = math.log(u)
    mean, sd = -1.2725 + 1.0521 * (v - u), 1.0308 - 0.26758 * (v + 2 / u)
    return NormalityTest(statistic=w, p_value=float(special.ndtr(-(math.log1p(-w) - mean) / sd)))
