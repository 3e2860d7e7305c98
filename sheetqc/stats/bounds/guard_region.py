"""What the guard shapes leave possible, tail by tail.

The bound of a one-sided index asks for one tail only, and what a shape must be guarded against differs with the tail:
each has cuts of its own, those of the lower tail being the mirror images of those of the upper one.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds.cuts import GuardCuts
from sheetqc.stats.bounds.guard import GuardFits, guard_border
from sheetqc.stats.bounds.region import extremes
from sheetqc.stats.bounds.table import GuardTable

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Guard:
    """Guard shapes in the union.

    `names` are the shapes taking part in the lower bounds. `tails` keeps, for the lower and for the upper tail, the
    points (row of the guard table, location, scale) among which the tail is heaviest and lightest.
    """

    names: tuple[str, ...]
    triples: Array
    tails: tuple[Array, Array]


def guard_union(fits: GuardFits, x: Array, cuts: GuardCuts) -> Guard:
    """The guard shapes' share of a union.

    Parameters
    ----------
    fits : of all shapes to the values
    x : shape (n,), the values
    cuts : for their number and the confidence
    """
    of_lower = cuts.of_the_lower_tail(mirror_images(fits.table))
    lower = _tail(fits, x, of_lower, -fits.table.low)
    upper = _tail(fits, x, cuts, fits.table.high)
    rows = np.unique(np.concatenate([lower.heavy[:, 0], upper.heavy[:, 0]]).astype(np.intp))
    return Guard(
        names=tuple(fits.table.names[row] for row in rows),
        triples=np.concatenate([_triples(lower, upper, -1.0), _triples(upper, lower, 1.0), _both_tails(lower, upper)]),
        tails=(np.concatenate([lower.heavy, lower.light]), np.concatenate([upper.heavy, upper.light])),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Tail:
    """Points and lengths (distance of the outer quantile from the median) of one tail; `usual` that of the fit."""

    usual: float
    heavy: Array
    heavy_lengths: Array
    light: Array
    light_lengths: Array


def mirror_images(table: GuardTable) -> NDArray[np.intp]:
    """Row of the mirror image of each shape; a symmetric one is its own."""
    row = {name: k for k, name in enumerate(table.names)}

    def image(name: str) -> int:
        other = name.removesuffix(", mirrored") if name.endswith(", mirrored") else f"{name}, mirrored"
        return row.get(other, row[name])

    return np.array([image(name) for name in table.names])


def _tail(fits: GuardFits, x: Array, cuts: GuardCuts, reach: Array) -> _Tail:
    """What is possible in one tail; `reach` is the standardised length of it, per shape.

    The fit of the likeliest shape is always among the points: no bound lies beyond it.
    """
    calibrated = np.isfinite(cuts.lower)
    likeliest = int(np.argmax(np.where(calibrated, fits.log_likelihood, -np.inf)))
    usual = float(fits.scale[likeliest] * reach[likeliest])
    fitted = np.array([[likeliest, fits.location[likeliest], fits.scale[likeliest]]])
    heavy, light = (
        np.concatenate([fitted, _border(fits, x, distance + fits.log_likelihood - best, wider=wider)])
        for distance, best, wider in (
            (cuts.lower, fits.log_likelihood[likeliest], True),
            (cuts.upper, fits.log_likelihood.max(), False),
        )
    )
    heavy_lengths, light_lengths = (p[:, 2] * reach[p[:, 0].astype(np.intp)] for p in (heavy, light))
    longer, shorter = heavy_lengths >= usual, light_lengths <= usual
    return _Tail(
        usual=usual,
        heavy=heavy[longer],
        heavy_lengths=heavy_lengths[longer],
        light=light[shorter],
        light_lengths=light_lengths[shorter],
    )


def _border(fits: GuardFits, x: Array, room: Array, *, wider: bool) -> Array:
    """Points on the borders of the shapes that have room left."""
    rows = np.flatnonzero(room > 0)
    locations, scales = guard_border(fits, x, rows, room[rows], wider=wider)
    return np.stack([np.repeat(rows, locations.shape[1]), locations.reshape(-1), scales.reshape(-1)], axis=-1)


def _triples(tail: _Tail, other: _Tail, side: float) -> Array:
    """Triples that stand for one tail.

    The other tail takes its usual length beside a heavy tail, so that it never gives the smaller index, and the
    shortest length beside a light one, so that it never hides the larger index.
    """
    parts = (
        (tail.heavy, tail.heavy_lengths, other.usual),
        (tail.light, tail.light_lengths, float(other.light_lengths.min())),
    )
    found = []
    for points, lengths, opposite in parts:
        middle = points[:, 1]
        triples = np.stack([middle - side * opposite, middle, middle + side * lengths], axis=-1)
        found.append(extremes(triples if side > 0 else triples[:, ::-1]))
    return np.concatenate(found)


def _both_tails(lower: _Tail, upper: _Tail) -> Array:
    """Triples for Pp, and for Ppk with both limits: the longest of both tails together, and the shortest.

    Whether or not they go together is not asked; the shortest are placed at the medians of both and between them.
    """
    wide = float(upper.heavy[np.argmax(upper.heavy_lengths), 1])
    ends = (lower.light[np.argmin(lower.light_lengths), 1], upper.light[np.argmin(upper.light_lengths), 1])
    places = np.array([wide, *np.linspace(*ends, 5)])
    below = np.array([lower.heavy_lengths.max(), *[lower.light_lengths.min()] * 5])
    above = np.array([upper.heavy_lengths.max(), *[upper.light_lengths.min()] * 5])
    return np.stack([places - below, places, places + above], axis=-1)
