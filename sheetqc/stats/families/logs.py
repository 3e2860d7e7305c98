"""Logarithms of differences without loss of digits."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_HALF = float(np.log(2.0))


def log_one_minus_exp(t: Array) -> Array:
    """log(1 - e^-t) for t >= 0; -inf at 0.

    Reference: Maechler (2012), accurately computing log(1 - exp(-|a|)).
    """
    return np.where(t < _HALF, np.log(-np.expm1(-t)), np.log1p(-np.exp(-t)))


def log_difference(a: Array, b: Array) -> Array:
    """log(e^a - e^b) for a >= b; -inf where they are equal."""
    gap = np.where(b == -np.inf, np.inf, a - b)
    return np.where(a == -np.inf, -np.inf, a + log_one_minus_exp(gap))
