"""Can the gauge see what is claimed? A gauge study in the workbook, weighed against tolerance and process."""

from __future__ import annotations

import math
from dataclasses import dataclass

from sheetqc.assessment import Estimate, GaugeResult
from sheetqc.finding import Finding, Level
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.wording import index as to_two_decimals
from sheetqc.judgement.wording import number, percent
from sheetqc.stats.errors import DataError
from sheetqc.stats.gauge import GaugeStudy as StudiedGauge
from sheetqc.stats.gauge import gauge_study
from sheetqc.study import Characteristic, GaugeStudy, Limits

GOOD, BAD = 0.10, 0.30
"""Share of the tolerance up to which a gauge is fit, and above which it is not (common practice, no source)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GaugeView:
    """The record of a gauge study with the conditions and findings that come of it."""

    result: GaugeResult | None = None
    conditions: tuple[Condition, ...] = ()
    findings: tuple[Finding, ...] = ()


def gauge_view(asked: Characteristic, study: GaugeStudy | None, s: float, pp: Estimate | None) -> GaugeView:
    """What a gauge study says of the statement about a process.

    Parameters
    ----------
    study : the readings, None where the workbook holds none
    s : standard deviation of the measured values of the characteristic
    pp : observed Pp, None without both limits
    """
    if study is None:
        return GaugeView(findings=(_no_study(),))
    try:
        found = gauge_study(study.values, study.parts, study.appraisers, tolerance=tolerance_of(asked.limits))
    except DataError as error:
        text = (
            f"The gauge study cannot be evaluated: {error}. Send every part measured equally often by each appraiser."
        )
        return GaugeView(
            findings=(Finding(code="gauge-study-unusable", level="caution", text=text, cells=study.cells),)
        )
    text = _sentence(found, s, pp, asked.unit)
    share = found.gauge.share_of_tolerance
    if share is not None and share > BAD:
        return GaugeView(result=_record(found, s, text), conditions=(_too_much(text, study),))
    level: Level = "note" if share is None or share <= GOOD else "caution"
    return GaugeView(result=_record(found, s, text), findings=(Finding(code="gauge-study", level=level, text=text),))


def tolerance_of(limits: Limits) -> float | None:
    """Width between the limits; a natural bound stands for a limit that is not there. None where one side is open."""
    low = limits.lower if limits.lower is not None else limits.natural_lower
    high = limits.upper if limits.upper is not None else limits.natural_upper
    return None if low is None or high is None or high <= low else high - low


def _no_study() -> Finding:
    return Finding(
        code="no-gauge-study",
        level="note",
        text="No gauge study was given: how much of the spread is the gauge's is unknown; the index "
        "is that of process and gauge together.",
    )


def _record(found: StudiedGauge, s: float, text: str) -> GaugeResult:
    return GaugeResult(
        repeatability=found.repeatability.sigma,
        reproducibility=0.0 if found.reproducibility is None else found.reproducibility.sigma,
        total=found.gauge.sigma,
        share_of_tolerance=found.gauge.share_of_tolerance,
        share_of_spread=min(1.0, found.gauge.sigma / s) if s > 0 else None,
        distinct_categories=found.distinct_categories,
        text=text,
    )


def _sentence(found: StudiedGauge, s: float, pp: Estimate | None, unit: str) -> str:
    sigma = f"{number(found.gauge.sigma)}{' ' + unit if unit else ''}"
    text = f"The gauge spreads with s {sigma}"
    if found.gauge.share_of_tolerance is not None:
        text += f", {percent(found.gauge.share_of_tolerance)} of the tolerance (six of it against the width)"
    if s > 0:
        text += f", {percent(min(1.0, found.gauge.sigma / s))} of the spread of the measured values"
    text += "."
    if found.gauge.share_of_tolerance is None or pp is None or pp.estimate is None:
        return text
    rest = 1 / pp.estimate**2 - found.gauge.share_of_tolerance**2
    if rest <= 0:
        return f"{text} It accounts for the whole observed spread: of the process itself nothing is seen."
    alone = to_two_decimals(1 / math.sqrt(rest))
    return f"{text} Of the observed Pp of {to_two_decimals(pp.estimate)} the process alone would have about {alone}."


def _too_much(text: str, study: GaugeStudy) -> Condition:
    return Condition(
        code="gauge-takes-too-much",
        reason=f"{text} More than {percent(BAD)} of the tolerance is not fit for a statement (common practice).",
        remedy="Measure with a better gauge, or repeat the readings and average them.",
        cells=study.cells[:1],
    )
