"""Characteristics that were studied more than once: their index over time, and what was asked for before."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from sheetqc.register.listing import HEAD, Column, add_list
from sheetqc.register.look import ACCENT, HAIRLINE, INK, MUTED, PAPER, Formats, chart_font
from sheetqc.register.rows import Judged
from sheetqc.register.urgency import chance_wrong, weight

HISTORY = "Over time"
"""Name of the sheet."""

_MOST_CHARTS, _PER_ROW = 6, 3
_CHART_ROWS, _CHART_WIDTH, _CHART_HEIGHT = 12, 440, 276
_ISO = re.compile(r"\d{4}-\d{2}-\d{2}")


@dataclass(frozen=True, slots=True)
class Step:
    """A study in a series, with the one before it."""

    row: Judged
    before: Judged | None


def _label(step: Step) -> str:
    book = step.row.workbook
    return book.lot or book.date or book.name


COLUMNS = (
    Column("Part", 14, "text", lambda s: s.row.workbook.part_number),
    Column("Id", 9, "text", lambda s: s.row.id),
    Column("Characteristic", 22, "text", lambda s: s.row.name),
    Column("Supplier", 20, "text", lambda s: s.row.workbook.supplier),
    Column("Date", 11, "text", lambda s: s.row.workbook.date),
    Column("Lot or file", 16, "text", _label),
    Column("Values", 8, "count", lambda s: s.row.count),
    Column("Verdict", 13, "verdict", lambda s: s.row.state),
    Column("Before", 13, "verdict", lambda s: s.before.state if s.before else None),
    Column("Required", 10, "number", lambda s: s.row.requirement),
    Column("Lower bound", 10, "number", lambda s: s.row.lower),
    Column("Estimate", 10, "number", lambda s: s.row.estimate),
    Column("Upper bound", 10, "number", lambda s: s.row.upper),
    Column("Asked for before", 44, "wrapped", lambda s: s.before.next_step if s.before else ""),
    Column("Answer", 26, "link", lambda s: s.row.workbook.copy or s.row.workbook.report),
)
_NAMES = [c.heading for c in COLUMNS]


def series(rows: Sequence[Judged]) -> list[list[Judged]]:
    """Rows of the same supplier, part and characteristic with at least two studies, each in the order of time;
    the series whose latest study needs a person most come first."""
    found: dict[tuple[str, str, str], list[Judged]] = {}
    for row in rows:
        book = row.workbook
        if book.part_number:
            key = (book.supplier.lower(), book.part_number.lower(), row.id.lower())
            found.setdefault(key, []).append(row)
    repeated = [_in_time(group) for group in found.values() if len({r.workbook.report for r in group}) > 1]
    return sorted(repeated, key=lambda group: -chance_wrong(group[-1]) * weight(group[-1].critical_class))


def _in_time(group: list[Judged]) -> list[Judged]:
    """By the date of the study where all state one that can be ordered, else by when the answer was written."""
    if all(_ISO.match(row.workbook.date) for row in group):
        return sorted(group, key=lambda row: (row.workbook.date, row.workbook.changed))
    return sorted(group, key=lambda row: row.workbook.changed)


def add_history(book: Any, formats: Formats, rows: Sequence[Judged], base: Path) -> None:
    """Add the sheet, when any characteristic was studied more than once."""
    groups = series(rows)
    if not groups:
        return
    steps = [Step(row, group[n - 1] if n else None) for group in groups for n, row in enumerate(group)]
    title = "Characteristics studied more than once, by the order of time within each"
    charts = min(len(groups), _MOST_CHARTS)
    head = HEAD + -(-charts // _PER_ROW) * _CHART_ROWS
    sheet = add_list(book, formats, HISTORY, "OverTime", title, COLUMNS, steps, base, head=head)
    top = head
    for number, group in enumerate(groups[:charts]):
        chart = _chart(book, group, top, top + len(group) - 1)
        described = f"Index of {group[0].id} of part {group[0].workbook.part_number} from study to study, with bounds"
        across = {"x_offset": (number % _PER_ROW) * (_CHART_WIDTH + 10), "object_position": 3}
        sheet.insert_chart(2 + number // _PER_ROW * _CHART_ROWS, 0, chart, {**across, "description": described})
        top += len(group)


_LINES: tuple[tuple[str, dict[str, Any]], ...] = (
    ("Upper bound", {"color": MUTED, "width": 1, "dash_type": "dash"}),
    ("Estimate", {"color": ACCENT, "width": 2}),
    ("Lower bound", {"color": MUTED, "width": 1}),
    ("Required", {"color": INK, "width": 1.5, "dash_type": "square_dot"}),
)


def _chart(book: Any, group: Sequence[Judged], top: int, bottom: int) -> Any:
    chart = book.add_chart({"type": "line"})
    labels = [HISTORY, top, _NAMES.index("Lot or file"), bottom, _NAMES.index("Lot or file")]
    for name, line in _LINES:
        column = _NAMES.index(name)
        marker = {"type": "circle", "size": 7, "fill": {"color": PAPER}, "border": {"color": ACCENT, "width": 2}}
        chart.add_series(
            {
                "name": name,
                "categories": labels,
                "values": [HISTORY, top, column, bottom, column],
                "line": line,
                "marker": marker if name == "Estimate" else {"type": "none"},
            }
        )
    first = group[0]
    title = " ".join(filter(None, (first.workbook.part_number, first.id, first.name, f"({first.index})")))
    chart.set_title({"name": title, "name_font": {**chart_font(11), "bold": True}})
    chart.set_legend({"position": "bottom", "font": chart_font(9)})
    chart.set_x_axis({"num_font": chart_font(9), "line": {"color": HAIRLINE}})
    grid = {"visible": True, "line": {"color": HAIRLINE, "width": 0.5}}
    chart.set_y_axis({"num_font": chart_font(9), "num_format": "0.0", "major_gridlines": grid, "line": {"none": True}})
    chart.set_chartarea({"border": {"none": True}, "fill": {"color": PAPER}})
    chart.show_blanks_as("gap")
    chart.set_size({"width": _CHART_WIDTH, "height": _CHART_HEIGHT})
    return chart
