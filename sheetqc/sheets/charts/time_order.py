"""The values in the order they were made, against the drawing's limits."""

from __future__ import annotations

from sheetqc.sheets.axis import Axis, nice_step
from sheetqc.sheets.charts.common import CENTRE, LIMIT, Drawing, dot, label_at_end, numeric, solid
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.palette import ACCENT, MUTED


def time_order(request: ChartRequest) -> Drawing | None:
    """The chart; None without values."""
    work, say = request.workings, request.say
    if work.values is None or work.axis is None:
        return None
    n = work.values.count
    drawing = Drawing(
        request.workbook, request.sheet, say("chart.time_order", unit=request.unit_in_words), request.rows
    )
    drawing.place()
    lines, first, last = work.lines, 0.0, n + 1.0
    for key, cell in (("lower", work.inputs.lower), ("upper", work.inputs.upper)):
        line = lines.level(say(f"chart.{key}"), cell, first, last)
        label = label_at_end(say(f"chart.{key}"), position="right")
        drawing.line(line.x, line.y, LIMIT, name=say(f"chart.{key}"), label=label)
    if "mean" in work.quantities:
        line = lines.level(say("chart.mean"), work.quantities["mean"], first, last)
        label = label_at_end(say("chart.mean"), position="right", color=MUTED)
        drawing.line(line.x, line.y, CENTRE, name=say("chart.mean"), label=label)
    drawing.points(
        work.values.number,
        work.values.value,
        dot(size=3 if n > 60 else 4),
        line=solid(ACCENT, 0.5),
        name=say("chart.values"),
    )
    drawing.axes(order_axis(n), numeric(work.axis))
    return drawing


def order_axis(n: int) -> dict[str, object]:
    """The axis of the order: from before the first to after the last."""
    step = max(1.0, nice_step(n, 8))
    return numeric(Axis(minimum=0.0, maximum=n + 1.0, step=step), grid=False)
