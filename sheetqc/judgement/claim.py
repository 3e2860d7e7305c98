"""The sender's claim explained: the claimed index recomputed under all usual conventions."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.finding import Cell, Finding, Level
from sheetqc.judgement.capability import Capability
from sheetqc.judgement.wording import index as to_two_decimals
from sheetqc.judgement.wording import listed, number
from sheetqc.stats.families import family
from sheetqc.stats.within import (
    mean_range_spread,
    mean_s_spread,
    median_moving_range_spread,
    moving_range_spread,
    pooled_spread,
)
from sheetqc.study import Characteristic, Limits, Sample

Values = NDArray[np.float64]
Groups = tuple[tuple[int, ...], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Convention:
    """One usual way to compute an index, and what it gives here."""

    words: str
    value: float


def claim_findings(
    asked: Characteristic, sample: Sample, groups: Groups | None, capability: Capability
) -> tuple[Finding, ...]:
    """What becomes of a claimed index: which convention reproduces it, or that none does.

    A claim counts as reproduced by a convention whose value rounds to the claimed one at the digits the claim shows.
    """
    claimed = asked.claimed_value
    if claimed is None or capability.indices.Ppk is None:
        return ()
    name = asked.claimed_index or "index"
    half = half_of_the_last_digit(claimed)
    every = tuple(conventions(np.asarray(sample.values), asked.limits, sample, groups, capability))
    fitting = [c for c in every if abs(c.value - claimed) <= half * (1 + 1e-9)]
    cells = tuple(cell for field in ("claimed_value",) if (cell := asked.cell(field)) is not None)
    if fitting:
        return (_reproduced(name, claimed, fitting, capability, cells),)
    return (_not_reproduced(name, claimed, every, cells),)


def half_of_the_last_digit(value: float) -> float:
    """Half a unit of the last digit a number is written with; of the second decimal at the finest."""
    text = f"{value:.6f}".rstrip("0")
    decimals = min(max(len(text) - text.index(".") - 1, 1), 3)
    return 0.5 * 10.0**-decimals


def conventions(
    values: Values, limits: Limits, sample: Sample, groups: Groups | None, capability: Capability
) -> Iterator[Convention]:
    """Every usual convention with its value: spreads, both-sided and one-sided forms, quantiles, left-out values."""
    yield from _normal_forms(values, limits, groups, "")
    for model in capability.models:
        if model.ppk is not None and model.family != "normal":
            yield Convention(words=f"Ppk by quantiles of the {family(model.family).title} model", value=model.ppk)
        if model.pp is not None and model.family != "normal":
            yield Convention(words=f"Pp by quantiles of the {family(model.family).title} model", value=model.pp)
    put_back = [place.value for place in sample.left_out if place.value is not None]
    if put_back:
        yield from _normal_forms(np.append(values, put_back), limits, None, ", left-out values put back")
    far = int(np.argmax(np.abs(values - values.mean())))
    if len(values) > 3:
        yield from _normal_forms(np.delete(values, far), limits, None, f", value {far + 1} left out")


def _normal_forms(values: Values, limits: Limits, groups: Groups | None, more: str) -> Iterator[Convention]:
    if np.ptp(values) == 0:
        return
    mean = float(values.mean())
    for letter, words, sigma in _spreads(values, groups):
        if sigma <= 0:
            continue
        upper = None if limits.upper is None else (limits.upper - mean) / (3 * sigma)
        lower = None if limits.lower is None else (mean - limits.lower) / (3 * sigma)
        sides = [side for side in (lower, upper) if side is not None]
        yield Convention(words=f"{letter}k with {words}{more}", value=min(sides))
        if upper is not None and lower is not None:
            yield Convention(words=f"{letter} with {words}{more}", value=(upper + lower) / 2)
            yield Convention(words=f"the better side of {letter}k with {words}{more}", value=max(sides))
        elif upper is not None and limits.natural_lower is not None:
            both = (limits.upper - limits.natural_lower) / (6 * sigma) if limits.upper is not None else 0.0
            yield Convention(words=f"{letter} with {words}, the natural bound taken for a limit{more}", value=both)


def _spreads(values: Values, groups: Groups | None) -> Iterator[tuple[str, str, float]]:
    """Letter of the index, the spread in words, and its value."""
    yield "Pp", "s of all values", float(values.std(ddof=1))
    yield "Pp", "s of all values with divisor n", float(values.std())
    if np.any(np.diff(values) != 0):
        yield "Cp", "the mean moving range / d2", moving_range_spread(values).sigma
        yield "Cp", "the median moving range", median_moving_range_spread(values)
    if groups is not None:
        rows = [values[list(group)] for group in groups]
        for estimator in (mean_range_spread, mean_s_spread, pooled_spread):
            found = estimator(rows)
            yield "Cp", found.method, found.sigma


def _reproduced(
    name: str, claimed: float, fitting: Sequence[Convention], capability: Capability, cells: tuple[Cell, ...]
) -> Finding:
    ppk = capability.indices.Ppk
    text = f"The claimed {name} of {number(claimed)} is reproduced as {listed([c.words for c in fitting], most=3)}"
    if ppk is None or ppk.estimate is None:
        return Finding(code="claim-reproduced", level="note", text=f"{text}.", cells=cells)
    text += f"; under the model in use Ppk is {to_two_decimals(ppk.estimate)}"
    if ppk.lower is not None:
        text += f", at least {to_two_decimals(ppk.lower)}"
    level: Level = "caution" if ppk.estimate < claimed - 0.05 else "note"
    return Finding(code="claim-reproduced", level=level, text=f"{text}.", cells=cells)


def _not_reproduced(name: str, claimed: float, every: Sequence[Convention], cells: tuple[Cell, ...]) -> Finding:
    nearest = min(every, key=lambda c: abs(c.value - claimed))
    return Finding(
        code="claim-not-reproduced",
        level="caution",
        text=f"The claimed {name} of {number(claimed)} is reproduced by none of {len(every)} ways to compute it from "
        f"these values; the nearest is {nearest.words}, {to_two_decimals(nearest.value)}. Ask how it was computed, and "
        "from which values.",
        cells=cells,
    )
