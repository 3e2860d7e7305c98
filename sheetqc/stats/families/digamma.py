"""Slopes of log Gamma, many at once and without loss of digits for large arguments.

Reference: Abramowitz & Stegun (1964), 6.3.5, 6.3.18, 6.4.6, 6.4.12.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_SHIFT = np.arange(12.0)
# B_2k / (2k) and B_2k: from 12 on seven terms of the series reach the last digit
_DIGAMMA = (1 / 12, -1 / 120, 1 / 252, -1 / 240, 1 / 132, -691 / 32760, 1 / 12)
_TRIGAMMA = (1 / 6, -1 / 30, 1 / 42, -1 / 30, 5 / 66, -691 / 2730, 7 / 6)


def _series(terms: tuple[float, ...], square: Array) -> Array:
    total = np.full_like(square, terms[-1])
    for term in terms[-2::-1]:
        total = term + square * total
    return total


def log_minus_digamma(a: Array) -> Array:
    """log a - psi(a) for a > 0."""
    b = a + len(_SHIFT)
    inverse = 1 / b
    far = inverse * (0.5 + inverse * _series(_DIGAMMA, inverse * inverse))
    moved = far - np.log1p(len(_SHIFT) / a) + np.add.reduce(1 / (a[..., None] + _SHIFT), axis=-1)
    inverse = 1 / a
    straight = inverse * (0.5 + inverse * _series(_DIGAMMA, inverse * inverse))
    return np.where(a > 30, straight, moved)


def trigamma(a: Array) -> Array:
    """psi'(a) for a > 0."""
    inverse = 1 / (a + len(_SHIFT))
    far = inverse * (1 + inverse * (0.5 + inverse * _series(_TRIGAMMA, inverse * inverse)))
    return np.asarray(far + np.add.reduce(1 / (a[..., None] + _SHIFT) ** 2, axis=-1))
