"""The sheets of rows: one row a characteristic, and one row a file set aside."""

from __future__ import annotations

import os
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from string import ascii_letters, digits
from typing import Any, Literal

from sheetqc.register.look import ACCENT, ACCENT_LIGHT, HAIRLINE, MUTED, SIGNS, Formats, signed
from sheetqc.register.rows import Aside, Judged
from sheetqc.register.urgency import chance_wrong

CHARACTERISTICS, ASIDE = "Characteristics", "Returned"
"""Names of the sheets."""

TABLE = "Judged"
"""Name of the table of characteristics."""

_MOST_LINKS = 60_000
_LONGEST = 32_000
HEAD = 3
"""Rows above the first row of a list."""

_PLAIN = frozenset(ascii_letters + digits + "/-_.~()+,=@:")
"""What stands for itself in a link; anything else could begin something other than a path."""


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a list: heading, width in characters, how a value is written, and the value of a row."""

    heading: str
    width: float
    kind: Literal["text", "wrapped", "number", "count", "share", "ppm", "verdict", "link", "time"]
    value: Callable[[Any], Any]


JUDGED_COLUMNS = (
    Column("Verdict", 13, "verdict", lambda r: r.state),
    Column("Supplier", 20, "text", lambda r: r.workbook.supplier),
    Column("Part", 13, "text", lambda r: r.workbook.part_number),
    Column("Lot", 10, "text", lambda r: r.workbook.lot),
    Column("Date", 11, "text", lambda r: r.workbook.date),
    Column("Id", 9, "text", lambda r: r.id),
    Column("Characteristic", 22, "text", lambda r: r.name),
    Column("Class", 11, "text", lambda r: r.critical_class),
    Column("Values", 8, "count", lambda r: r.count),
    Column("Index", 7, "text", lambda r: r.index),
    Column("Required", 10, "number", lambda r: r.requirement),
    Column("Estimate", 10, "number", lambda r: r.estimate),
    Column("Lower bound", 10, "number", lambda r: r.lower),
    Column("Claimed", 9, "number", lambda r: r.claimed),
    Column("Claim doubtful", 10, "share", chance_wrong),
    Column("Expected ppm", 11, "ppm", lambda r: r.expected_ppm),
    Column("Main reason", 50, "wrapped", lambda r: r.reason),
    Column("Next step", 36, "wrapped", lambda r: r.next_step),
    Column("Answer", 26, "link", lambda r: r.workbook.copy or r.workbook.report),
)

ASIDE_COLUMNS = (
    Column("What", 12, "text", lambda r: r.state),
    Column("File as sent", 32, "text", lambda r: r.name),
    Column("Since", 16, "time", lambda r: r.changed),
    Column("Reason", 80, "wrapped", lambda r: r.reason),
    Column("File", 34, "link", lambda r: r.file or r.report),
)


def add_judged(book: Any, formats: Formats, rows: Sequence[Judged], base: Path) -> None:
    """Add the sheet of characteristics; `base` is the folder of the register, to which links are relative."""
    title = "Every characteristic that was judged, those first that need a person most"
    add_list(book, formats, CHARACTERISTICS, TABLE, title, JUDGED_COLUMNS, rows, base)


def add_aside(book: Any, formats: Formats, rows: Sequence[Aside], base: Path) -> None:
    """Add the sheet of files without rows of their own."""
    title = "Files returned unanswered, answers that cannot be read, and files that came more than once"
    add_list(book, formats, ASIDE, "SetAside", title, ASIDE_COLUMNS, rows, base)


def add_list(
    book: Any,
    formats: Formats,
    name: str,
    table: str,
    title: str,
    columns: Sequence[Column],
    rows: Sequence[Any],
    base: Path,
    *,
    head: int = HEAD,
) -> Any:
    """Add a sheet with a table of rows that begin after `head` rows, and give the sheet."""
    sheet = book.add_worksheet(name)
    last = head + max(len(rows), 1) - 1
    _set_up(sheet, formats, columns, title, head, last)
    headings = [{"header": c.heading, "header_format": _heading(formats, c)} for c in columns]
    sheet.add_table(head - 1, 0, last, len(columns) - 1, {"name": table, "style": None, "columns": headings})
    for number, row in enumerate(rows):
        sheet.set_row(head + number, height(columns, row))
        for column, spec in enumerate(columns):
            write_value(sheet, formats, (head + number, column), spec, row, base, linked=number < _MOST_LINKS)
    if not rows:
        sheet.write_string(head, 0, "none", formats(font_color=MUTED, italic=True))
    return sheet


def _heading(formats: Formats, column: Column) -> Any:
    return formats(bold=True, font_color=ACCENT, bg_color=ACCENT_LIGHT, text_wrap=True, **side(column))


def side(column: Column) -> dict[str, Any]:
    """Alignment of a column: numbers to the right, everything else to the left and a little in."""
    return {"align": "right"} if column.kind in _RIGHT else {"align": "left", "indent": 1}


def _set_up(sheet: Any, formats: Formats, columns: Sequence[Column], title: str, head: int, last: int) -> None:
    sheet.hide_gridlines(2)
    sheet.set_default_row(18)
    sheet.set_row(0, 26)
    sheet.write_string(0, 0, title, formats(bold=True, font_size=14))
    sheet.set_row(head - 1, 30)
    if head == HEAD:
        sheet.freeze_panes(head, 1)
        sheet.repeat_rows(head - 1)
    for number, column in enumerate(columns):
        sheet.set_column(number, number, column.width)
    sheet.set_landscape()
    sheet.set_paper(9)
    sheet.fit_to_pages(1, 0)
    sheet.set_margins(0.4, 0.4, 0.5, 0.6)
    sheet.set_footer("&L&8&A&R&8&P / &N")
    sheet.print_area(0, 0, last, _last_printed(columns))


def _last_printed(columns: Sequence[Column]) -> int:
    """The first column of long text is the last one on paper; what follows serves on the screen only."""
    return next(number for number, c in enumerate(columns) if c.kind == "wrapped")


def height(columns: Sequence[Column], row: Any) -> float:
    """Height of a row in points, for its longest wrapped text."""
    lines = max((-(-len(c.value(row)) // (c.width * 1.05)) for c in columns if c.kind == "wrapped"), default=1)
    return 6 + 13 * max(1, min(lines, 12))


_RIGHT = ("number", "count", "share", "ppm")
_NUMBER_FORMATS = {"number": "0.00", "count": "0", "share": "0 %", "ppm": "[<10]0.0;#,##0"}


def write_value(
    sheet: Any, formats: Formats, at: tuple[int, int], column: Column, row: Any, base: Path, *, linked: bool = True
) -> None:
    """Write one cell of a list. Texts are written as texts whatever they look like."""
    value, rule = column.value(row), {"bottom": 1, "bottom_color": HAIRLINE, **side(column)}
    if column.kind == "link":
        _write_link(sheet, formats, at, value, base, linked=linked)
    elif column.kind == "verdict" and value:
        sheet.write_string(*at, signed(value), formats(bold=True, font_color=SIGNS[value][1], **rule))
    elif column.kind == "time":
        text = time.strftime("%Y-%m-%d %H:%M", time.localtime(value)) if value else ""
        sheet.write_string(*at, text, formats(**rule))
    elif column.kind in ("text", "wrapped"):
        sheet.write_string(*at, safe_text(value), formats(text_wrap=column.kind == "wrapped", **rule))
    elif value is None:
        sheet.write_blank(*at, None, formats(**rule))
    else:
        sheet.write_number(*at, value, formats(num_format=_NUMBER_FORMATS[column.kind], **rule))


def safe_text(text: str) -> str:
    """Text that a cell can hold, whatever it came from."""
    return text.encode("utf-8", "backslashreplace").decode("utf-8")[:_LONGEST]


def _write_link(sheet: Any, formats: Formats, at: tuple[int, int], target: Path, base: Path, *, linked: bool) -> None:
    rule = {"bottom": 1, "bottom_color": HAIRLINE, "align": "left", "indent": 1}
    shown, address = safe_text(target.name), link(target, base)
    if (
        linked
        and len(address) < 2000
        and sheet.write_url(*at, address, formats(font_color=ACCENT, underline=1, **rule), shown) == 0
    ):
        return
    sheet.write_string(*at, shown, formats(**rule))


def link(target: Path, base: Path) -> str:
    """A link to a file, relative to the folder of the register where both are on one drive."""
    try:
        path = Path(os.path.relpath(target, base)).as_posix()
    except ValueError:
        path = target.as_posix()
    return "external:" + "".join(c if c in _PLAIN or ord(c) > 127 else f"%{ord(c):02X}" for c in safe_text(path))
