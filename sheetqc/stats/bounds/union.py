"""The union of likelihood regions: everything the values and the prior knowledge leave possible.

A candidate family is one more thing that is not known. The union holds, for every candidate and for every guard shape
(see `shapes`), the border of the parameter values whose log-likelihood comes within a cut of the best of all. What is
kept of a border are triples of quantiles (X0.135, X50, X99.865): the bound of an index is its extreme over the triples,
for whatever limits, so that a spreadsheet can follow a moved limit.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.bounds.border import border
from sheetqc.stats.bounds.cuts import Cuts, cuts_for
from sheetqc.stats.bounds.guard import GuardFits, guard_border, guard_fits
from sheetqc.stats.bounds.table import TAIL
from sheetqc.stats.errors import DataError
from sheetqc.stats.families import Family, family

Array = NDArray[np.float64]
Prior = Literal["open", "kind", "model"]


@dataclass(frozen=True, slots=True, kw_only=True)
class UnionFit:
    """One candidate family in the union.

    `admitted` tells whether it takes part in the bound; `triples` (m, 3) are then its share of the union, else empty.
    `own_triples` are those of its own region, as if it were known to be the right one: its interval in a chart.
    """

    family: str
    theta: Array
    log_likelihood: float
    aicc: float
    weight: float
    """Akaike weight among the candidates."""
    admitted: bool
    triples: Array
    own_triples: Array
    points: Array
    """Parameters behind `triples`, shape (m, k)."""
    own_points: Array


@dataclass(frozen=True, slots=True, kw_only=True)
class Guard:
    """Guard shapes in the union: shape rows of the guard table with places on the border, running in step."""

    rows: NDArray[np.intp]
    locations: Array
    scales: Array
    triples: Array
    names: tuple[str, ...]
    """Of the shapes admitted."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ModelUnion:
    """The union for one set of values; `best` is the highest log-likelihood over candidates and guard shapes."""

    count: int
    confidence: float
    prior: Prior
    best: float
    cuts: Cuts
    fits: tuple[UnionFit, ...]
    guard: Guard | None
    triples: Array = field(repr=False)
    """All triples that take part in the bound, shape (m, 3)."""

    def fit(self, name: str) -> UnionFit | None:
        """The fit of a family, None when it is no candidate."""
        return next((fit for fit in self.fits if fit.family == name), None)

    def only(self, name: str) -> ModelUnion:
        """The union as it were if the family were known to be the right one.

        Raises
        ------
        DataError : when the family is no candidate
        """
        fit = self.fit(name)
        if fit is None:
            raise DataError(f"{name} is no candidate")
        alone = replace(fit, weight=1.0, admitted=True, triples=fit.own_triples, points=fit.own_points)
        return replace(self, prior="model", best=fit.log_likelihood, fits=(alone,), guard=None, triples=fit.own_triples)


def model_union(
    x: ArrayLike, families: Sequence[str], *, confidence: float = 0.95, prior: Prior = "open"
) -> ModelUnion:
    """The union of the likelihood regions of candidate families.

    Parameters
    ----------
    x : shape (n,), n at least 3, not all equal; every family must be able to take the values (`Family.refusal`)
    families : names of the candidates
    confidence : of the one-sided bounds
    prior : what is known beforehand: nothing ("open"; guard shapes stand for families left out), the kind of
        characteristic ("kind"; the candidates are a defensible list), or the family itself ("model")

    Raises
    ------
    DataError : when there are no candidates, fewer than 3 values, or all values are equal
    """
    values = _checked(x, families)
    candidates = [family(name) for name in families]
    thetas = [member.fit(values) for member in candidates]
    heights = np.array([_height(m, values, t) for m, t in zip(candidates, thetas, strict=True)])
    cuts = cuts_for(len(values), confidence, prior)
    guards = guard_fits(values) if prior == "open" else None
    best = float(max(heights.max(), np.max(guards.log_likelihood) if guards else -np.inf))
    aicc = np.array([_aicc(h, len(t), len(values)) for h, t in zip(heights, thetas, strict=True)])
    weights = np.exp(0.5 * (aicc.min() - aicc))
    weights = weights / weights.sum()
    fits = tuple(
        _union_fit(member, values, theta, float(height), float(score), float(weight), best, cuts)
        for member, theta, height, score, weight in zip(candidates, thetas, heights, aicc, weights, strict=True)
    )
    guard = _guard(guards, values, best, cuts) if guards else None
    parts = [fit.triples for fit in fits] + ([guard.triples] if guard else [])
    return ModelUnion(
        count=len(values),
        confidence=confidence,
        prior=prior,
        best=best,
        cuts=cuts,
        fits=fits,
        guard=guard,
        triples=np.concatenate(parts),
    )


def triples_of(member: Family, points: Array) -> Array:
    """Quantile triples (X0.135, X50, X99.865) at parameter values (m, k); shape (m, 3)."""
    return np.stack(
        [member.quantile(TAIL, points), member.quantile(0.5, points), member.upper_quantile(TAIL, points)], axis=-1
    )


def _checked(x: ArrayLike, families: Sequence[str]) -> Array:
    values = np.asarray(x, dtype=float)
    if not families:
        raise DataError("no candidate family is left")
    if values.ndim != 1 or len(values) < 3:
        raise DataError("at least 3 values are needed")
    if not np.all(np.isfinite(values)) or values.min() == values.max():
        raise DataError("the values are all equal or not finite")
    return values


def _height(member: Family, values: Array, theta: Array) -> float:
    height = float(member.log_likelihood(values, theta))
    return height if np.isfinite(height) else -np.inf


def _aicc(height: float, k: int, n: int) -> float:
    return 2 * k - 2 * height + (2 * k * (k + 1) / (n - k - 1) if n > k + 1 else np.inf)


def _union_fit(
    member: Family, values: Array, theta: Array, height: float, aicc: float, weight: float, best: float, cuts: Cuts
) -> UnionFit:
    room = cuts.union - (best - height)
    drops = np.array([cuts.own, room] if room > 0 else [cuts.own])
    inner = member.internal(theta)

    def log_likelihood(phi: Array) -> Array:
        with np.errstate(all="ignore"):
            value = member.log_likelihood(values, member.external(phi))
        return np.where(np.isnan(value), -np.inf, value)

    borders = member.external(border(log_likelihood, inner, drops))
    borders = np.concatenate([borders, np.broadcast_to(theta, (len(drops), 1, len(theta)))], axis=1)
    own = borders[0]
    points = borders[1] if room > 0 else borders[0][:0]
    own_triples, triples = _finite(member, own), _finite(member, points)
    return UnionFit(
        family=member.name,
        theta=theta,
        log_likelihood=height,
        aicc=aicc,
        weight=weight,
        admitted=room > 0,
        triples=triples[0],
        own_triples=own_triples[0],
        points=triples[1],
        own_points=own_triples[1],
    )


def _finite(member: Family, points: Array) -> tuple[Array, Array]:
    triples = triples_of(member, points) if len(points) else np.empty((0, 3))
    keep = np.all(np.isfinite(triples), axis=1)
    return triples[keep], points[keep]


def _guard(fits: GuardFits, values: Array, best: float, cuts: Cuts) -> Guard:
    room = cuts.union - (best - fits.log_likelihood)
    rows = np.flatnonzero(room > 0)
    locations, scales = guard_border(fits, values, rows, room[rows])
    table = fits.table
    spread = np.stack(
        [locations + scales * table.low[rows, None], locations, locations + scales * table.high[rows, None]], axis=-1
    )
    return Guard(
        rows=np.repeat(rows, locations.shape[1]),
        locations=locations.reshape(-1),
        scales=scales.reshape(-1),
        triples=spread.reshape(-1, 3),
        names=tuple(table.names[row] for row in rows),
    )
