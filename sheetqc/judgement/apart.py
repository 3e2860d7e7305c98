"""Values that stand apart: flagged, kept, and shown with and without. None is ever left out for standing apart."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.finding import Finding
from sheetqc.judgement.shape import TAIL, Shape, normal_scores
from sheetqc.judgement.wording import index as to_two_decimals
from sheetqc.judgement.wording import listed, number
from sheetqc.stats.families import family
from sheetqc.stats.indices import quantile_capability
from sheetqc.stats.outlying import outliers
from sheetqc.study import Limits, Sample

Values = NDArray[np.float64]

SIGNIFICANCE = 0.01
"""Share of sound samples in which a value is said to stand apart."""


def apart_findings(values: Values, sample: Sample, limits: Limits, shape: Shape) -> tuple[Finding, ...]:
    """Values that stand apart under the model in use, with the index with and without them.

    Parameters
    ----------
    values : shape (n,)
    """
    scores = normal_scores(values, shape.fit_in_use)
    if len(values) < 10 or np.ptp(scores) == 0:
        return ()
    found = outliers(scores, alpha=SIGNIFICANCE)
    if found.count == 0:
        return ()
    places = [place - 1 for place in found.places]
    rest = np.delete(values, places)
    each = listed([f"value {p + 1} ({number(float(values[p]), 6)})" for p in places])
    verb, they = ("stands", "it") if len(places) == 1 else ("stand", "them")
    return (
        Finding(
            code="stands-apart",
            level="caution",
            text=f"{each[0].upper()}{each[1:]} {verb} apart from the others. "
            f"{_with_and_without(values, rest, limits, shape)}All is computed with {they}; leaving out needs "
            "a reason found at the part or the gauge, written under Leave out.",
            cells=tuple(sample.cells[p] for p in places if p < len(sample.cells)),
        ),
    )


def _with_and_without(values: Values, rest: Values, limits: Limits, shape: Shape) -> str:
    both, alone = (_index(row, limits, shape.in_use) for row in (values, rest))
    if both is None or alone is None:
        return ""
    return f"Ppk is {to_two_decimals(both)} with and {to_two_decimals(alone)} without. "


def _index(values: Values, limits: Limits, name: str) -> float | None:
    member = family(name)
    if np.ptp(values) == 0 or member.refusal(values):
        return None
    theta = member.fit(values)
    low, median = float(member.quantile(TAIL, theta)), float(member.quantile(0.5, theta))
    high = float(member.upper_quantile(TAIL, theta))
    return quantile_capability(low, median, high, limits.lower, limits.upper).Ppk
