"""The control chart: subgroup means or single values against the limits of their own scatter, and its spread track."""

from __future__ import annotations

from sheetqc.sheets.axis import Axis, axis_around
from sheetqc.sheets.charts.common import (
    CENTRE,
    CONTROL,
    NO_LINE,
    NO_MARKER,
    Drawing,
    dot,
    font,
    numeric,
    solid,
    texts,
)
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.charts.time_order import order_axis
from sheetqc.sheets.palette import ACCENT, INK
from sheetqc.sheets.workings.control import Track


def location_track(request: ChartRequest) -> Drawing | None:
    """The chart of means or single values; None without a control chart."""
    track = request.workings.location
    return None if track is None else _drawn(request, track, "chart.location")


def spread_track(request: ChartRequest) -> Drawing | None:
    """The chart of ranges, standard deviations or moving ranges; None without a control chart."""
    track = request.workings.spread
    return None if track is None else _drawn(request, track, "chart.spread")


def _drawn(request: ChartRequest, track: Track, title: str) -> Drawing:
    say, n = request.say, len(track.value.values)
    drawing = Drawing(
        request.workbook,
        request.sheet,
        say(title, track=track.title[:1].upper() + track.title[1:], unit=request.unit_in_words),
        request.rows,
    )
    drawing.place()
    drawing.line(track.end_x, track.lower, CONTROL, name=say("chart.control_lower"))
    drawing.line(track.end_x, track.upper, CONTROL, name=say("chart.control_upper"))
    drawing.line(track.end_x, track.centre, CENTRE, name=say("chart.centre"))
    drawing.points(track.point, track.value, dot(size=3 if n > 60 else 4), line=solid(ACCENT, 0.5), name=track.title)
    _draw_labels(request, drawing, track)
    if track.signal is not None:
        drawing.points(track.point, track.signal, dot(INK, 7, "x"), name=say("chart.signal"))
    drawing.points(track.point, track.outside, dot(INK, 7, "diamond"), name=say("chart.outside"))
    drawing.axes(order_axis(int(track.point.at(n - 1).number)), numeric(_axis(track)))
    return drawing


def _draw_labels(request: ChartRequest, drawing: Drawing, track: Track) -> None:
    """Names of the three lines, right of the last point."""
    say = request.say
    place = track.point.at(len(track.point.values) - 1).number + 1.0
    ends = [column.at(len(column.values) - 1) for column in (track.lower, track.centre, track.upper)]
    line = request.workings.lines.anchors(track.title, place, ends)
    words = [say(f"chart.control.{key}") for key in ("lower", "centre", "upper")]
    drawing.points(
        line.x,
        line.y,
        NO_MARKER,
        line=NO_LINE,
        name=say("chart.names"),
        data_labels=texts(words, position="right", look=font(8, ACCENT)),
    )


def _axis(track: Track) -> Axis:
    values = [float(v) for v in track.value.values]
    ends = [float(v) for v in (*track.lower.values, *track.upper.values)]
    return axis_around([*values, *ends], [], pieces=4, floor=0.0 if min(*values, *ends) >= 0 else None)
