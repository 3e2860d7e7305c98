"""How often a set of rules cries wolf over a process that stands still; by seeded simulation."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.errors import DataError
from sheetqc.stats.stability.rules import Rule

BATCH, BLOCK = 4000, 256
LONGEST_WINDOW = 15
"""Points that the longest rule looks at."""


def false_alarm_share(rules: Sequence[Rule], points: int, *, repetitions: int = 4000, seed: int = 1) -> float:
    """Share of charts of a steady normal process, limits known, with at least one broken rule.

    Parameters
    ----------
    rules : the set in use
    points : number of points of a chart
    """
    return _share(tuple(rules), points, repetitions, seed)


@lru_cache(maxsize=64)
def _share(rules: tuple[Rule, ...], points: int, repetitions: int, seed: int) -> float:
    z = np.random.default_rng(seed).standard_normal((repetitions, points))
    broken = np.zeros(repetitions, dtype=bool)
    for rule in rules:
        broken |= rule(z).any(axis=-1)
    return float(broken.mean())


def average_run_length(rules: Sequence[Rule], *, shift: float = 0.0, repetitions: int = 2000, seed: int = 1) -> float:
    """Mean number of points until the first broken rule.

    Parameters
    ----------
    rules : the set in use, at least one
    shift : of the level, in standard deviations of what is charted

    Raises
    ------
    DataError : without a rule, nothing would ever be broken
    """
    if not rules:
        raise DataError("without a rule no chart ever signals")
    rng = np.random.default_rng(seed)
    batches = [min(BATCH, repetitions - start) for start in range(0, repetitions, BATCH)]
    return float(np.concatenate([_run_lengths(rules, count, shift, rng) for count in batches]).mean())


def _run_lengths(rules: Sequence[Rule], count: int, shift: float, rng: np.random.Generator) -> NDArray[np.int_]:
    """First broken point of so many charts, shape (count,): drawn in blocks, signalled charts dropped."""
    lengths = np.zeros(count, dtype=int)
    alive, before, done = np.arange(count), np.empty((count, 0)), 0
    while len(alive):
        z = np.concatenate([before, rng.standard_normal((len(alive), BLOCK)) + shift], axis=1)
        broken = np.zeros(z.shape, dtype=bool)
        for rule in rules:
            broken |= rule(z)
        fresh = broken[:, before.shape[1] :]
        hit = fresh.any(axis=1)
        lengths[alive[hit]] = done + fresh[hit].argmax(axis=1) + 1
        alive, before, done = alive[~hit], z[~hit][:, -LONGEST_WINDOW:], done + BLOCK
    return lengths
