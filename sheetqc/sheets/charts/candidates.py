"""The candidate models: the index under each with its interval, against the requirement."""

from __future__ import annotations

from sheetqc.sheets.charts.common import (
    NO_LINE,
    NO_MARKER,
    REQUIRED,
    Drawing,
    Options,
    dot,
    font,
    hidden,
    label_at_end,
    numeric,
    solid,
    texts,
)
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.palette import ACCENT, INK, MUTED
from sheetqc.sheets.workings.intervals import Intervals


def candidate_indices(request: ChartRequest) -> Drawing | None:
    """The chart; None without an index."""
    work, say = request.workings, request.say
    rows, axis = work.intervals, work.index_axis
    if rows is None or axis is None:
        return None
    drawing = Drawing(request.workbook, request.sheet, say("chart.candidates"), request.rows)
    drawing.place(left=130, right=60)
    top = rows.rows + 1.0
    _draw_names(request, drawing, rows, axis.minimum)
    models, answer = slice_of(rows, 1, rows.rows - 1), slice_of(rows, 0, 1)
    drawing.points(
        models.index,
        models.height,
        dot(MUTED, 5),
        name=say("chart.candidate"),
        x_error_bars=_bars(drawing, models, solid(MUTED, 1.0)),
    )
    drawing.points(models.index, models.in_use, dot(ACCENT, 7), name=say("chart.in_use"))
    drawing.points(
        answer.index,
        answer.height,
        dot(INK, 8, "diamond"),
        name=say("chart.candidates.answer"),
        x_error_bars=_bars(drawing, answer, solid(INK, 2.25)),
    )
    line = work.lines.upright(say("chart.required"), work.inputs.requirement, axis, 0.3, top)
    label = label_at_end(say("chart.required"), position="right")
    drawing.line(line.x, line.y, REQUIRED, name=say("chart.required"), label=label)
    drawing.axes(numeric(axis), hidden(0.3, top + 0.2))
    return drawing


def slice_of(rows: Intervals, first: int, count: int) -> Intervals:
    """Some of the rows."""
    return Intervals(
        label=rows.label.part(first, count),
        height=rows.height.part(first, count),
        index=rows.index.part(first, count),
        less=rows.less.part(first, count),
        more=rows.more.part(first, count),
        in_use=rows.in_use.part(first, count),
    )


def _bars(drawing: Drawing, rows: Intervals, line: Options) -> Options:
    return {
        "type": "custom",
        "plus_values": drawing.cells(rows.more),
        "minus_values": drawing.cells(rows.less),
        "plus_data": list(rows.more.values),
        "minus_data": list(rows.less.values),
        "end_style": 1,
        "line": line,
    }


def _draw_names(request: ChartRequest, drawing: Drawing, rows: Intervals, left: float) -> None:
    """Names of the models left of the plot: labels of points that are not drawn."""
    x = request.workings.lines.constants(request.say("chart.names"), [left] * rows.rows)
    drawing.points(
        x,
        rows.height,
        NO_MARKER,
        line=NO_LINE,
        name=request.say("chart.names"),
        data_labels=texts([str(text) for text in rows.label.values], position="left", look=font(8, INK)),
    )
