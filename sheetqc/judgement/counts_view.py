"""Counts of defects by category: ordered, with what is sure about the order."""

from __future__ import annotations

import math

from scipy.special import bdtrc

from sheetqc.assessment import CountedCategory, CountResult
from sheetqc.finding import Finding
from sheetqc.judgement.wording import percent, plural, probability
from sheetqc.stats.counting import pareto
from sheetqc.stats.errors import DataError
from sheetqc.stats.intervals import proportion_interval
from sheetqc.study import DefectCounts

ENOUGH = 1000
"""Counts from which shares are taken to be known well enough (common practice, no source: 1000 to 3000)."""

UNSURE = 0.05


def count_result(block: DefectCounts, confidence: float) -> tuple[CountResult | None, Finding]:
    """The categories of a block ordered by count, each share with bounds that hold for all of them together.

    The shares' intervals are those of Clopper & Pearson at a confidence shared out evenly (Bonferroni).
    """
    try:
        ordered = pareto(block.categories, block.counts)
    except DataError as error:
        text = f"The counts cannot be ordered: {error}."
        return None, Finding(code="counts-unusable", level="caution", text=text, cells=block.cells)
    total = sum(ordered.counts)
    each = 1 - (1 - confidence) / len(ordered.counts)
    rows = []
    for name, count, share, sum_ in zip(
        ordered.categories, ordered.counts, ordered.shares, ordered.cumulative, strict=True
    ):
        bounds = proportion_interval(count, total, each)
        rows.append(
            CountedCategory(
                category=str(name), count=count, share=share, lower=bounds.lower, upper=bounds.upper, cumulative=sum_
            )
        )
    text = _sentence(rows, total)
    level = Finding(code="counts-ordered", level="note" if total >= ENOUGH else "caution", text=text)
    return CountResult(categories=tuple(rows), total=total, text=text), level


def _sentence(rows: list[CountedCategory], total: int) -> str:
    first = rows[0]
    text = (
        f"Of {plural(total, 'defect')}, {percent(first.share)} are {first.category} (from {percent(first.lower)} to "
        f"{percent(first.upper)})."
    )
    if len(rows) > 1 and rows[1].count > 0:
        chance = _chance_of_such_a_lead(first.count, rows[1].count)
        sure = "is surely the most frequent" if chance < UNSURE else "may not be the most frequent"
        text += (
            f" It {sure}: were it level with {rows[1].category}, so large a lead had a chance of {probability(chance)}."
        )
    if total < ENOUGH:
        text += f" Common practice asks for {ENOUGH} to {3 * ENOUGH} counts over at least a month."
    return text


def _chance_of_such_a_lead(first: int, second: int) -> float:
    """Two-sided chance of a lead as large between two categories that are level."""
    both = first + second
    return min(1.0, 2 * float(bdtrc(math.ceil(first) - 1, both, 0.5)))
