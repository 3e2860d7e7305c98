"""The histogram with the density of the model in use and the limits, on one numeric axis."""

from __future__ import annotations

from sheetqc.sheets.axis import Axis, nice_step
from sheetqc.sheets.charts.common import (
    LIMIT,
    NO_LINE,
    NO_MARKER,
    Drawing,
    Options,
    dot,
    font,
    label_at_end,
    numeric,
    solid,
)
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.palette import ACCENT, BAR, INK, MUTED

POINTS_PER_PIXEL = 0.75

LABELLED = 0.15
"""Share of the axis from which a stretch without values is named."""

ARROW = {"color": MUTED, "width": 0.75}

OVERLAP = 2.2
"""Pixels by which stripes overlap, lest rounding leaves gaps."""


def histogram(request: ChartRequest) -> Drawing | None:
    """The chart; None when the values have no spread.

    The bars are filled by stripes: error bars that fall from the top of each bar to the ground.
    """
    work, say = request.workings, request.say
    bars, axis = work.bars, work.axis
    if bars is None or axis is None:
        return None
    drawing = Drawing(request.workbook, request.sheet, say("chart.histogram", unit=request.unit_in_words), request.rows)
    drawing.place(right=14, top=40)
    stripe = solid(BAR, (bars.stripe + OVERLAP) * POINTS_PER_PIXEL)
    top = _top(request)
    _draw_curve(request, drawing)
    drawing.points(
        bars.stripe_x,
        bars.stripe_y,
        NO_MARKER,
        line=NO_LINE,
        name=say("chart.bars"),
        y_error_bars={"type": "percentage", "value": 100, "direction": "minus", "end_style": 0, "line": stripe},
    )
    drawing.line(bars.outline_x, bars.outline_y, solid("#7FA9BA", 0.75), name=say("chart.bars"))
    _draw_curve(request, drawing)
    for key, cell in (("lower", work.inputs.lower), ("upper", work.inputs.upper)):
        line = work.lines.upright(say(f"chart.{key}"), cell, axis, 0.0, top.maximum)
        label = label_at_end(say(f"chart.{key}"), position="above")
        drawing.line(line.x, line.y, LIMIT, name=say(f"chart.{key}"), label=label)
    _draw_quantiles(request, drawing, axis, top)
    _draw_reach(request, drawing, axis, top)
    drawing.axes(numeric(axis, grid=False), numeric(top, num_format="0%"))
    return drawing


def _draw_curve(request: ChartRequest, drawing: Drawing) -> None:
    """The curve of the model in use; drawn first and last, since spreadsheets differ in which series lies on top."""
    curve = request.workings.curve
    if curve is not None:
        drawing.line(curve.x, curve.share, solid(ACCENT, 2.0), name=request.say("chart.model"))


def _draw_quantiles(request: ChartRequest, drawing: Drawing, axis: Axis, top: Axis) -> None:
    """Triangles on the ground at the outer quantiles of the model in use."""
    work, say = request.workings, request.say
    for key in ("x_low", "x_high"):
        if key in work.quantities:
            line = work.lines.upright(say(f"chart.{key}"), work.quantities[key], axis, 0.0, 0.07 * top.maximum)
            drawing.points(line.x.part(0, 1), line.y.part(0, 1), dot(INK, 6, "triangle"), name=say(f"chart.{key}"))


def _draw_reach(request: ChartRequest, drawing: Drawing, axis: Axis, top: Axis) -> None:
    """How far each limit lies beyond anything measured."""
    work, text = request.workings, request.say("chart.beyond")
    if "minimum" not in work.quantities:
        return
    for key, cell, upwards in (("minimum", work.inputs.lower, False), ("maximum", work.inputs.upper, True)):
        line = work.lines.reach(text, work.quantities[key], cell, 0.1 * top.maximum, upwards=upwards)
        long = abs(line.x.at(2).number - line.x.at(0).number) > LABELLED * axis.length
        drawing.line(line.x, line.y, ARROW, name=text, label=_label_in_the_middle(text) if long else None)


def _label_in_the_middle(text: str) -> Options:
    look, gone = font(8, MUTED), {"delete": True}
    return {"value": True, "custom": [gone, {"value": text, "font": look}, gone], "position": "above", "font": look}


def _top(request: ChartRequest) -> Axis:
    """The axis of the shares, with room above the highest bar and the curve."""
    bars, curve = request.workings.bars, request.workings.curve
    assert bars is not None
    highest = bars.highest
    if curve is not None:
        highest = max(highest, min(2 * highest, max(float(v) for v in curve.share.values)))
    step = nice_step(1.12 * highest, 4)
    return Axis(minimum=0.0, maximum=round(-(-1.12 * highest // step)) * step, step=step)
