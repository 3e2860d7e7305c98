"""Guard shapes fitted to values, and the borders of their likelihood regions."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds.border import directions, radii
from sheetqc.stats.bounds.table import COUNT, NORMAL_IQR, REACH, GuardTable, at, guard_table, place

Array = NDArray[np.float64]

FIT_ROUNDS = 20
BORDER_ROUNDS = 5
GAIN = 1e-3
"""Gain of log-likelihood below which a search ends."""

OUT_OF_REACH = 15.0
"""Distance below the best from which no shape comes back."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GuardFits:
    """All guard shapes fitted by maximum likelihood, one entry per shape."""

    table: GuardTable
    location: Array
    scale: Array
    log_likelihood: Array
    axes: Array
    """Shape (shapes, 2, 2): columns are steps of (location / scale, log scale) that cost about half a unit."""


def guard_fits(x: Array) -> GuardFits:
    """Maximum-likelihood location and scale of every guard shape.

    Newton steps on the outer product of the scores, damped until the likelihood rises; shapes that have converged, or
    lie too far below the best to matter, leave the search.

    Parameters
    ----------
    x : shape (n,), not all equal
    """
    table = guard_table()
    location, scale, value = _start(table, np.arange(len(table.names)), x)
    damping = np.full(len(value), 0.01)
    active = np.arange(len(value))
    for _ in range(FIT_ROUNDS):
        place, size = location[active], scale[active]
        step = _solve(*_scores(table, active, x, place, size), damping[active])
        tried = place + np.clip(step[:, 0], -1.5, 1.5) * size
        stretched = size * np.exp(np.clip(step[:, 1], -0.7, 0.7))
        gain = log_likelihoods(table, active, x, tried, stretched) - value[active]
        better = gain > 0
        risen = active[better]
        location[risen], scale[risen] = tried[better], stretched[better]
        value[risen] += gain[better]
        damping[active] *= np.where(better, 0.3, 6.0)
        moving = (np.where(better, gain, 1.0) > GAIN) & (damping[active] < 1e4)
        active = active[moving & (value[active] > value.max() - OUT_OF_REACH)]
        if not len(active):
            break
    _, matrix = _scores(table, np.arange(len(value)), x, location, scale)
    return GuardFits(table=table, location=location, scale=scale, log_likelihood=value, axes=_axes(matrix))


def guard_border(
    fits: GuardFits, x: Array, rows: NDArray[np.intp], drops: Array, *, wider: bool
) -> tuple[Array, Array]:
    """Locations and scales, each (shapes, directions), where the log-likelihood has fallen by the drop of the shape.

    Only the half of the directions is taken in which the scale grows (`wider`) or shrinks.

    Parameters
    ----------
    fits : of all shapes
    x : shape (n,), the values
    rows : shape (shapes,), which shapes
    drops : shape (shapes,), each above 0
    """
    steps = np.einsum("md,sed->sme", directions(2), fits.axes[rows])
    half = np.argsort(-steps[..., 1] if wider else steps[..., 1], axis=1)[:, : steps.shape[1] // 2]
    steps = np.take_along_axis(steps, half[..., None], axis=1)
    location, scale = fits.location[rows, None], fits.scale[rows, None]

    def at_radius(radius: Array) -> tuple[Array, Array]:
        return location + radius * steps[..., 0] * scale, scale * np.exp(radius * steps[..., 1])

    def fall(radius: Array) -> Array:
        return fits.log_likelihood[rows, None] - log_likelihoods(fits.table, rows[:, None], x, *at_radius(radius))

    wanted = np.broadcast_to(drops[:, None], steps.shape[:2])
    return at_radius(radii(fall, wanted, rounds=BORDER_ROUNDS))


def log_likelihoods(table: GuardTable, rows: NDArray[np.intp], x: Array, location: Array, scale: Array) -> Array:
    """Log-likelihoods of the shapes `rows` at places of the same shape."""
    cell, share = place((x - location[..., None]) / scale[..., None])
    density = at(table.log_density, rows[..., None], cell, share)
    return np.asarray(density.sum(axis=-1) - len(x) * np.log(scale))


def _start(table: GuardTable, rows: NDArray[np.intp], x: Array) -> tuple[Array, Array, Array]:
    """The best of a few places about the median and the interquartile range, per shape: shapes with an edge need it."""
    lower, middle, upper = np.quantile(x, [0.25, 0.5, 0.75])
    spread = (upper - lower) / NORMAL_IQR
    # many equal values can have quartiles that coincide
    spread = spread if spread > 0.05 * x.std() else x.std()
    first, last = end_values(table, len(x))
    wide = (x.max() - x.min()) / (last - first)
    locations = np.repeat(middle + spread * np.array([-0.3, 0.0, 0.3]), 3) * np.ones((len(rows), 1))
    scales = np.tile(spread * np.array([0.85, 1.15, 1.6]), 3) * np.ones((len(rows), 1))
    locations = np.concatenate([locations, (x.min() - wide * first)[:, None]], axis=1)
    scales = np.concatenate([scales, wide[:, None]], axis=1)
    values = log_likelihoods(table, rows[:, None], x, locations, scales)
    best = np.argmax(values, axis=1)
    return locations[rows, best], scales[rows, best], values[rows, best]


@lru_cache(maxsize=64)
def end_values(table: GuardTable, n: int) -> tuple[Array, Array]:
    """Standardised values near which the smallest and the largest of n lie, per shape."""
    u = np.linspace(-REACH, REACH, COUNT)
    first = [np.sinh(np.interp(0.5 / n, *_rising(row, u))) for row in table.cdf]
    last = [np.sinh(np.interp(-0.5 / n, *_rising(-row, u))) for row in table.survival]
    return np.array(first), np.array(last)


def _rising(values: Array, u: Array) -> tuple[Array, Array]:
    keep = np.concatenate([[True], np.diff(values) > 0])
    return values[keep], u[keep]


def _scores(table: GuardTable, rows: NDArray[np.intp], x: Array, location: Array, scale: Array) -> tuple[Array, Array]:
    """Gradient in (location / scale, log scale), shape (shapes, 2), and the sum of the scores' outer products."""
    z = (x - location[:, None]) / scale[:, None]
    cell, share = place(z)
    slope = at(table.slope, rows[:, None], cell, share)
    scores = np.stack([-slope, -z * slope - 1], axis=-1)
    return scores.sum(axis=1), np.einsum("sni,snj->sij", scores, scores)


def _solve(gradient: Array, matrix: Array, damping: Array) -> Array:
    a, b, d = matrix[:, 0, 0] * (1 + damping), matrix[:, 0, 1], matrix[:, 1, 1] * (1 + damping)
    determinant = np.maximum(a * d - b * b, 1e-300)
    first = (d * gradient[:, 0] - b * gradient[:, 1]) / determinant
    second = (a * gradient[:, 1] - b * gradient[:, 0]) / determinant
    return np.stack([first, second], axis=1)


def _axes(matrix: Array) -> Array:
    size, turn = np.linalg.eigh(matrix)
    size = np.maximum(size, 1e-3 * size[:, -1:])
    return np.asarray(turn / np.sqrt(size)[:, None, :])
