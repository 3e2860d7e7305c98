"""The control chart: points, centre lines and limits as formulas wherever they follow from the values that way."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from sheetqc.assessment import ChartTrack
from sheetqc.sheets.cells import NA, Column, Placed
from sheetqc.sheets.expressions import constant, prefixed
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.quantities import Quantities
from sheetqc.sheets.workings.values import Values

HEADS = ("point", "label", "value", "end_x", "centre", "lower", "upper", "outside", "signal")

FEW = 0.4
"""Share of the points up to which a signal is marked point by point."""

Limit = tuple[str, float]
"""A formula and the value it gives."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Track:
    """One track of the control chart; limits that are the same for all points stand for the first and the last."""

    title: str
    point: Column
    value: Column
    end_x: Column
    centre: Column
    lower: Column
    upper: Column
    outside: Column
    signal: Column | None
    """Points of other signals, as of the analysis."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ControlChart:
    """Both tracks; None where there is no such track."""

    location: Track | None = None
    spread: Track | None = None


def write_control(job: Job, ground: Ground, quantities: Quantities, values: Values) -> ControlChart:
    """Writes both tracks and adds the spread within subgroups to the quantities.

    A formula is used only where it gives what the analysis found; everything else stands as a number.
    """
    found = job.assessment.stability
    location = spread = None
    if found.spread is not None:
        spread = _write_spread(job, ground, quantities, values, found.spread)
    elif found.within_s is not None:
        quantities.constant("within_s", found.within_s, job.decimals.spread, name="s_within")
    if found.location is not None:
        location = _write_location(job, ground, quantities, values, found.location)
    return ControlChart(location=location, spread=spread)


def _write_spread(job: Job, ground: Ground, quantities: Quantities, values: Values, track: ChartTrack) -> Track:
    within, look = job.assessment.stability.within_s, job.decimals.spread
    column = _block(job, ground, track)
    point = _write_points(job, column, track, _spread_formulas(job, track, values), look)
    centre, same = track.centre[0], len(set(track.centre)) == 1
    mean = float(np.mean(track.points))
    if within is not None and within > 0 and same and _alike(mean, centre):
        placed = quantities.add("spread_mean", f"AVERAGE({point.ref})", centre, look)
        divisor = quantities.constant("spread_constant", centre / within, "0.0000")
        quantities.add("within_s", f"{placed.ref}/{divisor.ref}", within, look, name="s_within", analysed=within)
        ends = [_multiples(placed, e) for e in (track.centre, track.lower, track.upper)]
        return _write_track(job, column, track, point, ends, look)
    if within is not None:
        quantities.constant("within_s", within, look, name="s_within")
    return _write_track(job, column, track, point, [None, None, None], look)


def _write_location(job: Job, ground: Ground, quantities: Quantities, values: Values, track: ChartTrack) -> Track:
    look = job.decimals.mean
    column = _block(job, ground, track)
    point = _write_points(job, column, track, _mean_formulas(job, track, values), look)
    centre, same = track.centre[0], len(set(track.centre)) == 1
    ends: list[list[Limit] | None] = [None, None, None]
    if same and _alike(float(np.mean(track.points)), centre) and "within_s" in quantities:
        placed = quantities.add("place_mean", f"AVERAGE({point.ref})", centre, look)
        within = quantities["within_s"]
        sizes = job.assessment.stability.sizes or (1,) * len(track.points)
        ends = [
            [(placed.ref, centre)] * len(track.points),
            _shifted(placed, within, track.lower, sizes, -3),
            _shifted(placed, within, track.upper, sizes, 3),
        ]
    return _write_track(job, column, track, point, ends, look)


def _block(job: Job, ground: Ground, track: ChartTrack) -> int:
    column = ground.block(track.title, tuple(job.say(f"work.control.{k}") for k in HEADS))
    labels = job.assessment.stability.labels
    # a moving range belongs to the later of its two values
    for i, label in enumerate(labels[len(labels) - len(track.points) :]):
        job.pen.text(FIRST + i, column + 1, label, "small")
    return column


def _write_points(job: Job, column: int, track: ChartTrack, formulas: list[str] | None, look: str) -> Column:
    if formulas is None:
        return job.pen.numbers(FIRST, column + 2, track.points, look)
    return job.pen.formulas(FIRST, column + 2, formulas, track.points, look)


def _write_track(
    job: Job, column: int, track: ChartTrack, value: Column, ends: Sequence[list[Limit] | None], look: str
) -> Track:
    pen, rows = job.pen, range(len(track.points))
    first = max(0, len(job.assessment.stability.labels) - len(track.points)) + 1
    point = pen.numbers(FIRST, column, [first + i for i in rows])
    level = all(len(set(numbers)) == 1 for numbers in (track.centre, track.lower, track.upper))
    shown = (0, len(track.points) - 1) if level else tuple(rows)
    end_x = pen.numbers(FIRST, column + 3, [first + i for i in shown])
    columns = []
    for offset, numbers, formulas in zip((4, 5, 6), (track.centre, track.lower, track.upper), ends, strict=True):
        if formulas is None:
            columns.append(pen.numbers(FIRST, column + offset, [numbers[i] for i in shown], look))
        else:
            told = [formulas[i] for i in shown]
            columns.append(pen.formulas(FIRST, column + offset, [t[0] for t in told], [t[1] for t in told], look))
    v = [value.at(i).ref for i in rows]
    lo, hi = ([c.at(0 if level else i).ref for i in rows] for c in (columns[1], columns[2]))
    outside = pen.formulas(
        FIRST,
        column + 7,
        [f"IF(OR({v[i]}<{lo[i]},{v[i]}>{hi[i]}),{v[i]},NA())" for i in rows],
        [p if p < a or p > b else NA for p, a, b in zip(track.points, track.lower, track.upper, strict=True)],
        look,
    )
    return Track(
        title=track.title,
        point=point,
        value=value,
        end_x=end_x,
        centre=columns[0],
        lower=columns[1],
        upper=columns[2],
        outside=outside,
        signal=_write_signals(job, column, track, value, look),
    )


def _write_signals(job: Job, column: int, track: ChartTrack, value: Column, look: str) -> Column | None:
    """The points that a signal is about, other than those beyond limits; only on the track of place."""
    if track is not job.assessment.stability.location:
        return None
    told = [s.points for s in job.assessment.stability.signals if 0 < len(s.points) <= FEW * len(track.points)]
    points = {p for several in told for p in several}
    rows = range(len(track.points))
    inside = [track.lower[i] <= track.points[i] <= track.upper[i] for i in rows]
    marked = [i + 1 in points and inside[i] for i in rows]
    if not any(marked):
        return None
    refs = [value.at(i) for i in rows]
    formulas = [refs[i].ref if marked[i] else "NA()" for i in rows]
    return job.pen.formulas(FIRST, column + 8, formulas, [refs[i].number if marked[i] else NA for i in rows], look)


def _alike(a: float, b: float) -> bool:
    return abs(a - b) <= 1e-11 * max(abs(a), abs(b))


def _multiples(mean: Placed, ends: Sequence[float]) -> list[Limit]:
    """Limits of spread: multiples of the centre line, such as D4."""
    factors = [end / mean.number for end in ends]
    return [
        (mean.ref if f == 1 else "0" if f == 0 else f"{constant(f)}*{mean.ref}", end)
        for f, end in zip(factors, ends, strict=True)
    ]


def _shifted(
    mean: Placed, within: Placed, ends: Sequence[float], sizes: Sequence[int], sign: int
) -> list[Limit] | None:
    """Limits of place at three standard errors; None where the limits are others."""
    limits = []
    for end, size in zip(ends, sizes, strict=True):
        if abs(mean.number + sign * within.number / math.sqrt(size) - end) > 1e-11 * max(abs(end), within.number):
            return None
        limits.append((f"{mean.ref}{sign:+d}*{within.ref}/SQRT({size})", end))
    return limits


def _mean_formulas(job: Job, track: ChartTrack, values: Values) -> list[str] | None:
    """Each point as the mean of consecutive values; None where the points are something else."""
    return _of_groups(job, track, values, "AVERAGE({0})", lambda group: float(np.mean(group)))


def _spread_formulas(job: Job, track: ChartTrack, values: Values) -> list[str] | None:
    """Each point as a moving range, a range or a standard deviation; None where the points are something else."""
    data = job.values
    if len(track.points) == len(data) - 1 and all(
        _alike(abs(float(b - a)), p) for a, b, p in zip(data, data[1:], track.points, strict=False)
    ):
        refs = [values.value.at(i).ref for i in range(len(data))]
        return [f"ABS({b}-{a})" for a, b in pairwise(refs)]
    return _of_groups(job, track, values, "MAX({0})-MIN({0})", lambda g: float(np.ptp(g))) or _of_groups(
        job, track, values, prefixed("STDEV.S({0})"), lambda g: float(np.std(g, ddof=1)) if len(g) > 1 else 0.0
    )


def _of_groups(
    job: Job, track: ChartTrack, values: Values, template: str, of: Callable[[NDArray[np.float64]], float]
) -> list[str] | None:
    """A function of each group of consecutive values; None where it does not give the points of the track."""
    sizes = job.assessment.stability.sizes or (1,) * len(track.points)
    if len(sizes) != len(track.points) or sum(sizes) > values.count:
        return None
    formulas, end, data = [], 0, job.values
    for size, point in zip(sizes, track.points, strict=True):
        group = data[end : end + size]
        if abs(of(group) - point) > 1e-11 * max(abs(point), float(np.ptp(data))):
            return None
        part = values.value.part(end, size).ref
        formulas.append(values.value.at(end).ref if size == 1 and "AVERAGE" in template else template.format(part))
        end += size
    return formulas
