"""How often a set of rules cries wolf over a process that stands still; by seeded simulation."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np

from sheetqc.stats.stability.rules import Rule


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
    shift : of the level, in standard deviations of what is charted
    """
    rng = np.random.default_rng(seed)
    length = 4096
    z = rng.standard_normal((repetitions, length)) + shift
    broken = np.zeros((repetitions, length), dtype=bool)
    for rule in rules:
        broken |= rule(z)
    first = np.where(broken.any(axis=-1), broken.argmax(axis=-1) + 1, length)
    return float(first.mean())
