"""The points of the control chart with their limits, and those that break a rule."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sheetqc.assessment import ChartTrack
from sheetqc.sheets.cells import NA, Column
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.values import Values

HEADS = ("point", "label", "value", "centre", "lower", "upper", "outside")


@dataclass(frozen=True, slots=True, kw_only=True)
class Track:
    """One track of the control chart."""

    title: str
    point: Column
    value: Column
    centre: Column
    lower: Column
    upper: Column
    outside: Column


def write_track(job: Job, ground: Ground, track: ChartTrack, values: Values, *, place: bool) -> Track:
    """Writes a track; `place` is True for that of values or means, whose points are formulas on the values."""
    column = ground.block(track.title, tuple(job.say(f"work.control.{k}") for k in HEADS))
    pen, look = job.pen, job.decimals
    number_format = look.mean if place else look.spread
    rows = range(len(track.points))
    point = pen.numbers(FIRST, column, [i + 1 for i in rows])
    for i, label in zip(rows, job.assessment.stability.labels, strict=False):
        pen.text(FIRST + i, column + 1, label, "small")
    formulas = _means(job, track, values) if place else None
    value = (
        pen.numbers(FIRST, column + 2, track.points, number_format)
        if formulas is None
        else pen.formulas(FIRST, column + 2, formulas, track.points, number_format)
    )
    centre = pen.numbers(FIRST, column + 3, track.centre, number_format)
    lower = pen.numbers(FIRST, column + 4, track.lower, number_format)
    upper = pen.numbers(FIRST, column + 5, track.upper, number_format)
    v, lo, hi = ([c.at(i).ref for i in rows] for c in (value, lower, upper))
    outside = pen.formulas(
        FIRST,
        column + 6,
        [f"IF(OR({v[i]}<{lo[i]},{v[i]}>{hi[i]}),{v[i]},NA())" for i in rows],
        [p if p < a or p > b else NA for p, a, b in zip(track.points, track.lower, track.upper, strict=True)],
        number_format,
    )
    return Track(title=track.title, point=point, value=value, centre=centre, lower=lower, upper=upper, outside=outside)


def _means(job: Job, track: ChartTrack, values: Values) -> list[str] | None:
    """Each point as the mean of consecutive values; None where the points are something else."""
    sizes = job.assessment.stability.sizes or (1,) * len(track.points)
    if len(sizes) != len(track.points) or sum(sizes) != values.count:
        return None
    ends = np.cumsum(sizes)
    formulas, data = [], job.values
    for size, end, point in zip(sizes, ends, track.points, strict=True):
        mean = float(np.mean(data[end - size : end]))
        if abs(mean - point) > 1e-12 * max(abs(mean), abs(point)):
            return None
        part = values.value.part(int(end - size), size)
        formulas.append(values.value.at(int(end - 1)).ref if size == 1 else f"AVERAGE({part.ref})")
    return formulas
