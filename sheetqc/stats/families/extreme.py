"""Maximum likelihood for smallest values; largest values and the Weibull family are the same problem."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.families.newton import Rows, falling_root

Array = NDArray[np.float64]


def fit_smallest(y: Array) -> tuple[Array, Array]:
    """Location and scale of the distribution of smallest values.

    The scale b solves b = sum(y e^(y/b)) / sum(e^(y/b)) - mean(y), a falling function with one root; the location
    follows in closed form.

    Parameters
    ----------
    y : shape (rows, n)

    Returns
    -------
    location, scale : shape (rows,) each

    Reference: Lawless (1982), section 4.1.
    """
    top = y.max(axis=-1, keepdims=True)
    spread = y.std(axis=-1, keepdims=True)
    u = (y - top) / spread
    squares = u * u
    mean = u.mean(axis=-1)

    def equation(b: Array, rows: Rows) -> tuple[Array, Array]:
        v = u[rows]
        weight = np.exp(v * (1 / b)[:, None])
        total = np.add.reduce(weight, axis=-1)
        first = np.einsum("ij,ij->i", weight, v) / total
        second = np.einsum("ij,ij->i", weight, squares[rows]) / total
        return first - mean[rows] - b, -(second - first * first) / (b * b) - 1

    low = np.full(len(u), 1e-3)
    b = falling_root(equation, np.full(len(u), 0.78), low, -mean + 1e-3, last=1e-5)
    location = b * np.log(np.mean(np.exp(u / b[:, None]), axis=-1))
    return top[:, 0] + spread[:, 0] * location, spread[:, 0] * b
