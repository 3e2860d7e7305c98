"""The JSON answer: records turned into plain types, in the shape of the public contract."""

from __future__ import annotations

import math
from dataclasses import fields

import sheetqc
from sheetqc.assessment import (
    SCHEMA,
    Answer,
    Assessment,
    CountResult,
    Estimate,
    GaugeResult,
    ModelFit,
    Nonconforming,
    Stability,
    Summary,
    Test,
)
from sheetqc.study import Characteristic, Header, Limits, Source

Object = dict[str, object]


def answer_object(answer: Answer) -> Object:
    """The object of a whole workbook."""
    return {
        "schema": SCHEMA,
        "tool": tool_object(),
        "source": source_object(answer.source),
        "study": _header(answer.header),
        "characteristics": [characteristic_object(a) for a in answer.assessments],
        "counts": [_counts(c) for c in answer.counts],
        "findings": [f.to_dict() for f in answer.findings],
    }


def tool_object() -> Object:
    """Which tool made the answer, in which version."""
    return {"name": "sheetqc", "version": sheetqc.__version__}


def source_object(source: Source) -> Object:
    """Which workbook was answered."""
    return {"name": source.name, "sha256": source.sha256, "bytes": source.bytes}


def characteristic_object(assessment: Assessment) -> Object:
    """The object of one characteristic."""
    asked = assessment.characteristic
    return {
        "id": asked.id,
        "name": asked.name,
        "unit": asked.unit,
        "kind": asked.kind or None,
        "critical_class": asked.critical_class or None,
        "limits": _limits(asked.limits),
        "confidence": assessment.confidence,
        "count": assessment.count,
        "left_out": assessment.left_out,
        "censored": assessment.censored,
        "subgroups": {"count": assessment.subgroup_count, "size": assessment.subgroup_size},
        "summary": _summary(assessment.summary),
        "normality": {
            "anderson_darling": _test(assessment.normality.anderson_darling),
            "shapiro_wilk": _test(assessment.normality.shapiro_wilk),
            "ppcc": _test(assessment.normality.ppcc),
        },
        "models": [_model(m) for m in assessment.models],
        "model_in_use": assessment.model_in_use,
        "model_reason": assessment.model_reason,
        "indices": {f.name: _estimate(getattr(assessment.indices, f.name)) for f in fields(assessment.indices)},
        "nonconforming": _nonconforming(assessment.nonconforming),
        "stability": _stability(assessment.stability),
        "gauge": _gauge(assessment.gauge),
        "claim": _claim(asked),
        "verdict": {
            "state": assessment.verdict.state,
            "requirement": _number(assessment.verdict.requirement),
            "index": assessment.verdict.index,
            "reasons": list(assessment.verdict.reasons),
            "next_steps": list(assessment.verdict.next_steps),
        },
        "findings": [f.to_dict() for f in assessment.findings],
    }


def _number(value: float | None) -> float | int | None:
    """A number JSON can carry: null for what is absent or not finite."""
    if value is None or not math.isfinite(value):
        return None
    return value


def _limits(limits: Limits) -> Object:
    return {f.name: _number(getattr(limits, f.name)) for f in fields(limits)}


def _header(header: Header) -> Object:
    names = [f.name for f in fields(header) if f.name != "cells"]
    return {name: (None if (value := getattr(header, name)) == "" else value) for name in names}


def _summary(summary: Summary | None) -> Object | None:
    return None if summary is None else {f.name: _number(getattr(summary, f.name)) for f in fields(summary)}


def _test(test: Test | None) -> Object | None:
    return None if test is None else {"statistic": _number(test.statistic), "p_value": _number(test.p_value)}


def _estimate(estimate: Estimate | None) -> Object | None:
    if estimate is None:
        return None
    return {f.name: _number(getattr(estimate, f.name)) for f in fields(estimate)}


def _model(model: ModelFit) -> Object:
    ppm = model.expected_ppm
    return {
        "family": model.family,
        "parameters": {name: _number(value) for name, value in model.parameters},
        "log_likelihood": _number(model.log_likelihood),
        "aicc": _number(model.aicc),
        "weight": _number(model.weight),
        "anderson_darling": _test(model.anderson_darling),
        "quantiles": {
            "x0.135": _number(model.quantiles.low),
            "x50": _number(model.quantiles.median),
            "x99.865": _number(model.quantiles.high),
        },
        "ppk": _number(model.ppk),
        "ppk_lower": _number(model.ppk_lower),
        "ppk_upper": _number(model.ppk_upper),
        "expected_ppm": None
        if ppm is None
        else {"below": _number(ppm.below), "above": _number(ppm.above), "total": _number(ppm.total)},
        "objection": model.objection or None,
        "admitted": model.admitted,
    }


def _nonconforming(found: Nonconforming) -> Object:
    observed = found.observed
    expected = found.expected
    return {
        "observed": None
        if observed is None
        else {
            "count": observed.count,
            "of": observed.of,
            "ppm": observed.ppm,
            "lower": observed.lower,
            "upper": observed.upper,
        },
        "expected": None
        if expected is None
        else {
            "ppm": _number(expected.estimate),
            "lower": _number(expected.lower),
            "upper": _number(expected.upper),
        },
    }


def _stability(stability: Stability) -> Object:
    return {
        "stable": stability.stable,
        "chart": stability.chart or None,
        "signals": [
            {"rule": s.rule, "points": list(s.points), "cells": [str(c) for c in s.cells]} for s in stability.signals
        ],
        "process_model": stability.process_model or None,
        "within_s": _number(stability.within_s),
        "within_method": stability.within_method or None,
    }


def _gauge(gauge: GaugeResult | None) -> Object | None:
    return None if gauge is None else {f.name: getattr(gauge, f.name) for f in fields(gauge)}


def _counts(found: CountResult) -> Object:
    rows = [{f.name: getattr(row, f.name) for f in fields(row)} for row in found.categories]
    return {"total": found.total, "categories": rows, "text": found.text}


def _claim(asked: Characteristic) -> Object | None:
    if asked.claimed_value is None:
        return None
    return {"index": asked.claimed_index or None, "value": _number(asked.claimed_value)}
