"""Plotting positions: the probability at which an ordered value stands in a probability plot."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.errors import DataError
from sheetqc.stats.normality import filliben_medians

# (i - a) / (n + 1 - 2 a)
_OFFSETS = {"benard": 0.3, "blom": 0.375, "hazen": 0.5, "weibull": 0.0}


def plotting_positions(n: int, rule: str = "filliben") -> NDArray[np.float64]:
    """Probabilities of n ordered values, shape (n,), rising.

    Parameters
    ----------
    n : number of values
    rule : "median rank" (exact median of each order statistic), "filliben", "benard", "blom", "hazen" or "weibull"

    Raises
    ------
    DataError : for another rule, or n below 1

    Reference: Filliben (1975), Technometrics 17, 111-117; Benard & Bos-Levenbach (1953); Blom (1958); Hazen (1914);
    Weibull (1939).
    """
    if n < 1:
        raise DataError("without values there are no plotting positions")
    i = np.arange(1, n + 1)
    if rule == "median rank":
        return np.asarray(special.betaincinv(i, n - i + 1.0, 0.5))
    if rule == "filliben":
        return filliben_medians(n)
    if rule not in _OFFSETS:
        raise DataError(f"there is no rule of plotting positions named {rule!r}")
    a = _OFFSETS[rule]
    return np.asarray((i - a) / (n + 1 - 2 * a))
