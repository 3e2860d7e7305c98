"""The few triples of a union that can ever be the extreme ones, so that a spreadsheet can carry them.

For an upper limit U each triple gives the index (U - X50) / (X99.865 - X50): a straight line over U. The smallest and
the largest index over all triples are the lower and the upper envelope of these lines, to which few lines contribute;
those are found exactly. The largest of the smaller of two sides is no such envelope; it is kept on a grid of pairs of
limits, and at the limits at hand.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds.index import ppk_of_triples

Array = NDArray[np.float64]

GRID = np.geomspace(0.3, 4.0, 14)
"""Distances of a limit from the middle, in multiples of the distance of the outer quantile."""


def essential_triples(triples: Array, lower: float | None, upper: float | None) -> Array:
    """The triples that bound Pp and Ppk for any limits; shape (few, 3), in the order given.

    Parameters
    ----------
    triples : shape (m, 3), quantiles (X0.135, X50, X99.865)
    lower, upper : the limits at hand
    """
    if len(triples) == 0:
        return triples
    low, middle, high = triples.T
    keep = {int(np.argmin(high - low)), int(np.argmax(high - low))}
    keep |= _enveloping(1 / (high - middle), -middle / (high - middle))
    keep |= _enveloping(-1 / (middle - low), middle / (middle - low))
    keep |= _largest_of_pairs(triples)
    index = ppk_of_triples(triples, lower, upper)
    keep |= {int(np.argmin(index)), int(np.argmax(index))}
    return triples[sorted(keep)]


def _enveloping(slope: Array, intercept: Array) -> set[int]:
    """Which lines stand somewhere lowest or somewhere highest of all: corners of the hull of (slope, intercept)."""
    order = np.lexsort((intercept, slope))
    points = [(float(slope[i]), float(intercept[i]), int(i)) for i in order]
    return _half_hull(points) | _half_hull(points[::-1])


def _half_hull(points: list[tuple[float, float, int]]) -> set[int]:
    hull: list[tuple[float, float, int]] = []
    for point in points:
        while len(hull) >= 2 and _turn(hull[-2], hull[-1], point) <= 0:
            hull.pop()
        hull.append(point)
    return {index for _, _, index in hull}


def _turn(a: tuple[float, float, int], b: tuple[float, float, int], c: tuple[float, float, int]) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])


def _largest_of_pairs(triples: Array) -> set[int]:
    low, middle, high = triples.T
    bottom, centre, top = np.median(triples, axis=0)
    uppers, lowers = centre + GRID * (top - centre), centre - GRID * (centre - bottom)
    above = (uppers[:, None] - middle) / (high - middle)
    below = (middle - lowers[:, None]) / (middle - low)
    return set(np.argmax(np.minimum(above[:, None], below), axis=-1).ravel().tolist())
