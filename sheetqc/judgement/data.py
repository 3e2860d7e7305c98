"""First question: can these data carry a statement?"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.finding import Cell, Finding
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.terms import COMFORTABLE_VALUES, FEWEST_VALUES
from sheetqc.judgement.wording import listed, number, plural
from sheetqc.stats.door import LARGEST, SMALLEST_SPREAD
from sheetqc.study import Characteristic, Sample

COARSEST = 2.0
"""Steps of resolution per standard deviation below which the shape of the values cannot be seen."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DataView:
    """What the data can carry: conditions that fail, findings, the step of the readings, the answer in words."""

    conditions: tuple[Condition, ...]
    findings: tuple[Finding, ...]
    step: float | None
    usable: bool
    """Whether anything can be computed from the values at all."""
    answer: str


def data_view(asked: Characteristic, sample: Sample) -> DataView:
    """What the values of a characteristic can carry."""
    values = np.asarray(sample.values, dtype=float)
    sound = _of_a_size_that_can_be_computed(values)
    step = asked.resolution or (reading_step(values) if sound else None)
    conditions = tuple(_conditions(asked, sample, values, step))
    findings = tuple(_findings(asked, sample, values))
    usable = len(values) >= 3 and sound and bool(np.ptp(values) > 0)
    return DataView(
        conditions=conditions,
        findings=findings,
        step=step,
        usable=usable,
        answer=_answer(asked, sample, conditions, step),
    )


def reading_step(values: NDArray[np.float64]) -> float | None:
    """The step that all values are multiples of: 1, 2 or 5 times a power of ten; None when they are not rounded.

    Parameters
    ----------
    values : shape (n,)
    """
    if len(values) < 2:
        return None
    largest = float(np.max(np.abs(values))) or 1.0
    finest = int(np.ceil(-np.log10(largest))) + 9
    for decimals in range(int(np.floor(-np.log10(largest))), finest):
        for factor in (5.0, 2.0, 1.0):
            step = factor * 10.0**-decimals
            if np.all(np.abs(values - np.round(values / step) * step) <= 1e-9 * largest):
                return float(step)
    return None


def _conditions(
    asked: Characteristic, sample: Sample, values: NDArray[np.float64], step: float | None
) -> Iterator[Condition]:
    yield from _limit_conditions(asked)
    if len(values) < 3:
        yield Condition(
            code="fewer-than-three",
            reason=f"There {'is' if len(values) == 1 else 'are'} only {plural(len(values), 'value')}; nothing can be "
            "computed from fewer than 3.",
            remedy=f"Measure at least {FEWEST_VALUES} to {COMFORTABLE_VALUES} parts.",
            cells=sample.cells,
        )
        return
    if not _of_a_size_that_can_be_computed(values):
        yield Condition(
            code="absurd-values",
            reason=f"The values run from {number(float(values.min()))} to {number(float(values.max()))}: nothing "
            "measured has such a size, and nothing can be computed from it.",
            remedy="Correct the values or their unit.",
            cells=_widest(sample, values),
        )
        return
    if np.ptp(values) == 0:
        yield Condition(
            code="all-equal",
            reason=f"All {plural(len(values), 'value')} are {number(values[0], 6)}: no spread can be seen.",
            remedy="Measure with a finer resolution, or say what was measured.",
            cells=sample.cells[:1],
        )
        return
    if len(values) < FEWEST_VALUES:
        yield Condition(
            code="too-few",
            reason=f"{plural(len(values), 'value')} are too few for a capability statement; common practice asks for "
            f"{FEWEST_VALUES} to {COMFORTABLE_VALUES} at least.",
            remedy=f"Measure {plural(FEWEST_VALUES - len(values), 'more part')} at the very least, better "
            f"{COMFORTABLE_VALUES - len(values)}.",
        )
    yield from _form_conditions(sample, values, step)


def _of_a_size_that_can_be_computed(values: NDArray[np.float64]) -> bool:
    """Whether squares of the values and of their spread stay within double precision."""
    if len(values) < 2:
        return True
    spread = float(values.max() / 2 - values.min() / 2)
    return bool(np.max(np.abs(values)) <= LARGEST) and (spread == 0 or spread >= SMALLEST_SPREAD)


def _widest(sample: Sample, values: NDArray[np.float64]) -> tuple[Cell, ...]:
    place = int(np.argmax(np.abs(values)))
    return sample.cells[place : place + 1]


def _limit_conditions(asked: Characteristic) -> Iterator[Condition]:
    limits = asked.limits
    if limits.lower is None and limits.upper is None:
        yield Condition(
            code="no-limits",
            reason="There is no specification limit, so there is nothing to be capable of.",
            remedy="Give LSL, USL or both; a natural bound is not a specification.",
            cells=_cells(asked, "id"),
        )
    elif limits.lower is not None and limits.upper is not None and limits.lower >= limits.upper:
        yield Condition(
            code="limits-crossed",
            reason=f"The lower limit {number(limits.lower, 6)} is not below the upper limit {number(limits.upper, 6)}.",
            remedy="Correct the limits.",
            cells=_cells(asked, "lower", "upper"),
        )


def _cells(asked: Characteristic, *names: str) -> tuple[Cell, ...]:
    return tuple(cell for name in names if (cell := asked.cell(name)) is not None)


def _form_conditions(sample: Sample, values: NDArray[np.float64], step: float | None) -> Iterator[Condition]:
    s = float(np.std(values, ddof=1))
    if step is not None and s / step < COARSEST:
        yield Condition(
            code="resolution-too-coarse",
            reason=f"The readings step by {number(step)}, the standard deviation is {number(s)}: with fewer than "
            f"{COARSEST:g} steps to a standard deviation the shape of the process cannot be seen.",
            remedy="Read to at least one more digit.",
        )
    if any(sample.censored):
        count = sum(1 for mark in sample.censored if mark)
        yield Condition(
            code="censored-values",
            reason=f"{plural(count, 'value')} only known to lie below or above a reporting limit cannot be used as "
            "measured ones.",
            remedy="Send the readings themselves where the gauge can give them.",
            cells=tuple(c for c, mark in zip(sample.cells, sample.censored, strict=False) if mark),
        )
    if not sample.order_known or _sorted(values):
        yield Condition(
            code="order-lost",
            reason="The values do not stand in the order of their making: whether the process was steady cannot be "
            "seen any more.",
            remedy="Send them in the order of production.",
            cells=sample.cells[:1],
        )


def _sorted(values: NDArray[np.float64]) -> bool:
    steps = np.diff(values)
    return len(values) >= 10 and bool(np.all(steps >= 0) or np.all(steps <= 0))


def _findings(asked: Characteristic, sample: Sample, values: NDArray[np.float64]) -> Iterator[Finding]:
    if FEWEST_VALUES <= len(values) < COMFORTABLE_VALUES:
        yield Finding(
            code="few-values",
            level="caution",
            text=f"{len(values)} values are few: common practice asks for {FEWEST_VALUES} to {COMFORTABLE_VALUES} at "
            "least, and the bounds are wide accordingly.",
        )
    if sample.left_out:
        reasons = listed([f"{place.cell.address}: {place.reason}" for place in sample.left_out])
        yield Finding(
            code="left-out",
            level="caution",
            text=f"{plural(len(sample.left_out), 'value')} left out on the sender's word ({reasons}).",
            cells=tuple(place.cell for place in sample.left_out),
        )
    yield from _bound_findings(asked, sample, values)


def _bound_findings(asked: Characteristic, sample: Sample, values: NDArray[np.float64]) -> Iterator[Finding]:
    limits = asked.limits
    nothing = np.zeros(len(values), dtype=bool)
    below = nothing if limits.natural_lower is None else values < limits.natural_lower
    above = nothing if limits.natural_upper is None else values > limits.natural_upper
    for bound, beyond, words in (
        (limits.natural_lower, below, "below the natural lower bound"),
        (limits.natural_upper, above, "above the natural upper bound"),
    ):
        places = np.flatnonzero(beyond)
        if len(places):
            yield Finding(
                code="beyond-natural-bound",
                level="caution",
                text=f"{plural(len(places), 'value')} {words} {number(float(bound or 0.0), 6)}: either the bound or "
                "the reading is wrong.",
                cells=tuple(sample.cells[i] for i in places if i < len(sample.cells)),
            )


def _answer(asked: Characteristic, sample: Sample, conditions: tuple[Condition, ...], step: float | None) -> str:
    if conditions:
        return " ".join(c.reason for c in conditions)
    count = len(sample.values)
    text = f"Yes: {count} values"
    if step is not None:
        text += f", read in steps of {number(step)}{' ' + asked.unit if asked.unit else ''}"
    if sample.left_out:
        text += f"; {len(sample.left_out)} more left out on the sender's word"
    return text + (
        "." if count >= COMFORTABLE_VALUES else f". They are few (common practice: {FEWEST_VALUES} to 50 at least)."
    )
