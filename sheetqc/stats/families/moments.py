"""Row moments without temporary copies."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def mean_and_sd(x: Array) -> tuple[Array, Array]:
    """Mean and standard deviation (divisor n) of each row, shape (rows, n) -> (rows,) each."""
    mean = np.add.reduce(x, axis=-1) / x.shape[-1]
    d = x - mean[:, None]
    return mean, np.sqrt(np.einsum("ij,ij->i", d, d) / x.shape[-1])


def standardised(x: Array) -> tuple[Array, Array, Array]:
    """(x - mean) / sd, mean and sd of each row, the last two of shape (rows, 1)."""
    mean = (np.add.reduce(x, axis=-1) / x.shape[-1])[:, None]
    d = x - mean
    sd = np.sqrt(np.einsum("ij,ij->i", d, d) / x.shape[-1])[:, None]
    d /= sd
    return d, mean, sd
