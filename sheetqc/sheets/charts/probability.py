"""The probability plot: values against normal scores, with the model in use and the band of its order statistics."""

from __future__ import annotations

from sheetqc.sheets.charts.common import LIMIT, NO_LINE, NO_MARKER, Drawing, dot, font, hidden, numeric, solid, texts
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.palette import ACCENT, INK, MUTED
from sheetqc.sheets.workings.band import SHARES

LOWEST, HIGHEST = -3.4, 3.4
"""Ends of the scale in normal scores: a little beyond 0.135 % and 99.865 %."""


def probability_plot(request: ChartRequest) -> Drawing | None:
    """The chart; None without a model in use."""
    work, say = request.workings, request.say
    band, curve, axis, values = work.band, work.curve, work.axis, work.values
    if band is None or curve is None or axis is None or values is None:
        return None
    drawing = Drawing(
        request.workbook, request.sheet, say("chart.probability", unit=request.unit_in_words), request.rows
    )
    drawing.place(right=14)
    drawing.points(
        band.mark_x,
        band.mark,
        NO_MARKER,
        line=NO_LINE,
        name=say("chart.scale"),
        x_error_bars={
            "type": "fixed",
            "value": axis.length,
            "direction": "plus",
            "end_style": 0,
            "line": solid("#E6EAEE", 0.5),
        },
        data_labels=texts([say.percent(p) for p in SHARES], position="left", look=font()),
    )
    dotted = {"color": MUTED, "width": 0.75, "dash_type": "square_dot"}
    drawing.line(band.low, band.score, dotted, name=say("chart.band"))
    drawing.line(band.high, band.score, dotted, name=say("chart.band"))
    drawing.line(curve.x, curve.score, solid(ACCENT, 2.0), name=say("chart.model"))
    drawing.points(values.sorted, values.score, dot(INK, 3), name=say("chart.values"))
    for key, cell in (("lower", work.inputs.lower), ("upper", work.inputs.upper)):
        line = work.lines.upright(say(f"chart.{key}"), cell, axis, LOWEST, HIGHEST)
        drawing.line(line.x, line.y, LIMIT, name=say(f"chart.{key}"))
    drawing.axes(numeric(axis, grid=False, crossing="min"), hidden(LOWEST, HIGHEST) | {"crossing": "min"})
    return drawing
