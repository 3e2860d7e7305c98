"""The assessment of one characteristic: the questions asked in their order, the answers put together."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from sheetqc.assessment import Assessment, Estimate, Normality, Stability, Summary, Test
from sheetqc.finding import Finding
from sheetqc.judgement.apart import apart_findings
from sheetqc.judgement.capability import Capability, capability_of
from sheetqc.judgement.charts import groups_of
from sheetqc.judgement.claim import claim_findings
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.data import DataView, data_view
from sheetqc.judgement.explain import answers, capable_answer, findings_of, next_steps
from sheetqc.judgement.shape import Shape, Values, evened_out, shape_of
from sheetqc.judgement.steadiness import Steadiness, steadiness_of
from sheetqc.judgement.streams import stream_view
from sheetqc.judgement.terms import Terms
from sheetqc.judgement.verdict import state_of, verdict_of
from sheetqc.stats.descriptive import describe
from sheetqc.stats.goodness import anderson_darling
from sheetqc.stats.normality import ppcc, shapiro_wilk
from sheetqc.study import Characteristic, Sample


def assessment_of(asked: Characteristic, sample: Sample, terms: Terms, findings: Sequence[Finding] = ()) -> Assessment:
    """What is found for one characteristic.

    Parameters
    ----------
    asked : the characteristic with its limits
    sample : its values in time order
    terms : requirement, index, confidence
    findings : what reading the workbook found about it; one of the level "stop" forbids a verdict
    """
    data = data_view(asked, sample)
    told = {condition.code for condition in data.conditions}
    findings = tuple(f for f in findings if f.code not in told)
    stops = tuple(_as_condition(f) for f in findings if f.level == "stop")
    if not data.usable:
        return _unusable(asked, sample, terms, data, stops, findings)
    values = np.asarray(sample.values, dtype=float)
    shape = shape_of(asked, values, data.step, terms.confidence)
    steadiness = steadiness_of(asked, sample, shape)
    capability = _capability(values, asked, shape, steadiness, terms, data)
    stream_conditions, stream_findings = stream_view(values, sample.streams, asked.unit)
    conditions = (*stops, *data.conditions, *steadiness.conditions, *stream_conditions, *shape.conditions)
    index, why_index = _judged_index(terms, shape)
    estimate = _judged_estimate(capability, index, values, steadiness)
    steps = next_steps(estimate, state_of(estimate or Estimate(), terms.requirement), terms, len(values))
    verdict = verdict_of(estimate, index, terms, conditions, steps)
    every = (
        *findings,
        *(c.finding() for c in conditions if c not in stops),
        *data.findings,
        *steadiness.findings,
        *stream_findings,
        *why_index,
        *apart_findings(values, sample, asked.limits, shape),
        *claim_findings(asked, sample, groups_of(asked, sample), capability),
        *findings_of(shape, capability, asked),
    )
    return Assessment(
        characteristic=asked,
        sample=sample,
        confidence=terms.confidence,
        count=len(values),
        left_out=len(sample.left_out),
        censored=sum(1 for mark in sample.censored if mark),
        subgroup_count=steadiness.subgroup_count,
        subgroup_size=steadiness.subgroup_size,
        summary=_summary(values),
        normality=_normality(values, data.step),
        models=capability.models,
        model_in_use=shape.in_use,
        model_reason=shape.reason,
        indices=capability.indices,
        nonconforming=capability.nonconforming,
        stability=steadiness.stability,
        verdict=verdict,
        findings=every,
        region=capability.region,
        answers=answers(
            data,
            steadiness.stability.text,
            shape.reason,
            capable_answer(capability, index, verdict, values, asked),
            verdict,
        ),
    )


def _as_condition(finding: Finding) -> Condition:
    return Condition(code=finding.code, reason=finding.text, remedy="", cells=finding.cells)


def _unusable(
    asked: Characteristic,
    sample: Sample,
    terms: Terms,
    data: DataView,
    stops: tuple[Condition, ...],
    findings: Sequence[Finding],
) -> Assessment:
    verdict = verdict_of(None, terms.index, terms, (*stops, *data.conditions), ())
    return Assessment(
        characteristic=asked,
        sample=sample,
        confidence=terms.confidence,
        count=len(sample.values),
        left_out=len(sample.left_out),
        censored=sum(1 for mark in sample.censored if mark),
        summary=None,
        stability=Stability(stable=None, text="Nothing can be said of the process."),
        verdict=verdict,
        findings=(*findings, *(c.finding() for c in data.conditions), *data.findings),
        answers=answers(
            data,
            "Nothing can be said of the process.",
            "Nothing can be said of the shape.",
            "No index can be given.",
            verdict,
        ),
    )


def _capability(
    values: Values, asked: Characteristic, shape: Shape, steadiness: Steadiness, terms: Terms, data: DataView
) -> Capability:
    """Capability against the limits, where they make sense; else of the candidates alone."""
    limits = asked.limits
    if any(c.code == "limits-crossed" for c in data.conditions):
        limits = replace(limits, lower=None, upper=None)
    return capability_of(values, limits, shape, steadiness, terms.confidence)


def _judged_index(terms: Terms, shape: Shape) -> tuple[str, tuple[Finding, ...]]:
    """The index the verdict is on: a requirement on Cpk is judged on Ppk where the normal model does not hold."""
    if terms.index == "Ppk" or shape.in_use == "normal":
        return terms.index, ()
    return "Ppk", (
        Finding(
            code="judged-on-ppk",
            level="caution",
            text="The requirement is on Cpk, which presumes the normal model; another model is in use here, so the "
            "verdict is on Ppk.",
        ),
    )


def _judged_estimate(capability: Capability, index: str, values: Values, steadiness: Steadiness) -> Estimate | None:
    """The judged index with bounds; those of Cpk never claim more than the models behind Ppk allow."""
    indices = capability.indices
    if index == "Ppk" or indices.Cpk is None or indices.Ppk is None:
        return indices.Ppk
    ratio = float(np.std(values, ddof=1)) / steadiness.within.sigma
    cpk, ppk = indices.Cpk, indices.Ppk
    lower = None if cpk.lower is None or ppk.lower is None else min(cpk.lower, ppk.lower * ratio)
    return replace(cpk, lower=lower)


def _summary(values: Values) -> Summary:
    found = describe(values)
    return Summary(
        mean=found.mean,
        s=found.s,
        median=found.median,
        minimum=found.minimum,
        maximum=found.maximum,
        skewness=found.skewness,
        kurtosis=found.kurtosis,
    )


def _normality(values: Values, step: float | None) -> Normality:
    """Tests of the normal model; on values spread within their step where they are coarsely rounded."""
    even = evened_out(values, step)
    a, w, r = anderson_darling(even, "normal"), shapiro_wilk(even), ppcc(even)
    return Normality(
        anderson_darling=Test(statistic=a.statistic, p_value=a.p_value),
        shapiro_wilk=Test(statistic=w.statistic, p_value=w.p_value),
        ppcc=Test(statistic=r.statistic, p_value=r.p_value),
    )
