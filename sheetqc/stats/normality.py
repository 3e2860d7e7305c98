"""Tests of the normal model beside Anderson-Darling: Shapiro-Wilk and the correlation of the probability plot."""

from __future__ import annotations

import json
import math
from dataclasses import dataclass
from functools import cache
from importlib import resources

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_rows, measured_values
from sheetqc.stats.errors import DataError

Array = NDArray[np.float64]

MOST_FOR_SHAPIRO_WILK = 5000
"""Number of values up to which the distribution of W is known (Royston 1995)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class NormalityTest:
    """A statistic and the probability of one as extreme when the values are normal."""

    statistic: float
    p_value: float


@dataclass(frozen=True, slots=True, kw_only=True)
class NormalityTests:
    """The same of many samples, in step."""

    statistic: Array
    p_value: Array


def shapiro_wilk(x: ArrayLike) -> NormalityTest:
    """Shapiro and Wilk's W.

    Parameters
    ----------
    x : shape (n,), 3 <= n <= 5000, in any order

    Raises
    ------
    DataError : outside these sizes, or as for every statistic at the door

    Reference: Royston (1995), Applied Statistics 44, 547-551 (algorithm AS R94).
    """
    found = shapiro_wilk_rows(measured_values(x, at_least=3))
    return NormalityTest(statistic=float(found.statistic), p_value=float(found.p_value))


def shapiro_wilk_rows(x: ArrayLike) -> NormalityTests:
    """W of many samples of one size at once.

    Parameters
    ----------
    x : shape (..., n), 3 <= n <= 5000, each row in any order

    Returns
    -------
    NormalityTests : arrays of shape (...)

    Raises
    ------
    DataError : outside these sizes, or when the door refuses a row
    """
    values = np.sort(measured_rows(x, at_least=3), axis=-1)
    n = values.shape[-1]
    if n > MOST_FOR_SHAPIRO_WILK:
        raise DataError(f"Shapiro-Wilk is known for up to {MOST_FOR_SHAPIRO_WILK} values, there are {n}")
    deviations = values - values.mean(axis=-1, keepdims=True)
    squares = np.einsum("...i,...i->...", deviations, deviations)
    w = np.minimum(1.0, (deviations @ shapiro_wilk_weights(n)) ** 2 / squares)
    return NormalityTests(statistic=w, p_value=_w_p_value(w, n))


def shapiro_wilk_weights(n: int) -> Array:
    """Royston's weights for the ordered values, antisymmetric and of unit length; shape (n,)."""
    if n == 3:
        return np.array([-math.sqrt(0.5), 0.0, math.sqrt(0.5)])
    m = special.ndtri((np.arange(1, n + 1) - 0.375) / (n + 0.25))
    square, u = float(m @ m), 1 / math.sqrt(n)
    last = np.polyval([-2.706056, 4.434685, -2.07119, -0.147981, 0.221157, m[-1] / math.sqrt(square)], u)
    if n <= 5:
        scale = math.sqrt((square - 2 * m[-1] ** 2) / (1 - 2 * last**2))
        return np.concatenate([[-last], m[1:-1] / scale, [last]])
    next_to_last = np.polyval([-3.582633, 5.682633, -1.752461, -0.293762, 0.042981, m[-2] / math.sqrt(square)], u)
    scale = math.sqrt((square - 2 * m[-1] ** 2 - 2 * m[-2] ** 2) / (1 - 2 * last**2 - 2 * next_to_last**2))
    return np.concatenate([[-last, -next_to_last], m[2:-2] / scale, [next_to_last, last]])


def _w_p_value(w: Array, n: int) -> Array:
    if n == 3:
        return np.maximum(0.0, 6 / math.pi * (np.arcsin(np.sqrt(w)) - math.asin(math.sqrt(0.75))))
    # a W of 1 has the probability 1
    y = np.log1p(-np.minimum(w, 1 - 1e-16))
    impossible = np.zeros(np.shape(w), dtype=bool)
    if n <= 11:
        gamma = 0.459 * n - 2.273
        impossible = np.asarray(y >= gamma)
        y = -np.log(np.where(impossible, 1.0, gamma - y))
        mean = np.polyval([-6.714e-4, 0.025054, -0.39978, 0.544], n)
        sd = math.exp(np.polyval([-0.0020322, 0.062767, -0.77857, 1.3822], n))
    else:
        log_n = math.log(n)
        mean = np.polyval([0.0038915, -0.083751, -0.31082, -1.5861], log_n)
        sd = math.exp(np.polyval([0.0030302, -0.082676, -0.4803], log_n))
    p = np.where(w >= 1, 1.0, special.ndtr(-(y - mean) / sd))
    return np.asarray(np.where(impossible, 1e-99, p))


def filliben_medians(n: int) -> Array:
    """Medians of uniform order statistics, shape (n,).

    Reference: Filliben (1975), Technometrics 17, 111-117.
    """
    medians = (np.arange(1, n + 1) - 0.3175) / (n + 0.365)
    medians[-1] = 0.5 ** (1 / n)
    medians[0] = 1 - medians[-1]
    return np.asarray(medians)


def ppcc(x: ArrayLike) -> NormalityTest:
    """Correlation of the normal probability plot.

    Parameters
    ----------
    x : shape (n,), n >= 3, in any order

    Reference: Filliben (1975); the p-value from a simulated table (`ppcc_table.json`, which says how it was made),
    interpolated in the logarithms of n and of 1 - r.
    """
    values = np.sort(measured_values(x, at_least=3))
    r = plot_correlation(values)
    return NormalityTest(statistic=r, p_value=ppcc_p_value(r, len(values)))


def plot_correlation(ordered: Array) -> float:
    """Correlation of ordered values, shape (n,), with the normal scores of Filliben's medians."""
    scores = special.ndtri(filliben_medians(len(ordered)))
    deviations = ordered - ordered.mean()
    return float(min(1.0, scores @ deviations / math.sqrt((scores @ scores) * (deviations @ deviations))))


def ppcc_p_value(r: float, n: int) -> float:
    """Probability of so small a correlation or a smaller one in n normal values."""
    counts, probabilities, table = _ppcc_table()
    row = np.array([np.interp(math.log(n), counts, column) for column in table.T])
    # the normal quantile of p runs nearly straight over log(1 - r), so that both ends can be continued
    y, z = math.log(max(1 - r, 1e-15)), special.ndtri(probabilities)
    if y > row[0]:
        z_at = z[0] + (y - row[0]) * (z[1] - z[0]) / (row[1] - row[0])
    elif y < row[-1]:
        z_at = z[-1] + (y - row[-1]) * (z[-1] - z[-2]) / (row[-1] - row[-2])
    else:
        z_at = float(np.interp(-y, -row, z))
    return float(special.ndtr(z_at))


@cache
def _ppcc_table() -> tuple[Array, Array, Array]:
    """Logarithms of n, probabilities in rising order, and log(1 - r) at each (n, probability)."""
    data = json.loads(resources.files("sheetqc.stats").joinpath("ppcc_table.json").read_text(encoding="utf-8"))
    return np.log(np.array(data["n"], dtype=float)), np.array(data["probability"]), np.array(data["log_one_minus_r"])
