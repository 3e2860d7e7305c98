"""What is kept of a likelihood region: quantile triples whose extreme index is its bound."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """Parameter values (m, k) with their quantile triples (X0.135, X50, X99.865), running in step.

    One half comes from the border for the lower bound of an index, where the process is wider than the fitted one; the
    other half from the border for the upper bound, where it is narrower. The bounds are then the smallest and the
    largest index over the triples. The two borders differ because a fitted spread errs on the small side: what is to
    be believed of a larger index lies nearer to the fit than what is to be feared of a smaller one.
    """

    points: Array
    triples: Array


def region_between(fitted: Region, wider: Region, narrower: Region) -> Region:
    """The half of one border that is wider than the fitted process, and the half of the other that is narrower."""
    width = float(np.ptp(fitted.triples))
    wide, narrow = (np.ptp(region.triples, axis=1) for region in (wider, narrower))
    return Region(
        points=np.concatenate([fitted.points, wider.points[wide >= width], narrower.points[narrow <= width]]),
        triples=np.concatenate([fitted.triples, wider.triples[wide >= width], narrower.triples[narrow <= width]]),
    )


def extremes(triples: Array) -> Array:
    """The triples that can be an extreme of an index for some limits.

    A one-sided index is a quotient of linear functions of (median, outer quantile): over a set of points its extremes
    lie at corners of the convex hull in these two coordinates. Pp likewise in the two outer quantiles.
    """
    if len(triples) < 4:
        return triples
    keep = np.zeros(len(triples), dtype=bool)
    for first, second in ((1, 2), (1, 0), (0, 2)):
        keep[_corners(triples[:, [first, second]])] = True
    return triples[keep]


def _corners(points: Array) -> list[int]:
    """Indices of the corners of the convex hull of points (m, 2) (monotone chain, Andrew 1979)."""
    order = np.lexsort((points[:, 1], points[:, 0])).tolist()
    place = points.tolist()
    return list({*_chain(order, place), *_chain(order[::-1], place)})


def _chain(order: list[int], place: list[list[float]]) -> list[int]:
    chain: list[int] = []
    for index in order:
        while len(chain) > 1 and _turn(place[chain[-2]], place[chain[-1]], place[index]) <= 0:
            chain.pop()
        chain.append(index)
    return chain


def _turn(a: list[float], b: list[float], c: list[float]) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
