"""p-values of A-squared for fitted families, from tables of upper points over size and shape."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.null_points import PROBABILITIES, SAME_AS, TABLES, points
from sheetqc.stats.shape_coordinates import COORDINATES

Array = NDArray[np.float64]

_LOGITS = np.log(np.array(PROBABILITIES)) - np.log1p(-np.array(PROBABILITIES))


def has_table(name: str) -> bool:
    """Whether the distribution of A-squared for the family is tabulated."""
    return SAME_AS.get(name, name) in TABLES


def tabulated_p_value(name: str, statistic: float, theta: tuple[float, ...], n: int) -> float:
    """Chance of A-squared at least as large when the family is right and its parameters are estimated.

    Interpolated over the fitted shape, the number of values and the statistic: log odds against log A-squared between
    the tabulated points, beyond them the last slope of the log probability, which is straight far out.

    Parameters
    ----------
    name : family with a table
    statistic : A-squared, unmodified
    theta : fitted parameters
    n : number of values; below the smallest tabulated size that one serves
    """
    table = SAME_AS.get(name, name)
    coordinates = COORDINATES[table](theta) if table == name else ()
    upper = _upper_points(table, coordinates, n)
    if statistic >= upper[-1]:
        slope = np.log(PROBABILITIES[-1] / PROBABILITIES[-3]) / (upper[-1] - upper[-3])
        return float(PROBABILITIES[-1] * np.exp(slope * (statistic - upper[-1])))
    if statistic <= 0:
        return 1.0
    x, places = np.log(statistic), np.log(upper)
    if x < places[0]:
        slope = (_LOGITS[1] - _LOGITS[0]) / (places[1] - places[0])
        logit = _LOGITS[0] + slope * (x - places[0])
    else:
        logit = np.interp(x, places, _LOGITS)
    return float(1 / (1 + np.exp(-logit)))


def critical_value(name: str, p_value: float, theta: tuple[float, ...], n: int) -> float:
    """The A-squared that is exceeded with the given chance, between 0.001 and 0.95."""
    table = SAME_AS.get(name, name)
    upper = _upper_points(table, COORDINATES[table](theta) if table == name else (), n)
    logit = np.log(p_value) - np.log1p(-p_value)
    return float(np.exp(np.interp(-logit, -_LOGITS, np.log(upper))))


def _upper_points(table: str, coordinates: tuple[float, ...], n: int) -> Array:
    """Upper points at this shape and size, shape (probabilities,)."""
    axes, sizes, logs = _table(table)
    for axis, place in zip(axes, coordinates, strict=True):
        logs = _between(np.array(axis), place, logs)
    # one over the size, turned round to increase
    by_size = _between(-1 / np.array(sizes), -1 / n, logs)
    return np.exp(by_size)


def _between(axis: Array, place: float, values: Array) -> Array:
    """Straight interpolation along the first axis, the ends held."""
    place = float(np.clip(place, axis[0], axis[-1]))
    right = int(np.clip(np.searchsorted(axis, place), 1, len(axis) - 1))
    share = (place - axis[right - 1]) / (axis[right] - axis[right - 1])
    return np.asarray((1 - share) * values[right - 1] + share * values[right])


@lru_cache(maxsize=32)
def _table(table: str) -> tuple[tuple[tuple[float, ...], ...], tuple[int, ...], Array]:
    """Values along each shape coordinate, sizes, and the logarithms of the points: coordinates x sizes x chances."""
    grid, sizes, raw = points(table)
    axes = tuple(tuple(sorted({point[i] for point in grid})) for i in range(len(grid[0])))
    logs = np.log(np.array(raw))
    return axes, sizes, logs.reshape(*(len(axis) for axis in axes), *logs.shape[1:])
