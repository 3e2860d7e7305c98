"""Calibrates the cuts of the guard shapes: `python -m tests.calibration.guard_cuts` (hours; see --repetitions).

Every guard shape, and every process of `populations.CALIBRATED` with either tail, is sampled with its upper limit at
an index of exactly 1.33. For each sample and shape the deficit is found: how far the shape, held to an index of at most
1.33, stays below the best of all shapes. "shown" is said when every deficit exceeds the cut of its shape. Starting
from one cut for all, the cut of the shape that resembles a process most is raised while the process is passed too
often: more than 5 % for the processes (5.5 % at n = 30), 6 % for the ordinary shapes, 10 % for the outlying ones and
20 % for the outermost, which no neighbour protects and whose full protection would leave next to no power.
"""

from __future__ import annotations

import argparse
import json
import time
from collections.abc import Sequence
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.bounds import table as tables
from sheetqc.stats.bounds.cuts import LEAST
from sheetqc.stats.bounds.guard import GuardFits, guard_fits, log_likelihoods
from sheetqc.stats.bounds.shapes import SHARP, SHARP_SYMMETRIC
from tests.calibration.populations import CALIBRATED, Array

INDEX = 1.33
START = 1.2
REACH = 13.0
"""Distance below the best from which a shape is not looked at."""

OUTERMOST = ("t, 3 df", "extreme values, 0.2", "lognormal, 1")
LEFT_OUT = ("log t, 0.5, 5 df", "log t, 0.5, 5 df, mirrored")
"""So long a tail hidden behind an ordinary middle that next to nothing could be shown for a skewed process."""
OUTLYING = (
    *(f"{name}, mirrored" for name in OUTERMOST if name != "t, 3 df"),
    "log t, 0.15, 5 df",
    "log t, 0.15, 5 df, mirrored",
    "log t, 0.3, 5 df",
    "log t, 0.3, 5 df, mirrored",
    "log t, 0.25, 8 df",
    "log t, 0.25, 8 df, mirrored",
    "skew t, 3, 5 df",
    "skew t, 3, 5 df, mirrored",
    "skew t, 1, 5 df",
    "skew t, 1, 5 df, mirrored",
    "skew t, 3, 8 df",
    "skew t, 3, 8 df, mirrored",
    "5 % of threefold spread",
    "soft Laplace",
    "t, 4 df",
    "extreme values, 0.1, mirrored",
    "lognormal, 0.8, mirrored",
    "lognormal, 0.65, mirrored",
)


def shapes() -> tuple[str, ...]:
    """The shapes that are calibrated: all but the sharp ones."""
    return tables.guard_table().names[: -2 * len(SHARP) - len(SHARP_SYMMETRIC)]


def deficits(x: Array, limit: float) -> Array:
    """How far each calibrated shape, held to an index of at most 1.33, stays below the best; shape (shapes,)."""
    fits, count = guard_fits(x), len(shapes())
    height = fits.log_likelihood[:count]
    weight = INDEX * fits.table.high[:count]
    free = fits.location[:count] + fits.scale[:count] * weight >= limit
    rows = np.flatnonzero(~free & (height > height.max() - REACH))
    held = np.where(free, height, height.max() - 50.0)
    held[rows] = np.minimum(_held(fits, x, limit, rows, weight[rows]), height[rows])
    return np.asarray(height.max() - held)


def _held(fits: GuardFits, x: Array, limit: float, rows: NDArray[np.intp], weight: Array) -> Array:
    """Best log-likelihood on the line location + scale * weight = limit, per row."""
    location, scale = fits.location[rows], fits.scale[rows]
    low = np.maximum((limit - location - 2 * scale) / weight, 0.3 * scale)
    high = np.maximum(np.minimum((limit - location + 2 * scale) / weight, 5 * scale), 1.3 * low)
    grid = np.linspace(np.log(low), np.log(high), 14, axis=1)
    found = np.full(len(rows), -np.inf)
    for _ in range(3):
        there = np.exp(grid)
        values = log_likelihoods(fits.table, rows[:, None], x, limit - there * weight[:, None], there)
        best = np.argmax(values, axis=1)
        found = np.maximum(found, values.max(axis=1))
        centre, step = grid[np.arange(len(rows)), best], grid[:, 1] - grid[:, 0]
        grid = np.linspace(centre - step, centre + step, 7, axis=1)
    return found


def processes(n: int, repetitions: int, seed: int) -> list[tuple[str, float, Array]]:
    """Name, tolerated error and deficits (repetitions, shapes) of every process."""
    table, found = tables.guard_table(), []
    u = np.linspace(-tables.REACH, tables.REACH, tables.COUNT)
    for k, name in enumerate(shapes()):
        rng = np.random.default_rng([seed, n, k])
        rising = np.concatenate([[True], np.diff(table.cdf[k]) > 0])
        samples = np.sinh(np.interp(rng.random((repetitions, n)), table.cdf[k][rising], u[rising]))
        tolerated = 1.0 if name in LEFT_OUT else 0.15 if name in OUTERMOST else 0.08 if name in OUTLYING else 0.055
        found.append((name, tolerated, np.array([deficits(x, INDEX * table.high[k]) for x in samples])))
    for k, population in enumerate(CALIBRATED):
        samples = population.draw(np.random.default_rng([seed, n, 1000 + k]), repetitions, n)
        tails = ((1.0, population.upper_limit(INDEX)), (-1.0, -population.lower_limit(INDEX)))
        for sign, limit in tails:
            tolerated = 0.05 if n >= 50 else 0.055
            found.append((population.name, tolerated, np.array([deficits(sign * x, limit) for x in samples])))
    return found


def raised(found: Sequence[tuple[str, float, Array]], rounds: int = 120) -> Array:
    """The cuts at which no process is passed more often than tolerated; shape (shapes,)."""
    least = np.array([LEAST if name in LEFT_OUT else START for name in shapes()])
    cuts = least.copy()
    nearest = [int(np.argmin(d.mean(axis=0))) for _, _, d in found]
    for step in range(rounds):
        move = np.full(len(cuts), -np.inf)
        for (_, tolerated, d), shape in zip(found, nearest, strict=True):
            passed = float(np.mean(np.all(d > cuts, axis=1)))
            move[shape] = max(move[shape], float(np.clip((passed - tolerated) / tolerated, -1.0, 1.5)))
        move = np.where(np.isfinite(move), np.where(move > 0, move, 0.3 * move), 0.0)
        cuts = np.maximum(least, cuts + (0.12 if step < 0.6 * rounds else 0.05) * move)
    return cuts


def main(arguments: Sequence[str] | None = None) -> None:
    """Calibrates at each size and prints the table; writes it where --into says."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--repetitions", type=int, default=250)
    parser.add_argument("--sizes", type=int, nargs="+", default=(30, 50, 125))
    parser.add_argument("--seed", type=int, default=21)
    parser.add_argument("--into", type=Path)
    chosen = parser.parse_args(arguments)
    start, columns = time.perf_counter(), []
    for n in chosen.sizes:
        columns.append(raised(processes(n, chosen.repetitions, chosen.seed)))
        print(f"{time.perf_counter() - start:.0f} s  n = {n}", flush=True)
    lower = {name: [round(float(c[k]), 2) for c in columns] for k, name in enumerate(shapes())}
    text = json.dumps({"sizes": list(chosen.sizes), "lower": lower}, indent=0)
    print(text) if chosen.into is None else chosen.into.write_text(text, encoding="utf-8")


if __name__ == "__main__":
    main()
