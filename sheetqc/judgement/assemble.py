"""The assessment of one characteristic: the questions asked in their order, the answers put together."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from sheetqc.assessment import Assessment, Estimate, Normality, Stability, Summary, Test, Verdict
from sheetqc.finding import Finding
from sheetqc.judgement.apart import apart_findings
from sheetqc.judgement.capability import Capability, capability_of
from sheetqc.judgement.charts import groups_of
from sheetqc.judgement.claim import claim_findings
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.data import DataView, data_view
from sheetqc.judgement.explain import answers, capable_answer, findings_of, next_steps
from sheetqc.judgement.gauge_view import gauge_view
from sheetqc.judgement.judged import Judged, judged_index
from sheetqc.judgement.shape import Shape, Values, rounding_findings, shape_of
from sheetqc.judgement.steadiness import Steadiness, steadiness_of
from sheetqc.judgement.streams import stream_view
from sheetqc.judgement.terms import Terms
from sheetqc.judgement.verdict import state_of, verdict_of
from sheetqc.stats.descriptive import describe
from sheetqc.stats.goodness import anderson_darling
from sheetqc.stats.normality import MOST_FOR_SHAPIRO_WILK, ppcc, shapiro_wilk
from sheetqc.study import Characteristic, GaugeStudy, Sample


def assessment_of(
    asked: Characteristic,
    sample: Sample,
    terms: Terms,
    findings: Sequence[Finding] = (),
    gauge_study: GaugeStudy | None = None,
) -> Assessment:
    """What is found for one characteristic.

    Parameters
    ----------
    asked : the characteristic with its limits
    sample : its values in time order
    terms : requirement, index, confidence
    findings : what reading the workbook found about it; one of the level "stop" forbids a verdict
    gauge_study : repeat readings of its gauge, where there are any
    """
    data = data_view(asked, sample)
    told = {condition.code for condition in data.conditions}
    findings = tuple(f for f in findings if f.code not in told)
    stops = tuple(_as_condition(f) for f in findings if f.level == "stop")
    if not data.usable:
        return _unusable(asked, sample, terms, data, stops, findings)
    return _usable(asked, sample, terms, data, stops, findings, gauge_study)


def _usable(
    asked: Characteristic,
    sample: Sample,
    terms: Terms,
    data: DataView,
    stops: tuple[Condition, ...],
    findings: Sequence[Finding],
    gauge_study: GaugeStudy | None,
) -> Assessment:
    values = np.asarray(sample.values, dtype=float)
    shape = shape_of(asked, values, data.step, terms.confidence)
    steadiness = steadiness_of(asked, sample, shape)
    capability = _capability(values, asked, shape, steadiness, terms, data)
    stream_conditions, stream_findings = stream_view(values, sample.streams, asked.unit)
    gauge = gauge_view(asked, gauge_study, float(np.std(values, ddof=1)), capability.indices.Pp)
    conditions = (
        *stops,
        *data.conditions,
        *gauge.conditions,
        *steadiness.conditions,
        *stream_conditions,
        *shape.conditions,
    )
    judged = judged_index(terms, shape, capability, values, steadiness)
    verdict = _verdict(judged, terms, conditions, len(values))
    capable = capable_answer(capability, judged.name, verdict, values, asked)
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
        normality=_normality(values),
        models=capability.models,
        model_in_use=shape.in_use,
        model_reason=shape.reason,
        indices=capability.indices,
        nonconforming=capability.nonconforming,
        stability=steadiness.stability,
        gauge=gauge.result,
        verdict=verdict,
        findings=(
            *findings,
            *(c.finding() for c in conditions if c not in stops),
            *data.findings,
            *gauge.findings,
            *rounding_findings(values, data.step),
            *steadiness.findings,
            *stream_findings,
            *judged.findings,
            *apart_findings(values, sample, asked.limits, shape),
            *claim_findings(asked, sample, groups_of(asked, sample), capability),
            *findings_of(shape, capability, asked),
        ),
        region=capability.region,
        answers=answers(data, steadiness.stability.text, shape.reason, capable, verdict),
    )


def _verdict(judged: Judged, terms: Terms, conditions: tuple[Condition, ...], count: int) -> Verdict:
    state = state_of(judged.estimate or Estimate(), terms.requirement)
    steps = next_steps(judged.estimate, state, terms, count)
    return verdict_of(judged.estimate, judged.name, terms, conditions, steps)


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


def _normality(values: Values) -> Normality:
    """Tests of the normal model on the values as read."""
    a, r = anderson_darling(values, "normal"), ppcc(values)
    w = shapiro_wilk(values) if len(values) <= MOST_FOR_SHAPIRO_WILK else None
    return Normality(
        anderson_darling=Test(statistic=a.statistic, p_value=a.p_value),
        shapiro_wilk=None if w is None else Test(statistic=w.statistic, p_value=w.p_value),
        ppcc=Test(statistic=r.statistic, p_value=r.p_value),
    )
