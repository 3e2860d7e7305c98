"""Third question: which shape? The candidates an engineer would consider, fitted, and the one in use."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from sheetqc import vocabulary
from sheetqc.finding import Cell, Finding
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.wording import listed, number, percent, plural, probability
from sheetqc.stats.bounds import ModelUnion, UnionFit, model_union
from sheetqc.stats.families import FAMILIES, family
from sheetqc.stats.goodness import anderson_darling
from sheetqc.study import Characteristic

Prior = Literal["open", "kind", "model"]
Values = NDArray[np.float64]

TAIL = 0.00135
"""Probability beyond each of the outer quantiles of ISO 22514-2."""

OBJECTION = 0.01
"""Anderson-Darling probability below which the data object to a model."""

CONSIDERED = (
    "normal",
    "lognormal",
    "weibull",
    "gamma",
    "exponential",
    "folded_normal",
    "rayleigh",
    "logistic",
    "loglogistic",
    "gumbel_max",
    "gumbel_min",
    "lognormal_threshold",
    "weibull_threshold",
    "gamma_threshold",
)
"""Families considered where nothing is known beforehand, the simple ones first."""

CLOSE = 2.0
"""Difference in AICc up to which a model is about as good as the best (Burnham & Anderson 2002, section 2.6)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Candidate:
    """One fitted candidate with what the data say against it ("" when nothing)."""

    fit: UnionFit
    statistic: float
    p_value: float | None
    objection: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Shape:
    """The candidates, the one in use with its reason, conditions and findings that come of it."""

    prior: Prior
    union: ModelUnion
    candidates: tuple[Candidate, ...]
    in_use: str
    reason: str
    conditions: tuple[Condition, ...] = ()

    @property
    def fit_in_use(self) -> UnionFit:
        """The fit of the model in use."""
        return next(c.fit for c in self.candidates if c.fit.family == self.in_use)


def normal_scores(values: Values, fit: UnionFit) -> Values:
    """Standard normal values as probable as each value under a fit; shape (n,)."""
    member = family(fit.family)
    below, above = member.cdf(values, fit.theta), member.survival(values, fit.theta)
    tiny = np.finfo(float).tiny
    scores = np.where(below < 0.5, ndtri(np.maximum(below, tiny)), -ndtri(np.maximum(above, tiny)))
    return np.asarray(scores, dtype=float)


def shape_of(asked: Characteristic, values: Values, step: float | None, confidence: float) -> Shape:
    """The shape of the values: candidates narrowed by what is known beforehand, fitted, and one put in use.

    Parameters
    ----------
    asked : the characteristic with its kind, named model and natural bounds
    values : shape (n,), at least 3, not all equal
    step : the step the values are rounded to, None when they are not
    confidence : of the region of each candidate's parameters
    """
    prior, names = candidate_names(asked)
    usable = tuple(name for name in names if not family(name).refusal(values))
    if not usable:
        return _nothing_fits(asked, values, prior, names, confidence)
    union = model_union(values, usable, confidence=confidence, prior=prior)
    evened = evened_out(values, step)
    candidates = tuple(_candidate(fit, evened) for fit in union.fits)
    in_use, reason = _choice(prior, names, candidates, asked)
    return Shape(
        prior=prior,
        union=union,
        candidates=candidates,
        in_use=in_use,
        reason=reason,
        conditions=tuple(_conditions(prior, candidates, asked)),
    )


def candidate_names(asked: Characteristic) -> tuple[Prior, tuple[str, ...]]:
    """The families to be considered: the named one, else those of the kind, else all."""
    known = tuple(member.name for member in FAMILIES)
    if asked.model in known:
        return "model", (asked.model,)
    kind = vocabulary.kind_named(asked.kind)
    return ("open", CONSIDERED) if kind is None else ("kind", kind.families)


FINE = 10.0
"""Steps of resolution per standard deviation from which rounding no longer shows in a test of shape."""


def evened_out(values: Values, step: float | None) -> Values:
    """Coarsely rounded values spread evenly within their step, equal ones in the order they came.

    Ties make tests of shape object to the rounding instead of the shape. Within its step each of k equal values is
    put at (i - 1/2)/k of it; a step that begins at zero is not crossed.
    """
    if step is None or np.std(values, ddof=1) >= FINE * step:
        return values
    spread = values.copy()
    for level in np.unique(values):
        places = np.flatnonzero(values == level)
        low = max(level - step / 2, 0.0) if values.min() >= 0 else level - step / 2
        spread[places] = low + (np.arange(len(places)) + 0.5) / len(places) * (level + step / 2 - low)
    return spread


def rounding_findings(values: Values, step: float | None) -> Iterator[Finding]:
    """That tests on the values as read object to their rounding, where they do and the shape does not."""
    even = evened_out(values, step)
    if step is None or even is values:
        return
    as_read, spread = (anderson_darling(row, "normal").p_value for row in (values, even))
    if as_read < 0.05 <= spread:
        yield Finding(
            code="coarse-readings",
            level="note",
            text=f"The readings step by {number(step)}, {number(float(np.std(values, ddof=1)) / step, 2)} steps to a "
            f"standard deviation. A test on the values as read objects to the rounding (normal model: p "
            f"{probability(as_read)}); the shape was therefore tested with the readings spread evenly within their "
            f"step (p {probability(spread)}).",
        )


def _nothing_fits(
    asked: Characteristic, values: Values, prior: Prior, names: Sequence[str], confidence: float
) -> Shape:
    """What is left when no considered family can take the values: all families, and no verdict."""
    why = family(names[0]).refusal(values) if names else "there is no candidate"
    usable = tuple(m.name for m in FAMILIES if not m.refusal(values))
    union = model_union(values, usable, confidence=confidence, prior="open")
    considered = family(names[0]).title if prior == "model" else f"the models for the kind {asked.kind}"
    return Shape(
        prior=prior,
        union=union,
        candidates=tuple(_candidate(fit, values) for fit in union.fits),
        in_use=union.fits[0].family,
        reason=f"What was said beforehand ({considered}) cannot take these values: {why}.",
        conditions=(
            Condition(
                code="model-refuses-values",
                reason=f"What was said beforehand ({considered}) cannot take these values: {why}.",
                remedy="Correct the values, or name another model or kind.",
                cells=_named_cells(asked),
            ),
        ),
    )


def _candidate(fit: UnionFit, values: Values) -> Candidate:
    test = anderson_darling(values, fit.family)
    objects = test.p_value is not None and test.p_value < OBJECTION
    objection = f"Anderson-Darling objects: A² {test.statistic:.2f}, p {probability(test.p_value)}" if objects else ""
    return Candidate(fit=fit, statistic=test.statistic, p_value=test.p_value, objection=objection)


def _choice(
    prior: Prior, names: Sequence[str], candidates: tuple[Candidate, ...], asked: Characteristic
) -> tuple[str, str]:
    """The family in use and the reason for it, a full sentence."""
    free = [c for c in candidates if not c.objection] or list(candidates)
    best = min(free, key=lambda c: c.fit.aicc)
    if prior == "model":
        return best.fit.family, _named_reason(best)
    close = [c for c in free if c.fit.aicc - best.fit.aicc <= CLOSE]
    chosen = min(close, key=lambda c: names.index(c.fit.family))
    return chosen.fit.family, _chosen_reason(chosen, best, candidates, asked if prior == "kind" else None)


def _named_reason(named: Candidate) -> str:
    title = family(named.fit.family).title
    if named.objection:
        return f"The {title} model is named in the study and therefore used, although the data contradict it."
    return f"The {title} model is named in the study and the data do not object (p {_p(named)})."


def _p(candidate: Candidate) -> str:
    return "unknown" if candidate.p_value is None else probability(candidate.p_value)


def _chosen_reason(
    chosen: Candidate, best: Candidate, candidates: Sequence[Candidate], kind: Characteristic | None
) -> str:
    title = family(chosen.fit.family).title
    among = f"{plural(len(candidates), 'candidate')}" + (f" for the kind {kind.kind}" if kind else "")
    if chosen.objection:
        return f"None of the {among} describes the values; the {title} model misses them least."
    if chosen is best:
        text = f"Of {among}, the {title} model fits best (weight {percent(chosen.fit.weight)})"
    else:
        text = (
            f"Of {among}, the {title} model is the first that an engineer would consider and fits about as well as "
            f"the best, {family(best.fit.family).title}"
        )
    refused = [family(c.fit.family).title for c in candidates if c.objection]
    return f"{text}; the data do not object (p {_p(chosen)})" + (f" but do to {listed(refused)}." if refused else ".")


def _conditions(prior: Prior, candidates: Sequence[Candidate], asked: Characteristic) -> Iterator[Condition]:
    if any(not c.objection for c in candidates):
        return
    if prior == "model":
        yield Condition(
            code="named-model-contradicted",
            reason=f"The data contradict the named model: {candidates[0].objection}.",
            remedy="Leave the model open, name another one, or explain the values that do not fit.",
            cells=_named_cells(asked),
        )
    else:
        yield Condition(
            code="no-model-fits",
            reason=f"None of the {plural(len(candidates), 'model')} considered describes the values, so nothing can be "
            "said beyond them.",
            remedy="Look for a mixture (cavities, machines, batches), sorted parts or coarse readings, and send the "
            "values with a column that tells them apart.",
        )


def _named_cells(asked: Characteristic) -> tuple[Cell, ...]:
    return tuple(cell for name in ("model", "kind") if (cell := asked.cell(name)) is not None)
