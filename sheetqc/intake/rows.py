"""The rows of a block of values: which hold data, and their labels."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.columns import Columns
from sheetqc.intake.content import Content, Held, formula_in, is_text, shown
from sheetqc.intake.doubts import Doubts, counted, places
from sheetqc.intake.heading import HeadingRow
from sheetqc.intake.sheetxml import area_of

_SUMMARY = re.compile(
    r"=\s*[-+]?\s*(?:_xlfn\.)?(?:AVERAGE|AVERAGEA|SUM|MIN|MAX|MEDIAN|COUNT|COUNTA|STDEV|STDEVP|STDEV\.[SP]|VAR|VAR\.[SP]"
    r"|SUBTOTAL|AGGREGATE|RANGE|QUARTILE|PERCENTILE)\s*\(.*?(?P<range>\$?[A-Z]{1,3}\$?\d+:\$?[A-Z]{1,3}\$?\d+)",
    re.IGNORECASE,
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """A row of data: its number, its place among the data rows (from 1), and its labels."""

    number: int
    place: int
    subgroup: str = ""
    time: str = ""
    stream: str = ""
    reason: str = ""


def sorted_rows(headings: HeadingRow, columns: Columns, doubts: Doubts) -> list[Row]:
    """The rows of data in order; repeated headings and summary rows are set aside and told."""
    repeated: list[Cell] = []
    summaries: list[Cell] = []
    kept: list[int] = []
    for number in headings.data_rows():
        if _repeats(headings, number):
            repeated.append(_first_cell(headings, number))
        elif (cell := _summary_cell(headings, columns, number)) is not None:
            summaries.append(cell)
        elif _holds_something(columns, number):
            kept.append(number)
    _tell(repeated, summaries, doubts)
    return _labelled(columns, kept)


def _tell(repeated: Sequence[Cell], summaries: Sequence[Cell], doubts: Doubts) -> None:
    if repeated:
        doubts.add(
            "repeated-heading",
            "note",
            f"{counted(len(repeated), 'row')} ({places(repeated)}) repeat the headings and were passed over.",
            repeated,
        )
    if summaries:
        doubts.add(
            "summary-row",
            "note",
            f"{counted(len(summaries), 'row')} ({places(summaries)}) hold totals, means or the like, by label or by "
            "formula, and were not taken as measured values.",
            summaries,
        )


def _first_cell(headings: HeadingRow, row: int) -> Cell:
    return headings.block.sheet.cell(row, headings.block.columns(row)[0])


def _repeats(headings: HeadingRow, row: int) -> bool:
    """Whether a row says the headings again."""
    sheet = headings.block.sheet
    columns = headings.block.columns(row)
    if not all(is_text(sheet.at(row, c)) for c in columns):
        return False
    same = sum(1 for c in columns if vocabulary.key(sheet.text(row, c)) == vocabulary.key(headings.texts.get(c, "")))
    return 2 * same > len(columns)


def _summary_cell(headings: HeadingRow, columns: Columns, row: int) -> Cell | None:
    """The cell that makes a row a summary: a label such as Mean beside the values, or formulas over the column."""
    sheet = headings.block.sheet
    value_columns = {c for own in columns.values.values() for c in own}
    if "value" in columns.fields:
        value_columns.add(columns.fields["value"])
    reasons = columns.fields.get("leave_out")
    labels = [c for c in headings.block.columns(row) if c not in value_columns and c != reasons]
    beside = [headings.block.left - 1] if headings.block.left > 1 else []
    for column in (*labels, *beside):
        held = sheet.at(row, column)
        if is_text(held) and vocabulary.word_in("summary_row", sheet.text(row, column)):
            return sheet.cell(row, column)
    filled = [c for c in sorted(value_columns) if sheet.at(row, c) is not None]
    over = [c for c in filled if _is_over_column(sheet.rows[row][c], row, c)]
    return sheet.cell(row, over[0]) if over and 2 * len(over) >= len(filled) else None


def _is_over_column(held: Held, row: int, column: int) -> bool:
    """Whether a formula sums up cells above it in its own column."""
    match = _SUMMARY.match(formula_in(held))
    area = area_of(match["range"].replace("$", "")) if match is not None else None
    return area is not None and area.bottom > area.top and area.bottom < row and area.left <= column <= area.right


def _holds_something(columns: Columns, row: int) -> bool:
    held = columns.block.sheet.rows[row]
    own = [c for used in columns.values.values() for c in used]
    return any(c in held for c in own) or (columns.long and columns.fields["value"] in held)


def _labelled(columns: Columns, numbers: Sequence[int]) -> list[Row]:
    rows: list[Row] = []
    for place, number in enumerate(numbers, start=1):
        rows.append(
            Row(
                number=number,
                place=place,
                subgroup=_label(columns, "subgroup", number),
                time=_label(columns, "time", number),
                stream=_label(columns, "stream", number),
                reason=_reason(columns, number),
            )
        )
    return rows


def _label(columns: Columns, field: str, row: int) -> str:
    column = columns.fields.get(field)
    return "" if column is None else columns.block.sheet.spread_text(row, column)


def _reason(columns: Columns, row: int) -> str:
    """The reason a row is kept out, "" when it is not: any text keeps it out, FALSE does not."""
    column = columns.fields.get("leave_out")
    held = None if column is None else columns.block.sheet.at(row, column)
    if held is None or (isinstance(held, Content) and held.nature == "boolean" and not held.number):
        return ""
    return shown(held).strip()
