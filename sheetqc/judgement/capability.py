"""Fourth question: how capable, and how sure? Indices, nonconforming rates and their bounds."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.assessment import Estimate, ExpectedRate, Indices, ModelFit, Nonconforming, Observed, Quantiles, Test
from sheetqc.judgement.shape import TAIL, Candidate, Shape
from sheetqc.judgement.steadiness import Steadiness
from sheetqc.stats.bounds import pp_bounds, ppk_bounds, rate_bounds
from sheetqc.stats.bounds.essential import essential_triples
from sheetqc.stats.families import family
from sheetqc.stats.indices import Bounded, cpm, indices_of_spread, quantile_capability
from sheetqc.stats.intervals import proportion_interval
from sheetqc.study import Limits

MILLION = 1e6

Values = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Capability:
    """Every candidate as a record, the indices and the nonconforming rates."""

    models: tuple[ModelFit, ...]
    indices: Indices = Indices()
    nonconforming: Nonconforming = Nonconforming()
    region: tuple[tuple[float, float, float], ...] = ()


def capability_of(
    values: Values, limits: Limits, shape: Shape, steadiness: Steadiness, confidence: float
) -> Capability:
    """Indices and rates of the values against their limits.

    Parameters
    ----------
    values : shape (n,)
    limits : at least one of lower and upper for an index
    shape : the candidates and the one in use
    steadiness : gives the spread within subgroups
    confidence : of each one-sided bound
    """
    models = tuple(_model_fit(c, shape, limits) for c in shape.candidates)
    in_use = next((m for m in models if m.family == shape.in_use), None)
    if in_use is None or (limits.lower is None and limits.upper is None):
        return Capability(models=models)
    return Capability(
        models=models,
        indices=_indices(values, limits, shape, in_use, steadiness, confidence),
        nonconforming=Nonconforming(
            observed=observed(values, limits, confidence),
            expected=_expected(in_use, shape, limits),
        ),
        region=carried(shape.union.triples, limits),
    )


def _model_fit(candidate: Candidate, shape: Shape, limits: Limits) -> ModelFit:
    fit, member = candidate.fit, family(candidate.fit.family)
    low = float(member.quantile(TAIL, fit.theta))
    median = float(member.quantile(0.5, fit.theta))
    high = float(member.upper_quantile(TAIL, fit.theta))
    index = quantile_capability(low, median, high, limits.lower, limits.upper)
    own = shape.union.only(fit.family)
    bounds = ppk_bounds(own, limits.lower, limits.upper)
    return ModelFit(
        family=fit.family,
        parameters=tuple(zip(member.parameter_names, (float(t) for t in fit.theta), strict=True)),
        log_likelihood=fit.log_likelihood,
        aicc=fit.aicc,
        weight=fit.weight,
        anderson_darling=Test(statistic=candidate.statistic, p_value=candidate.p_value),
        quantiles=Quantiles(low=low, median=median, high=high),
        pp=index.Pp,
        ppk=index.Ppk,
        ppk_lower=bounds.lower,
        ppk_upper=bounds.upper,
        expected_ppm=expected_rate(candidate, limits),
        objection=candidate.objection,
        admitted=bool(fit.admitted),
        region=carried(fit.own_triples, limits),
    )


def carried(triples: Values, limits: Limits) -> tuple[tuple[float, float, float], ...]:
    """The triples that a spreadsheet needs to bound the index for any limits."""
    few = essential_triples(triples, limits.lower, limits.upper)
    return tuple((float(a), float(b), float(c)) for a, b, c in few)


def expected_rate(candidate: Candidate, limits: Limits) -> ExpectedRate | None:
    """Expected nonconforming parts per million of a candidate; None without a limit."""
    if limits.lower is None and limits.upper is None:
        return None
    member, theta = family(candidate.fit.family), candidate.fit.theta
    below = None if limits.lower is None else MILLION * float(member.cdf(limits.lower, theta))
    above = None if limits.upper is None else MILLION * float(member.survival(limits.upper, theta))
    return ExpectedRate(below=below, above=above, total=(below or 0.0) + (above or 0.0))


def observed(values: Values, limits: Limits, confidence: float) -> Observed:
    """Values outside the limits, counted, with one-sided bounds of the rate in ppm."""
    outside = np.zeros(len(values), dtype=bool)
    if limits.lower is not None:
        outside |= values < limits.lower
    if limits.upper is not None:
        outside |= values > limits.upper
    count = int(outside.sum())
    bounds = proportion_interval(count, len(values), 2 * confidence - 1)
    upper = proportion_interval(count, len(values), confidence, sides=1).upper
    return Observed(
        count=count,
        of=len(values),
        ppm=MILLION * count / len(values),
        lower=MILLION * bounds.lower,
        upper=MILLION * upper,
    )


def _expected(in_use: ModelFit, shape: Shape, limits: Limits) -> Estimate | None:
    if in_use.expected_ppm is None:
        return None
    bounds = rate_bounds(shape.union, limits.lower, limits.upper)
    return _around(in_use.expected_ppm.total, MILLION * bounds.lower, MILLION * bounds.upper)


def _around(estimate: float | None, lower: float | None, upper: float | None) -> Estimate:
    """An estimate within its bounds: bounds that rest on more models than the one in use never exclude it."""
    if estimate is None:
        return Estimate()
    return Estimate(
        estimate=estimate,
        lower=None if lower is None else min(lower, estimate),
        upper=None if upper is None else max(upper, estimate),
    )


def _indices(
    values: Values, limits: Limits, shape: Shape, in_use: ModelFit, steadiness: Steadiness, confidence: float
) -> Indices:
    ppk = ppk_bounds(shape.union, limits.lower, limits.upper)
    pp = pp_bounds(shape.union, limits.lower, limits.upper)
    mean, s, n = float(np.mean(values)), float(np.std(values, ddof=1)), len(values)
    within = indices_of_spread(mean, steadiness.within, n, limits.lower, limits.upper, confidence, sides=1)
    return Indices(
        Pp=None if in_use.pp is None else _around(in_use.pp, pp.lower, pp.upper),
        Ppk=_around(in_use.ppk, ppk.lower, ppk.upper),
        Cp=_estimate(within.spread),
        Cpk=_estimate(within.nearer),
        Cpm=_estimate(cpm(mean, s, n, limits.lower, limits.upper, limits.nominal, confidence, sides=1)),
    )


def _estimate(index: Bounded | None) -> Estimate | None:
    return None if index is None else Estimate(estimate=index.estimate, lower=index.lower, upper=index.upper)
