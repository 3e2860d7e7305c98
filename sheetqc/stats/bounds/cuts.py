"""How far below the best a log-likelihood may lie and still count as possible.

One family known to be the right one: the likelihood-ratio cut of a one-sided bound, half the square of the normal
quantile, moved outwards for the lower bound of an index and inwards for its upper bound, since a fitted spread errs on
the small side. The move is `MOVE` / sqrt(n) on the root scale: the exact bound of the normal family by the noncentral
t distribution asks for 1.16 to 1.27 from n = 15 to 300, simulated bounds of the other families for about the same.

Several families: about the same distance, from the best of them. Nothing known: a distance of its own for each guard
shape, calibrated by simulation (`guard_cuts.json` says how) and measured from the best of all shapes.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import lru_cache
from importlib import resources

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.bounds.table import guard_table

Array = NDArray[np.float64]

MOVE = 1.2

SHARED = 0.1
"""What choosing the best of several families takes away, in log-likelihood."""

HEAVY = {"loglogistic": 0.6, "gumbel_min": 0.4, "logistic": 0.25, "gumbel_max": 0.15}
"""The same again for families that have the heaviest tail of the lists they stand in: no neighbour speaks for them."""

LEAST = 0.05
"""Smallest distance, at low confidence."""

CALIBRATED_AT = 0.95
"""Confidence for which the cuts of the guard shapes are tabulated."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Cuts:
    """Distances of log-likelihood for the lower and for the upper bound of an index."""

    lower: float
    upper: float


@dataclass(frozen=True, slots=True, kw_only=True)
class GuardCuts:
    """Per guard shape the distances from the best of all shapes; -inf where it takes no part in a lower bound."""

    lower: Array
    upper: Array

    def of_the_lower_tail(self, mirror: NDArray[np.intp]) -> GuardCuts:
        """The cuts for an index of the lower tail, from those for the upper tail of the mirror images."""
        return GuardCuts(lower=self.lower[mirror], upper=self.upper[mirror])


def family_cuts(n: int, confidence: float, parameters: int) -> Cuts:
    """The cuts for a family known to be the right one; each parameter beyond the second counts as another move."""
    quantile = float(special.ndtri(confidence))
    move = MOVE * max(1, parameters - 1) / np.sqrt(n)
    return Cuts(lower=_half_square(quantile + move), upper=_half_square(quantile - move))


def shared_cuts(n: int, confidence: float, parameters: int, name: str) -> Cuts:
    """The cuts, from the best of several families, for one of them; larger by what choosing the best takes away."""
    own = family_cuts(n, confidence, parameters)
    return Cuts(lower=own.lower + SHARED + HEAVY.get(name, 0.0), upper=own.upper + SHARED)


def guard_cuts(n: int, confidence: float) -> GuardCuts:
    """The cuts of the guard shapes, interpolated in log n; beyond the tabulated sizes the nearest one.

    Another confidence moves every cut by the difference of the likelihood-ratio cuts.
    """
    sizes, lower, upper = _tabulated()
    moved = _half_square(float(special.ndtri(confidence))) - _half_square(float(special.ndtri(CALIBRATED_AT)))
    at = np.log(np.clip(n, sizes[0], sizes[-1]))
    # sharp shapes are not tabulated
    sharp = np.full(len(guard_table().names) - len(lower), -np.inf)
    tabulated = [np.interp(at, np.log(sizes), row) + moved for row in lower]
    return GuardCuts(
        lower=np.append(np.maximum(tabulated, LEAST), sharp),
        upper=np.full(len(guard_table().names), max(float(np.interp(at, np.log(sizes), upper)) + moved, LEAST)),
    )


def _half_square(quantile: float) -> float:
    return 0.5 * max(quantile, 0.1) ** 2


@lru_cache(maxsize=1)
def _tabulated() -> tuple[Array, Array, Array]:
    """Sizes, lower cuts (shapes, sizes) in the order of the guard table, upper cut (sizes,) of all shapes."""
    text = resources.files("sheetqc.stats.bounds").joinpath("guard_cuts.json").read_text(encoding="utf-8")
    table = json.loads(text)
    by_name = table["lower"]
    rows = [by_name[name] for name in guard_table().names if name in by_name]
    return np.array(table["sizes"], dtype=float), np.array(rows, dtype=float), np.array(table["upper"], dtype=float)
