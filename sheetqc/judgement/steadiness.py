"""Second question: is the process steady?

A control chart shows the values; whether the process is called unsteady is decided by several kinds of evidence taken
together, so that a steady process is called unsteady in about 1 of 100 studies whatever the number of points. A single
point just beyond limits drawn at 3 standard deviations would not do: among 125 points of a steady process one lies
there in 29 of 100 studies.

The evidence is looked for in normal scores under the model in use, so that a skewed process is not called unsteady for
its shape.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sheetqc.assessment import Signal, Stability
from sheetqc.finding import Cell, Finding
from sheetqc.judgement.charts import Chart, Groups, chart_of, groups_of
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.movement import Evidence, evidence_of_groups, evidence_of_row
from sheetqc.judgement.shape import Shape, normal_scores
from sheetqc.judgement.wording import listed, plural, probability
from sheetqc.stats.within import Spread
from sheetqc.study import Characteristic, Sample

FALSE_ALARM = 0.01
"""Share of steady processes called unsteady, all kinds of evidence together."""

FEWEST_POINTS = 8
"""Points below which nothing is said of steadiness."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Steadiness:
    """The record of stability, the spread within subgroups with its degrees of freedom, and what comes of it."""

    stability: Stability
    within: Spread
    subgroup_count: int | None
    subgroup_size: int | None
    conditions: tuple[Condition, ...] = ()
    findings: tuple[Finding, ...] = ()


def steadiness_of(asked: Characteristic, sample: Sample, shape: Shape) -> Steadiness:
    """Whether the process stood still while the values were made."""
    values = np.asarray(sample.values, dtype=float)
    groups = groups_of(asked, sample)
    fit = shape.fit_in_use
    scores = normal_scores(values, fit)
    chart = chart_of(values, sample, groups, fit)
    evidence = evidence_of_row(scores) if groups is None else evidence_of_groups(scores, groups)
    told = sample.order_known and len(chart.labels) >= FEWEST_POINTS and bool(evidence)
    alarms = tuple(e for e in evidence if e.p_value * len(evidence) < FALSE_ALARM) if told else ()
    cells = _cells_of_points(sample.cells, groups, len(values))
    stability = Stability(
        stable=(not alarms) if told else None,
        chart=chart.title,
        text=_text(told, alarms, evidence, chart),
        signals=_signals(alarms, chart, cells),
        process_model=_process_model(alarms, shape.in_use) if told else "",
        within_s=chart.within.sigma,
        within_method=chart.within.method,
        labels=chart.labels,
        sizes=chart.sizes,
        location=chart.location,
        spread=chart.spread,
    )
    return Steadiness(
        stability=stability,
        within=chart.within,
        subgroup_count=None if groups is None else len(groups),
        subgroup_size=_common_size(chart.sizes) if groups is not None else None,
        conditions=_conditions(alarms, stability.text),
    )


def _common_size(sizes: Sequence[int]) -> int | None:
    return sizes[0] if sizes and min(sizes) == max(sizes) else None


def _cells_of_points(cells: tuple[Cell, ...], groups: Groups | None, count: int) -> list[list[Cell]]:
    """The cells behind each point of the chart."""
    if not cells:
        return []
    members = groups if groups is not None else tuple((i,) for i in range(count))
    return [[cells[i] for i in group] for group in members]


def _signals(alarms: tuple[Evidence, ...], chart: Chart, cells: list[list[Cell]]) -> tuple[Signal, ...]:
    broken = [(f"beyond the limits ({track.title})", points) for track, points in chart.beyond() if points]
    found = [(e.text, e.points) for e in alarms] + broken
    return tuple(
        Signal(
            rule=rule,
            points=points,
            cells=tuple(cell for p in points for cell in (cells[p - 1] if p <= len(cells) else [])),
        )
        for rule, points in found
    )


def _text(told: bool, alarms: tuple[Evidence, ...], evidence: tuple[Evidence, ...], chart: Chart) -> str:
    if not told:
        return "It cannot be told: there are too few points, or their order is not that of production."
    if alarms:
        return "No: " + listed([f"{e.text} (p {probability(min(e.p_value, 1.0))})" for e in alarms]) + "."
    smallest = min(e.p_value for e in evidence)
    text = (
        f"Yes, as far as {plural(len(chart.labels), 'point')} can show: none of {len(evidence)} looks for a movement "
        f"of place or spread finds one (smallest p {probability(min(smallest, 1.0))})."
    )
    outside = sum(len(points) for _, points in chart.beyond())
    if outside:
        text += (
            f" {plural(outside, 'point')} beyond the 3-sigma limits of the chart ({chart.title}) "
            f"{'is' if outside == 1 else 'are'} no more than a steady process shows now and then."
        )
    return text


def _process_model(alarms: tuple[Evidence, ...], in_use: str | None) -> str:
    """The time-dependent distribution model of ISO 22514-2 (its letters from memory)."""
    signs = {e.sign for e in alarms}
    if not signs:
        return "A1" if in_use == "normal" else "A2"
    if signs == {"spread"}:
        return "B"
    if "spread" in signs:
        return "D"
    return "C3" if signs == {"trend"} else "C4" if "trend" not in signs else "C3"


def _conditions(alarms: tuple[Evidence, ...], text: str) -> tuple[Condition, ...]:
    if not alarms:
        return ()
    return (
        Condition(
            code="not-steady",
            reason=f"The process did not stand still: {text.removeprefix('No: ')}",
            remedy="Find what moved it, then repeat the study; until then the numbers describe these parts alone.",
        ),
    )
