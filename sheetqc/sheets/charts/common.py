"""The common look of the charts: axes, lines, labels."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from xlsxwriter import Workbook

from sheetqc.finding import quoted
from sheetqc.sheets import layout
from sheetqc.sheets.axis import Axis
from sheetqc.sheets.cells import Column
from sheetqc.sheets.charts.explicit import ExplicitScatter, scatter
from sheetqc.sheets.formats import FONT
from sheetqc.sheets.palette import ACCENT, HAIRLINE, INK, MUTED, PAPER

Options = dict[str, Any]


def font(size: float = 8, color: str = MUTED, **more: Any) -> Options:
    """A chart font."""
    return {"name": FONT, "size": size, "color": color, "bold": False, **more}


def solid(color: str, width: float = 1.0) -> Options:
    """A continuous line."""
    return {"color": color, "width": width}


LIMIT = {"color": INK, "width": 1.5, "dash_type": "dash"}
"""Specification limits: long dashes."""

CONTROL = {"color": ACCENT, "width": 1.0, "dash_type": "round_dot"}
"""Control limits: dots."""

CENTRE = {"color": MUTED, "width": 0.75}
"""A mean or centre line: thin, continuous."""

REQUIRED = {"color": INK, "width": 1.5, "dash_type": "long_dash_dot"}
"""The requirement: dash and dot."""

NO_LINE = {"none": True}
NO_MARKER = {"type": "none"}


class Drawing:
    """A scatter chart in the making, drawn from columns of one sheet.

    Parameters
    ----------
    workbook : the workbook that is being written
    sheet : name of the sheet that holds the columns
    title : what is shown, for people
    rows : height in rows of the page
    """

    def __init__(self, workbook: Workbook, sheet: str, title: str, rows: int) -> None:
        self.chart: ExplicitScatter = scatter(workbook)
        self.height = rows * layout.ROW
        self._sheet = sheet
        self.chart.set_size({"width": layout.PICTURE_WIDTH, "height": self.height})
        self.chart.set_title(
            {
                "name": title,
                "overlay": True,
                "layout": {"x": 0.006, "y": 3 / self.height},
                "name_font": font(9, INK, bold=True),
            }
        )
        self.chart.set_legend({"none": True})
        self.chart.set_chartarea({"border": {"none": True}, "fill": {"color": PAPER}})

    def place(self, *, left: int = 54, right: int = 70, top: int = 26, bottom: int = 22) -> None:
        """Where the plot stands: what is left free on each side, in pixels."""
        width, height = layout.PICTURE_WIDTH, self.height
        shares = {
            "x": left / width,
            "y": top / height,
            "width": (width - left - right) / width,
            "height": (height - top - bottom) / height,
        }
        self.chart.set_plotarea({"layout": shares, "border": {"none": True}, "fill": {"none": True}})

    def line(self, x: Column, y: Column, line: Options, *, name: str = "", label: Options | None = None) -> None:
        """A line without markers."""
        self._series(x, y, name, {"line": line, "marker": NO_MARKER}, label)

    def points(
        self, x: Column, y: Column, marker: Options, *, line: Options | None = None, name: str = "", **more: Any
    ) -> None:
        """Markers, joined by a line where one is given."""
        self._series(x, y, name, {"line": line or NO_LINE, "marker": marker, **more}, None)

    def _series(self, x: Column, y: Column, name: str, look: Options, label: Options | None) -> None:
        series: Options = {"categories": [self._sheet, *x.span], "values": [self._sheet, *y.span], **look}
        if name:
            series["name"] = name
        if label is not None:
            series["data_labels"] = label
        self.chart.add_series(series)

    def cells(self, column: Column) -> str:
        """A column as error bars want it."""
        return f"={quoted(self._sheet)}!{column.ref}"

    def axes(self, x: Options, y: Options) -> None:
        """Both axes."""
        self.chart.set_x_axis(x)
        self.chart.set_y_axis(y)


def numeric(axis: Axis, *, grid: bool = True, title: str = "", **more: Any) -> Options:
    """An axis of numbers."""
    options: Options = {
        "min": axis.minimum,
        "max": axis.maximum,
        "major_unit": axis.step,
        "num_format": axis.number_format,
        "num_font": font(),
        "line": solid(HAIRLINE, 0.75),
        "major_tick_mark": "none",
        "minor_tick_mark": "none",
        "label_position": "low",
        "major_gridlines": {"visible": grid, "line": solid("#E6EAEE", 0.5)},
    }
    if title:
        options |= {"name": title, "name_font": font(8, MUTED)}
    return options | more


def hidden(minimum: float, maximum: float) -> Options:
    """An axis that gives the scale but is not seen."""
    return {
        "min": minimum,
        "max": maximum,
        "label_position": "none",
        "line": {"none": True},
        "major_tick_mark": "none",
        "minor_tick_mark": "none",
        "major_gridlines": {"visible": False},
    }


def label_at_end(text: str, *, position: str, color: str = INK) -> Options:
    """The name of a two-point line at its second end."""
    look = font(8, color)
    return {
        "value": True,
        "custom": [{"delete": True}, {"value": text, "font": look}],
        "position": position,
        "font": look,
    }


def texts(values: Sequence[str], *, position: str, look: Options) -> Options:
    """A text at each point instead of its value."""
    return {"value": True, "custom": [{"value": v, "font": look} for v in values], "position": position, "font": look}


def dot(color: str = ACCENT, size: int = 4, kind: str = "circle") -> Options:
    """A marker. Filled: some spreadsheets do not draw hollow ones."""
    return {"type": kind, "size": size, "border": {"color": color}, "fill": {"color": color}}
