"""Guard shapes fitted to values, and the borders of their likelihood regions."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds.border import directions
from sheetqc.stats.bounds.table import NORMAL_IQR, GuardTable, at, guard_table, place

Array = NDArray[np.float64]

FIT_ROUNDS = 25
BORDER_ROUNDS = 6


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

    Newton steps on the outer product of the scores, damped until the likelihood rises.

    Parameters
    ----------
    x : shape (n,), not all equal
    """
    table = guard_table()
    rows = np.arange(len(table.names))
    location, scale = _start(x, len(rows))
    value = log_likelihoods(table, rows, x, location, scale)
    damping = np.full(len(rows), 0.01)
    for _ in range(FIT_ROUNDS):
        gradient, matrix = _scores(table, rows, x, location, scale)
        step = _solve(matrix, gradient, damping)
        tried = location + np.clip(step[:, 0], -1.5, 1.5) * scale
        stretched = scale * np.exp(np.clip(step[:, 1], -0.7, 0.7))
        new = log_likelihoods(table, rows, x, tried, stretched)
        better = new > value
        gain = np.where(better, new - value, 0.0)
        location, scale = np.where(better, tried, location), np.where(better, stretched, scale)
        value = np.where(better, new, value)
        damping = np.clip(np.where(better, 0.3 * damping, 6 * damping), 1e-6, 1e6)
        if gain.max() < 1e-5 and damping.min() < 1:
            break
    _, matrix = _scores(table, rows, x, location, scale)
    return GuardFits(table=table, location=location, scale=scale, log_likelihood=value, axes=_axes(matrix))


def guard_border(fits: GuardFits, x: Array, rows: NDArray[np.intp], drops: Array) -> tuple[Array, Array]:
    """Locations and scales, each (shapes, directions), where the log-likelihood has fallen by the drop of the shape.

    Parameters
    ----------
    fits : of all shapes
    x : shape (n,), the values
    rows : shape (shapes,), which shapes
    drops : shape (shapes,), each above 0
    """
    steps = np.einsum("md,sed->sme", directions(2), fits.axes[rows])
    location, scale = fits.location[rows, None], fits.scale[rows, None]
    top, wanted = fits.log_likelihood[rows, None], drops[:, None]
    radius = np.broadcast_to(np.sqrt(2 * wanted), steps.shape[:2])
    inside, outside = np.zeros(steps.shape[:2]), np.full(steps.shape[:2], np.inf)
    for _ in range(BORDER_ROUNDS):
        fall = top - log_likelihoods(
            fits.table,
            rows[:, None],
            x,
            location + radius * steps[..., 0] * scale,
            scale * np.exp(radius * steps[..., 1]),
        )
        near = fall <= wanted
        inside, outside = np.where(near, radius, inside), np.where(near, outside, radius)
        guess = radius * np.clip(np.sqrt(wanted / np.maximum(fall, 1e-9)), 0.3, 2.0)
        bounded = np.isfinite(outside)
        middle = np.where(bounded, 0.5 * (inside + np.where(bounded, outside, 0.0)), 2 * radius)
        radius = np.where((guess >= inside) & (guess <= outside), guess, middle)
    return location + radius * steps[..., 0] * scale, scale * np.exp(radius * steps[..., 1])


def log_likelihoods(table: GuardTable, rows: NDArray[np.intp], x: Array, location: Array, scale: Array) -> Array:
    """Log-likelihoods of the shapes `rows` at places of the same shape."""
    cell, share = place((x - location[..., None]) / scale[..., None])
    density = at(table.log_density, rows[..., None], cell, share)
    return np.asarray(density.sum(axis=-1) - len(x) * np.log(scale))


def _start(x: Array, count: int) -> tuple[Array, Array]:
    lower, middle, upper = np.quantile(x, [0.25, 0.5, 0.75])
    spread = (upper - lower) / NORMAL_IQR
    # many equal values can have quartiles that coincide
    spread = spread if spread > 0.05 * x.std() else x.std()
    return np.full(count, middle), np.full(count, spread)


def _scores(table: GuardTable, rows: NDArray[np.intp], x: Array, location: Array, scale: Array) -> tuple[Array, Array]:
    """Gradient in (location / scale, log scale), shape (shapes, 2), and the sum of the scores' outer products."""
    z = (x - location[:, None]) / scale[:, None]
    cell, share = place(z)
    slope = at(table.slope, rows[:, None], cell, share)
    scores = np.stack([-slope, -z * slope - 1], axis=-1)
    return scores.sum(axis=1), np.einsum("sni,snj->sij", scores, scores)


def _solve(matrix: Array, gradient: Array, damping: Array) -> Array:
    a, b, d = matrix[:, 0, 0] * (1 + damping), matrix[:, 0, 1], matrix[:, 1, 1] * (1 + damping)
    determinant = np.maximum(a * d - b * b, 1e-300)
    first = (d * gradient[:, 0] - b * gradient[:, 1]) / determinant
    second = (a * gradient[:, 1] - b * gradient[:, 0]) / determinant
    return np.stack([first, second], axis=1)


def _axes(matrix: Array) -> Array:
    size, turn = np.linalg.eigh(matrix)
    size = np.maximum(size, 1e-3 * size[:, -1:])
    return np.asarray(turn / np.sqrt(size)[:, None, :])
