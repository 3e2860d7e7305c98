"""All workings of one characteristic, block after block."""

from __future__ import annotations

from dataclasses import dataclass, replace

from sheetqc.sheets import layout
from sheetqc.sheets.axis import Axis
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.band import Band, write_band
from sheetqc.sheets.workings.bars import Bars, write_bars
from sheetqc.sheets.workings.candidates import Candidates, write_candidates
from sheetqc.sheets.workings.capability import add_capability, add_observed, add_within
from sheetqc.sheets.workings.control import Track, write_control
from sheetqc.sheets.workings.curve import Curve, write_curve
from sheetqc.sheets.workings.ground import Ground
from sheetqc.sheets.workings.index import limits_of
from sheetqc.sheets.workings.inputs import Inputs, write_inputs
from sheetqc.sheets.workings.intervals import Intervals, write_intervals
from sheetqc.sheets.workings.lines import Lines
from sheetqc.sheets.workings.picture import index_axis, value_axis
from sheetqc.sheets.workings.quantities import Quantities
from sheetqc.sheets.workings.regions import write_regions
from sheetqc.sheets.workings.summary import add_summary
from sheetqc.sheets.workings.values import Values, write_values
from sheetqc.sheets.workings.verdict import add_settings, add_status, add_verdict

AXIS_PIXELS = layout.PICTURE_WIDTH - 54 - 14


@dataclass(frozen=True, slots=True, kw_only=True)
class Workings:
    """What stands in the workings; None for what the values do not allow."""

    inputs: Inputs
    quantities: Quantities
    values: Values | None = None
    axis: Axis | None = None
    candidates: Candidates | None = None
    bars: Bars | None = None
    curve: Curve | None = None
    band: Band | None = None
    location: Track | None = None
    spread: Track | None = None
    intervals: Intervals | None = None
    index_axis: Axis | None = None
    lines: Lines


def write_workings(job: Job) -> Workings:
    """Writes entry cells and workings."""
    ground = Ground(job.pen)
    inputs = write_inputs(job)
    quantities = Quantities(job, ground)
    lines = Lines(job, ground)
    if not job.assessment.sample.values:
        add_verdict(job, quantities, inputs)
        return Workings(inputs=inputs, quantities=quantities, lines=lines)
    limits = limits_of(inputs)
    values = write_values(job, ground)
    quantities.constant("confidence", job.assessment.confidence, "0%", name="Confidence")
    add_summary(job, quantities, values)
    add_settings(job, quantities, inputs, limits)
    candidates = None
    if job.has_spread and inputs.model is not None:
        regions = write_regions(job, ground)
        candidates = write_candidates(job, ground, limits, regions.own, quantities["unchanged"])
    if candidates is not None:
        add_capability(job, quantities, inputs, limits, candidates, regions.whole)
    control = write_control(job, ground, quantities, values)
    add_within(job, quantities, limits)
    add_observed(job, quantities, limits, values)
    add_verdict(job, quantities, inputs)
    add_status(job, quantities)
    pictures = Workings(
        inputs=inputs,
        quantities=quantities,
        values=values,
        candidates=candidates,
        location=control.location,
        spread=control.spread,
        lines=lines,
    )
    return _with_pictures(job, ground, pictures, values)


def _with_pictures(job: Job, ground: Ground, work: Workings, values: Values) -> Workings:
    """The same with the blocks that charts draw from."""
    axis = value_axis(job)
    if not job.has_spread:
        return replace(work, axis=axis)
    bars = write_bars(job, ground, values, axis, AXIS_PIXELS)
    if work.candidates is None:
        return replace(work, axis=axis, bars=bars)
    curve = write_curve(job, ground, work.candidates, work.quantities["model"], axis, bars.width)
    return replace(
        work,
        axis=axis,
        bars=bars,
        curve=curve,
        band=write_band(job, ground, values, curve, axis),
        intervals=write_intervals(job, ground, work.candidates, work.quantities),
        index_axis=index_axis(job),
    )
