"""What was understood of a workbook, as text and as plain types, without statistics."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields

from sheetqc import vocabulary
from sheetqc.finding import Finding
from sheetqc.study import Characteristic, Header, Sample, Study

Object = dict[str, object]


def questions(study: Study) -> tuple[Finding, ...]:
    """Findings that must be answered first: those of level stop."""
    about = (*study.findings, *(finding for _, finding in study.findings_of))
    return tuple(finding for finding in about if finding.level == "stop")


def understood(study: Study) -> Object:
    """What was understood, in plain types."""
    return {
        "source": {"name": study.source.name, "sha256": study.source.sha256, "bytes": study.source.bytes},
        "study": _header(study.header),
        "characteristics": [_characteristic(c, study) for c in study.characteristics],
        "gauge": [
            {
                "characteristic": g.characteristic,
                "values": len(g.values),
                "parts": len(set(g.parts)),
                "appraisers": len(set(g.appraisers)),
                "trials": len(set(g.trials)),
            }
            for g in study.gauge_studies
        ],
        "counts": [
            {"categories": len(set(c.categories)), "total": sum(c.counts), "rows": len(c.counts)} for c in study.counts
        ],
        "findings": [f.to_dict() for f in study.findings],
        "questions": [f.to_dict() for f in questions(study)],
    }


def _header(header: Header) -> Object:
    named = {f.name: getattr(header, f.name) for f in fields(header) if f.name != "cells"}
    return {name: None if value == "" else value for name, value in named.items()}


def _characteristic(asked: Characteristic, study: Study) -> Object:
    sample = study.sample(asked.id)
    cell = asked.cell("id")
    return {
        "id": asked.id,
        "name": asked.name,
        "unit": asked.unit,
        "limits": {f.name: getattr(asked.limits, f.name) for f in fields(asked.limits)},
        "kind": asked.kind or None,
        "model": asked.model or None,
        "requirement": asked.requirement,
        "cell": None if cell is None else str(cell),
        "count": 0 if sample is None else len(sample.values),
        "left_out": 0 if sample is None else len(sample.left_out),
        "censored": 0 if sample is None else sum(1 for mark in sample.censored if mark),
        "repaired": 0 if sample is None else sum(sample.copied),
        "subgroups": None if sample is None or sample.subgroups is None else len(dict.fromkeys(sample.subgroups)),
        "streams": None if sample is None or sample.streams is None else sorted(set(sample.streams)),
        "first_cell": None if sample is None or not sample.cells else str(sample.cells[0]),
        "last_cell": None if sample is None or not sample.cells else str(sample.cells[-1]),
        "findings": [f.to_dict() for identity, f in study.findings_of if identity == asked.id],
    }


def understood_text(study: Study) -> str:
    """What was understood, as text for people."""
    return "\n".join(_lines(study))


def _lines(study: Study) -> Iterator[str]:
    yield f"{study.source.name}: {len(study.characteristics)} characteristics, {_values(study)} values"
    header = study.header
    for heading in vocabulary.headings("study"):
        cell = header.cell(heading.field)
        if cell is not None:
            yield f"  {heading.title}: {getattr(header, heading.field)}  ({cell})"
    for asked in study.characteristics:
        yield ""
        yield from _characteristic_lines(asked, study)
    for gauge in study.gauge_studies:
        yield ""
        yield (
            f"Gauge study of {gauge.characteristic}: {len(gauge.values)} values, {len(set(gauge.parts))} parts, "
            f"{len(set(gauge.appraisers))} appraisers"
        )
    for counts in study.counts:
        yield ""
        yield f"Counts: {sum(counts.counts):g} in {len(set(counts.categories))} categories"
    yield from _finding_lines(study.findings)
    asking = questions(study)
    yield ""
    yield f"{len(asking)} to be answered first." if asking else "Nothing has to be answered first."


def _values(study: Study) -> int:
    return sum(len(sample.values) for sample in study.samples)


def _characteristic_lines(asked: Characteristic, study: Study) -> Iterator[str]:
    name = f" {asked.name}" if asked.name and asked.name != asked.id else ""
    yield f"{asked.id}{name}: {_limits_in_words(asked)}"
    if asked.kind or asked.model:
        yield f"  {', '.join(w for w in (asked.kind, asked.model and f'model {asked.model}') if w)}"
    sample = study.sample(asked.id)
    if sample is not None and sample.values:
        yield f"  {_counts_in_words(sample)}"
    own = tuple(f for identity, f in study.findings_of if identity == asked.id)
    yield from (f"  {line}" for line in _finding_lines(own) if line)


def _limits_in_words(asked: Characteristic) -> str:
    limits = asked.limits
    titles = {h.field: h.title for h in vocabulary.headings("characteristics")}
    parts = [
        f"{titles[f.name]} {getattr(limits, f.name):.15g}"
        for f in fields(limits)
        if getattr(limits, f.name) is not None
    ]
    return (", ".join(parts) or "no limits") + (f" {asked.unit}" if asked.unit and parts else "")


def _counts_in_words(sample: Sample) -> str:
    parts = [f"{len(sample.values)} values from {sample.cells[0]} to {sample.cells[-1]}"]
    if sample.subgroups is not None:
        parts.append(f"{len(dict.fromkeys(sample.subgroups))} subgroups")
    if sample.streams is not None:
        parts.append(f"{len(set(sample.streams))} streams")
    for count, word in (
        (len(sample.left_out), "left out"),
        (sum(1 for mark in sample.censored if mark), "given as a bound"),
        (sum(sample.copied), "repaired"),
    ):
        if count:
            parts.append(f"{count} {word}")
    return ", ".join(parts)


def _finding_lines(findings: tuple[Finding, ...]) -> Iterator[str]:
    if findings:
        yield ""
    for finding in findings:
        yield f"{finding.level.upper()}: {finding.text}"
