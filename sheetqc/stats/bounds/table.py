"""Guard shapes as tables: densities and tails by interpolation, all shapes in one pass over the values.

Tables run evenly in u = arsinh(z), fine about the middle and far into the tails. Each form is standardised to median 0
and an interquartile range of 1.349, and given a floor of e^-30 in total far out, so that the search for the best place
never stands on flat ground.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds.shapes import LogDensity, guard_forms

Array = NDArray[np.float64]

REACH = 9.0
COUNT = 3601
STEP = 2 * REACH / (COUNT - 1)
TAIL = 0.00135
"""Probability beyond each of the outer quantiles of ISO 22514-2."""

NORMAL_IQR = 1.3489795


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class GuardTable:
    """Tables over u = arsinh(z), one row per shape, and the standardised outer quantiles (the median is 0)."""

    names: tuple[str, ...]
    log_density: Array
    slope: Array
    """d log density / dz."""
    cdf: Array
    survival: Array
    low: Array
    high: Array


def place(z: Array) -> tuple[NDArray[np.intp], Array]:
    """Cell and share of the way through it, for interpolation at z."""
    u = (np.arcsinh(z) + REACH) / STEP
    cell = np.clip(u, 0, COUNT - 2).astype(np.intp)
    return cell, u - cell


def at(table: Array, row: NDArray[np.intp], cell: NDArray[np.intp], share: Array) -> Array:
    """Values of a table, interpolated; beyond its ends the last cell is continued."""
    flat = table.reshape(-1)
    first = row * COUNT + cell
    start = flat[first]
    return np.asarray(start + (flat[first + 1] - start) * share)


@lru_cache(maxsize=1)
def guard_table() -> GuardTable:
    """The tables of all guard shapes; made once."""
    u = np.linspace(-REACH, REACH, COUNT)
    rows = [_row(form, u) for _, form in guard_forms()]
    log_density, cdf, survival, low, high = (np.array(column) for column in zip(*rows, strict=True))
    slope = np.gradient(log_density, u, axis=1) / np.cosh(u)
    names = tuple(name for name, _ in guard_forms())
    return GuardTable(names=names, log_density=log_density, slope=slope, cdf=cdf, survival=survival, low=low, high=high)


def _row(form: LogDensity, u: Array) -> tuple[Array, Array, Array, float, float]:
    raw, below, _ = _normalised(form(np.sinh(u)), u)
    lower, middle, upper = np.sinh(_inverse(below, u, np.array([0.25, 0.5, 0.75])))
    scale = (upper - lower) / NORMAL_IQR
    z = np.sinh(u)
    standard = np.interp(np.arcsinh(middle + scale * z), u, raw)
    density, below, above = _normalised(np.logaddexp(standard, -30 - 1.5 * np.abs(z)), u)
    low = np.sinh(_inverse(below, u, np.array([TAIL]))[0])
    high = np.sinh(_inverse(above[::-1], u[::-1], np.array([TAIL]))[0])
    return density, below, above, float(low), float(high)


def _normalised(log_density: Array, u: Array) -> tuple[Array, Array, Array]:
    """Log density of total mass 1, probability below and probability above."""
    top = float(log_density.max())
    weight = np.exp(log_density - top) * np.cosh(u)
    pieces = 0.5 * (weight[1:] + weight[:-1]) * (u[1] - u[0])
    mass = float(pieces.sum())
    below = np.concatenate([[0.0], np.cumsum(pieces)]) / mass
    above = np.concatenate([np.cumsum(pieces[::-1])[::-1], [0.0]]) / mass
    return log_density - top - np.log(mass), below, above


def _inverse(rising: Array, u: Array, p: Array) -> Array:
    keep = np.concatenate([[True], np.diff(rising) > 0])
    return np.asarray(np.interp(p, rising[keep], u[keep]))
