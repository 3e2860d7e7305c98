"""Intervals for sums and differences of mean squares: variance components and what is made of them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations

from scipy import special


@dataclass(frozen=True, slots=True, kw_only=True)
class Term:
    """A mean square with its degrees of freedom and the (signed) coefficient it stands with."""

    coefficient: float
    mean_square: float
    degrees: int


def combination(terms: Sequence[Term]) -> float:
    """The estimate: the sum of the mean squares, each with its coefficient."""
    return math.fsum(term.coefficient * term.mean_square for term in terms)


def large_sample_limits(terms: Sequence[Term], confidence: float) -> tuple[float, float]:
    """Limits of a combination of expected mean squares, neither below 0.

    Exact for one term; for several the modified large-sample limits, which are exact wherever all but one of them
    vanish.

    Parameters
    ----------
    terms : independent mean squares of normal values
    confidence : of the two-sided interval

    Reference: Graybill & Wang (1980), J. Amer. Statist. Assoc. 75, 869-873, for sums; Ting, Burdick, Graybill,
    Jeyaratnam & Lu (1990), J. Statist. Comput. Simul. 35, 135-143, with differences.
    """
    tail = (1 - confidence) / 2
    plus = [term for term in terms if term.coefficient > 0]
    minus = [term for term in terms if term.coefficient < 0]
    estimate = combination(terms)
    below = _squared_reach(plus, minus, tail)
    above = _squared_reach_up(plus, minus, tail)
    return max(0.0, estimate - math.sqrt(max(below, 0.0))), max(0.0, estimate + math.sqrt(max(above, 0.0)))


def _squared_reach(plus: list[Term], minus: list[Term], tail: float) -> float:
    total = math.fsum((_shrink(t, tail) * _size(t)) ** 2 for t in plus)
    total += math.fsum((_grow(t, tail) * _size(t)) ** 2 for t in minus)
    for q in plus:
        for r in minus:
            f = _upper_f(tail, q.degrees, r.degrees)
            mixed = ((f - 1) ** 2 - (_shrink(q, tail) * f) ** 2 - _grow(r, tail) ** 2) / f
            total += mixed * _size(q) * _size(r)
    return total + (_like_pairs(plus, tail) if minus else 0.0)


def _squared_reach_up(plus: list[Term], minus: list[Term], tail: float) -> float:
    total = math.fsum((_grow(t, tail) * _size(t)) ** 2 for t in plus)
    total += math.fsum((_shrink(t, tail) * _size(t)) ** 2 for t in minus)
    for q in plus:
        for r in minus:
            f = _upper_f(1 - tail, q.degrees, r.degrees)
            mixed = ((1 - f) ** 2 - (_grow(q, tail) * f) ** 2 - _shrink(r, tail) ** 2) / f
            total += mixed * _size(q) * _size(r)
    return total + (_like_pairs(minus, tail) if minus else 0.0)


def _like_pairs(terms: list[Term], tail: float) -> float:
    """What two mean squares with the same sign add when others stand with the other sign."""
    total = 0.0
    for a, b in combinations(terms, 2):
        both = a.degrees + b.degrees
        joint = (1 - both / float(special.chdtri(both, tail))) ** 2 * both**2 / (a.degrees * b.degrees)
        own = _shrink(a, tail) ** 2 * a.degrees / b.degrees + _shrink(b, tail) ** 2 * b.degrees / a.degrees
        total += (joint - own) / (len(terms) - 1) * _size(a) * _size(b)
    return total


def _size(term: Term) -> float:
    return abs(term.coefficient) * term.mean_square


def _shrink(term: Term, tail: float) -> float:
    """Share of a mean square that its own lower limit lies below it."""
    return 1 - term.degrees / float(special.chdtri(term.degrees, tail))


def _grow(term: Term, tail: float) -> float:
    """Share of a mean square that its own upper limit lies above it."""
    return term.degrees / float(special.chdtri(term.degrees, 1 - tail)) - 1


def _upper_f(tail: float, first: int, second: int) -> float:
    return float(special.fdtri(first, second, 1 - tail))
