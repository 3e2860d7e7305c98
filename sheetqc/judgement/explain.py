"""The answers in words, and the findings that a reader should weigh beside the verdict."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from sheetqc.assessment import Estimate, Nonconforming, Observed, Verdict
from sheetqc.finding import Finding
from sheetqc.judgement.capability import Capability
from sheetqc.judgement.data import DataView
from sheetqc.judgement.shape import Shape
from sheetqc.judgement.terms import Terms
from sheetqc.judgement.wording import index as to_two_decimals
from sheetqc.judgement.wording import number, percent, plural, ppm
from sheetqc.stats.families import family
from sheetqc.study import Characteristic

Values = NDArray[np.float64]


def answers(data: DataView, steady: str, shape: str, capable: str, verdict: Verdict) -> tuple[tuple[str, str], ...]:
    """The chain of questions with their answers, each a few sentences."""
    return (
        ("data", data.answer),
        ("steady", steady),
        ("shape", shape),
        ("capable", capable),
        ("next", " ".join(verdict.next_steps) or "Nothing more is asked for."),
    )


def capable_answer(capability: Capability, index: str, verdict: Verdict, values: Values, asked: Characteristic) -> str:
    """How capable, how sure, and how far beyond the data the statement reaches."""
    estimate = getattr(capability.indices, index)
    if estimate is None or estimate.estimate is None:
        return "No index can be given."
    text = " ".join(verdict.reasons) if verdict.state != "no verdict" else _past_only(estimate, index)
    return " ".join(part for part in (text, _rates(capability.nonconforming), _reach(values, asked)) if part)


def _past_only(estimate: Estimate, index: str) -> str:
    lower = "" if estimate.lower is None else f", at least {to_two_decimals(estimate.lower)} were the conditions met"
    return (
        f"{index} {to_two_decimals(estimate.estimate or 0.0)}{lower}. The number describes these values only; "
        "it is no statement about the process."
    )


def _rates(found: Nonconforming) -> str:
    seen, expected = found.observed, found.expected
    if seen is None or expected is None or expected.estimate is None:
        return ""
    text = (
        f"{seen.count} of {seen.of} values lie outside the limits, which alone bounds the rate at {ppm(seen.upper)}; "
        f"the model in use expects {ppm(expected.estimate)} in the long run"
    )
    return text + ("." if expected.upper is None else f", at most {ppm(expected.upper)}.")


def _reach(values: Values, asked: Characteristic) -> str:
    """How far the nearer limit lies beyond anything measured, in standard deviations."""
    s, limits = float(np.std(values, ddof=1)), asked.limits
    gaps = []
    if limits.upper is not None:
        gaps.append(((limits.upper - float(values.max())) / s, "upper", "largest"))
    if limits.lower is not None:
        gaps.append(((float(values.min()) - limits.lower) / s, "lower", "smallest"))
    gap, side, end = min(gaps, default=(0.0, "", ""))
    if gap <= 0:
        return ""
    return (
        f"The {side} limit lies {number(gap, 2)} standard deviations beyond the {end} value measured: what happens "
        "there is the model's word, not the data's."
    )


def next_steps(estimate: Estimate | None, state: str, terms: Terms, count: int) -> tuple[str, ...]:
    """What would settle the matter, for a verdict whose conditions hold."""
    if estimate is None or estimate.estimate is None or state in ("shown", "no verdict"):
        return ("Keep the process under observation and repeat the study when something changes.",)
    if state == "likely":
        return (_more_values(estimate, terms, count),)
    if state == "doubtful":
        return (
            "Reduce the spread or move the mean away from the nearer limit, then repeat the study; more values alone "
            "are unlikely to show the requirement.",
        )
    return (
        "Improve the process before the requirement can be met; until then agree with the customer how the parts are "
        "to be sorted.",
    )


def _more_values(estimate: Estimate, terms: Terms, count: int) -> str:
    """Roughly how many values would lift the bound to the requirement, were the estimate to stay.

    The distance of a bound from the estimate shrinks with the root of the number of values.
    """
    value, lower = estimate.estimate or 0.0, estimate.lower
    if lower is None or value <= terms.requirement * 1.001:
        return "The estimate stands right at the requirement: more values will not settle it, a better process will."
    needed = math.ceil(count * ((value - lower) / (value - terms.requirement)) ** 2)
    if needed > 20 * count:
        return "The estimate stands close to the requirement: a better process will settle it, more values hardly."
    return (
        f"If the estimate stays where it is, roughly {plural(needed, 'value')} in all would show the requirement "
        f"({plural(max(needed - count, 1), 'more value')}, best from further batches)."
    )


def findings_of(shape: Shape, capability: Capability, asked: Characteristic) -> Iterator[Finding]:
    """Findings that come of models and rates taken together."""
    if shape.prior == "open" and asked.kind == "":
        yield Finding(
            code="kind-not-declared",
            level="note",
            text="No kind of characteristic is given, so every model had to be considered. Naming the kind narrows "
            "them on engineering grounds and makes the bounds tighter.",
        )
    yield from _spread_of_models(capability)
    yield from _contradiction(capability.nonconforming)
    if asked.critical_class:
        yield Finding(
            code="critical-class",
            level="caution",
            text=f"The characteristic is marked {asked.critical_class}: the verdict is a statistical one and does not "
            "replace what drawing, contract and safety rules ask for.",
        )


def _spread_of_models(capability: Capability) -> Iterator[Finding]:
    free = [m for m in capability.models if m.ppk is not None and not m.objection and m.weight >= 0.01]
    if len(free) < 2:
        return
    least, most = min(free, key=lambda m: m.ppk or 0.0), max(free, key=lambda m: m.ppk or 0.0)
    yield Finding(
        code="depends-on-model",
        level="note",
        text=f"Ppk depends on the model: among {len(free)} models the data do not object to it runs from "
        f"{to_two_decimals(least.ppk or 0.0)} ({family(least.family).title}) to {to_two_decimals(most.ppk or 0.0)} "
        f"({family(most.family).title}).",
    )


def _contradiction(found: Nonconforming) -> Iterator[Finding]:
    seen, expected = found.observed, found.expected
    if seen is None or expected is None or expected.estimate is None:
        return
    if expected.estimate < seen.lower or expected.estimate > seen.upper:
        yield Finding(
            code="observed-against-expected",
            level="caution",
            text=f"Observed and expected nonconforming contradict each other: {_observed(seen)}, while the model in "
            f"use expects {ppm(expected.estimate)}. Trust the count; the model does not describe this tail.",
        )


def _observed(seen: Observed) -> str:
    between = f"between {percent(seen.lower / 1e6)} and {percent(seen.upper / 1e6)}"
    return f"{seen.count} of {seen.of} values outside ({between})"
