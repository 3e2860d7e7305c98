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
from sheetqc.stats.bounds.cuts import family_cuts, guard_cuts, shared_cuts
from sheetqc.stats.bounds.guard import guard_fits
from sheetqc.stats.bounds.guard_region import Guard, guard_union
from sheetqc.stats.bounds.region import Region, region_between
from sheetqc.stats.bounds.table import TAIL
from sheetqc.stats.errors import DataError
from sheetqc.stats.families import Family, family

Array = NDArray[np.float64]
Prior = Literal["open", "kind", "model"]

UNGUARDED = 2.0
"""Log-likelihood by which a candidate must surpass every guard shape to stand beside them.

The guard shapes are steps of a grid; several hundred values tell the steps apart.
"""


@dataclass(frozen=True, slots=True, kw_only=True)
class UnionFit:
    """One candidate family in the union.

    `admitted` tells whether its likelihood comes close enough to the best to be possible. `region` is what it
    contributes to the bound (empty where it does not), `own` its region as if it were known to be the right family:
    its interval in a chart.
    """

    family: str
    theta: Array
    log_likelihood: float
    aicc: float
    weight: float
    """Akaike weight among the candidates."""
    admitted: bool
    region: Region
    own: Region

    @property
    def triples(self) -> Array:
        """Triples (m, 3) that the family contributes to the union."""
        return self.region.triples

    @property
    def own_triples(self) -> Array:
        """Triples (m, 3) if the family were known to be the right one."""
        return self.own.triples


@dataclass(frozen=True, slots=True, kw_only=True)
class ModelUnion:
    """The union for one set of values; `best` is the highest log-likelihood over candidates and guard shapes.

    The lower bound of an index is its smallest value over `triples` (m, 3), the upper bound its largest.
    """

    count: int
    confidence: float
    prior: Prior
    best: float
    fits: tuple[UnionFit, ...]
    guard: Guard | None
    triples: Array = field(repr=False)

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
        alone = replace(fit, weight=1.0, admitted=True, region=fit.own)
        return replace(self, prior="model", best=fit.log_likelihood, fits=(alone,), guard=None, triples=fit.own_triples)


def model_union(
    x: ArrayLike, families: Sequence[str], *, confidence: float = 0.95, prior: Prior = "open"
) -> ModelUnion:
    """The union of the likelihood regions of candidate families.

    With nothing known beforehand the bound rests on the guard shapes: they hold the candidates' shapes with a free
    origin, so that it does not depend on the list of candidates, the unit or the zero of the scale. A candidate takes
    part beside them only where it fits markedly better than every one of them.

    Parameters
    ----------
    x : shape (n,), n at least 3, not all equal; every family must be able to take the values (`Family.refusal`)
    families : names of the candidates
    confidence : of the one-sided bounds
    prior : what is known beforehand: nothing ("open"), the kind of characteristic ("kind"; the candidates are a
        defensible list), or the family itself ("model")

    Raises
    ------
    DataError : when there are no candidates, fewer than 3 values, or all values are equal
    """
    values = _checked(x, families)
    candidates = [family(name) for name in families]
    thetas = [member.fit(values) for member in candidates]
    heights = np.array([_height(m, values, t) for m, t in zip(candidates, thetas, strict=True)])
    guards = guard_fits(values) if prior == "open" else None
    guarded = float(np.max(guards.log_likelihood)) if guards else -np.inf
    best = max(float(heights.max()), guarded)
    aicc = np.array([_aicc(h, len(t), len(values)) for h, t in zip(heights, thetas, strict=True)])
    weights = np.exp(0.5 * (aicc.min() - aicc))
    weights = weights / weights.sum()
    fits = tuple(
        _union_fit(member, values, theta, float(height), float(score), float(weight), best, confidence, prior, guarded)
        for member, theta, height, score, weight in zip(candidates, thetas, heights, aicc, weights, strict=True)
    )
    guard = guard_union(guards, values, guard_cuts(len(values), confidence)) if guards else None
    triples = np.concatenate(([guard.triples] if guard else []) + [fit.triples for fit in fits])
    return ModelUnion(
        count=len(values),
        confidence=confidence,
        prior=prior,
        best=best,
        fits=fits,
        guard=guard,
        triples=triples,
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
    member: Family,
    values: Array,
    theta: Array,
    height: float,
    aicc: float,
    weight: float,
    best: float,
    confidence: float,
    prior: Prior,
    guarded: float,
) -> UnionFit:
    deficit = best - height
    own = family_cuts(len(values), confidence, len(theta))
    shared = own if prior == "model" else shared_cuts(len(values), confidence, len(theta), member.name)
    drops = [own.lower, own.upper]
    shares = shared.lower > deficit and height > guarded + UNGUARDED
    if shares:
        drops += [cut - deficit for cut in (shared.lower, shared.upper) if cut > deficit]
    inner = member.internal(theta)

    floor, ceiling = _free_ends(values)

    def log_likelihood(phi: Array) -> Array:
        theta_there = member.external(phi)
        with np.errstate(all="ignore"):
            value = member.log_likelihood(values, theta_there)
            start, end = member.support(theta_there)
        # an end that is fitted makes the likelihood unbounded where it meets a value
        usable = ~np.isnan(value) & ((len(theta) < 3) | ((start <= floor) & (end >= ceiling)))
        return np.where(usable, value, -np.inf)

    def tails(phi: Array) -> Array:
        with np.errstate(all="ignore"):
            return np.log(np.diff(triples_of(member, member.external(phi)), axis=-1))

    found = member.external(border(log_likelihood, inner, np.array(drops), tails if prior != "open" else None))
    borders = [_region(member, points) for points in found]
    fitted = _region(member, theta[None])
    nothing = Region(points=np.empty((0, len(theta))), triples=np.empty((0, 3)))
    region = nothing
    if shares:
        region = region_between(fitted, borders[2], borders[3] if len(borders) > 3 else nothing)
    return UnionFit(
        family=member.name,
        theta=theta,
        log_likelihood=height,
        aicc=aicc,
        weight=weight,
        admitted=shared.lower > deficit,
        region=region,
        own=region_between(fitted, borders[0], borders[1]),
    )


def _free_ends(values: Array) -> tuple[float, float]:
    """How near to the values the ends of a support may come: 0.05 standard deviations, as in the fits."""
    margin = 0.049 * float(values.std())
    return float(values.min()) - margin, float(values.max()) + margin


def _region(member: Family, points: Array) -> Region:
    triples = triples_of(member, points)
    keep = np.all(np.isfinite(triples), axis=1)
    return Region(points=points[keep], triples=triples[keep])
