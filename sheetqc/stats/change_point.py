"""A step in the level of a row of values: where, how large, how probable without one."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.door import measured_values


@dataclass(frozen=True, slots=True, kw_only=True)
class ChangePoint:
    """The likeliest step: after value `after` (counted from 1), of size `step` in the unit of the values.

    `statistic` is the largest standardised cumulative sum, `p_value` the probability of one as large when the level
    never moves.
    """

    after: int
    step: float
    statistic: float
    p_value: float


def change_point(x: ArrayLike) -> ChangePoint:
    """The likeliest single step in the mean of independent values.

    Parameters
    ----------
    x : shape (n,), n >= 2, not all equal, in time order

    Reference
    ---------
    Page (1955), Biometrika 42, 523-527; the limit distribution of the largest absolute bridge is Kolmogorov's
    (1933). For finite n the p-value errs on the safe side.
    """
    values = measured_values(x)
    n = len(values)
    sums = np.cumsum(values - values.mean())[:-1]
    after = int(np.argmax(np.abs(sums))) + 1
    statistic = float(np.abs(sums[after - 1]) / (values.std(ddof=1) * math.sqrt(n)))
    step = float(values[after:].mean() - values[:after].mean())
    return ChangePoint(after=after, step=step, statistic=statistic, p_value=kolmogorov_survival(statistic))


def kolmogorov_survival(statistic: float) -> float:
    """Probability that the largest absolute value of a Brownian bridge exceeds a statistic."""
    from scipy.special import kolmogorov

    return float(kolmogorov(statistic))
