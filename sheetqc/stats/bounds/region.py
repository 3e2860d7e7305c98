"""What is kept of a likelihood region: quantile triples whose extreme index is its bound."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_ANGLES = np.arange(90) * np.pi / 45
DIRECTIONS = np.stack([np.cos(_ANGLES), np.sin(_ANGLES)], axis=1)


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
    """The triples that can be an extreme of an index for some limits, but for a hair's breadth.

    A one-sided index is a quotient of linear functions of (median, outer quantile): over a set of points its extremes
    lie at corners of the convex hull in these two coordinates, which are met in one direction or another.
    """
    if len(triples) < 2 * len(DIRECTIONS):
        return triples
    keep = np.zeros(len(triples), dtype=bool)
    scaled = (triples - triples.mean(axis=0)) / np.maximum(triples.std(axis=0), 1e-300)
    for pair in ([1, 2], [1, 0]):
        keep[np.argmax(scaled[:, pair] @ DIRECTIONS.T, axis=0)] = True
    return triples[keep]
