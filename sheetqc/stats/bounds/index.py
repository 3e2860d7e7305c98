"""Bounds of indices and rates: extremes over what a union leaves possible."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.bounds.table import at, guard_table, place
from sheetqc.stats.bounds.union import ModelUnion
from sheetqc.stats.errors import DataError
from sheetqc.stats.families import family

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Bounds:
    """A one-sided lower and a one-sided upper bound of an index, each at the confidence of the union."""

    lower: float | None = None
    upper: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class RateBounds:
    """A one-sided lower and a one-sided upper bound of a share between 0 and 1."""

    lower: float
    upper: float


def ppk_of_triples(triples: ArrayLike, lower: float | None, upper: float | None) -> Array:
    """Ppk by the quantile method for quantile triples (m, 3); shape (m,).

    Reference: ISO 22514-2, the smaller of (U - X50) / (X99.865 - X50) and (X50 - L) / (X50 - X0.135).
    """
    low, middle, high = np.moveaxis(np.asarray(triples, dtype=float), -1, 0)
    index = np.full(middle.shape, np.inf)
    with np.errstate(divide="ignore", invalid="ignore"):
        if upper is not None:
            index = np.minimum(index, (upper - middle) / (high - middle))
        if lower is not None:
            index = np.minimum(index, (middle - lower) / (middle - low))
    return index


def ppk_bounds(union: ModelUnion, lower: float | None, upper: float | None) -> Bounds:
    """One-sided bounds of Ppk; both None without a limit."""
    if lower is None and upper is None:
        return Bounds()
    values = ppk_of_triples(union.triples, lower, upper)
    return Bounds(lower=float(values.min()), upper=float(values.max()))


def ppk_lower(union: ModelUnion, lower: float | None, upper: float | None) -> float | None:
    """The one-sided lower bound of Ppk; None without a limit."""
    return ppk_bounds(union, lower, upper).lower


def ppk_upper(union: ModelUnion, lower: float | None, upper: float | None) -> float | None:
    """The one-sided upper bound of Ppk; None without a limit."""
    return ppk_bounds(union, lower, upper).upper


def pp_bounds(union: ModelUnion, lower: float | None, upper: float | None) -> Bounds:
    """One-sided bounds of Pp by the quantile method, (U - L) / (X99.865 - X0.135); both None unless both are given."""
    if lower is None or upper is None:
        return Bounds()
    values = (upper - lower) / np.ptp(union.triples, axis=1)
    return Bounds(lower=float(values.min()), upper=float(values.max()))


def rate_bounds(union: ModelUnion, lower: float | None, upper: float | None) -> RateBounds:
    """One-sided bounds of the expected share outside the limits.

    Raises
    ------
    DataError : without a limit
    """
    if lower is None and upper is None:
        raise DataError("a rate outside the limits needs a limit")
    rates = [_family_rates(f.family, f.region.points, lower, upper) for f in union.fits if len(f.region.points)]
    if union.guard is not None:
        parts = _guard_rates(union.guard.tails, lower, upper)
        rates.append(np.array([sum(p.min() for p in parts), sum(p.max() for p in parts)]))
    every = np.concatenate(rates)
    return RateBounds(lower=float(every.min()), upper=float(every.max()))


def _family_rates(name: str, points: Array, lower: float | None, upper: float | None) -> Array:
    member = family(name)
    below = member.cdf(lower, points) if lower is not None else np.zeros(len(points))
    above = member.survival(upper, points) if upper is not None else np.zeros(len(points))
    return np.asarray(below + above)


def _guard_rates(tails: tuple[Array, Array], lower: float | None, upper: float | None) -> list[Array]:
    """Rates below the lower limit and above the upper one, over the points kept for each tail."""
    table = guard_table()
    found = []
    for points, limit, tail in zip(tails, (lower, upper), (table.cdf, table.survival), strict=True):
        if limit is not None:
            cell, share = place((limit - points[:, 1]) / points[:, 2])
            found.append(np.clip(at(tail, points[:, 0].astype(np.intp), cell, share), 0.0, 1.0))
    return found
