"""The rows of a block of values: which hold data, and their labels."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from itertools import repeat

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
    sheet = headings.block.sheet
    values = _value_columns(columns)
    labels = _label_columns(headings, columns, values)
    for number in headings.data_rows():
        held = sheet.rows[number]
        if _repeats(headings, number):
            repeated.append(_first_cell(headings, number))
        elif (column := _summary_column(sheet.rows[number], number, values, labels)) is not None:
            summaries.append(sheet.cell(number, column))
        elif any(c in held for c in values):
            kept.append(number)
    _tell(repeated, summaries, doubts)
    return _filled_down(_labelled(columns, kept), columns, doubts)


def _value_columns(columns: Columns) -> list[int]:
    if columns.long:
        return [columns.fields["value"]]
    return sorted(c for own in columns.values.values() for c in own)


def _label_columns(headings: HeadingRow, columns: Columns, values: Sequence[int]) -> list[int]:
    """Columns in which a label such as Mean may stand: those beside the values, and the one left of the block."""
    used: set[int] = set()
    for number in headings.data_rows():
        used.update(headings.block.sheet.rows[number])
    inside = {c for c in used if headings.block.left - 1 <= c <= headings.block.right}
    return sorted(inside - set(values) - {columns.fields.get("leave_out", 0)})


def _tell(repeated: Sequence[Cell], summaries: Sequence[Cell], doubts: Doubts) -> None:
    if repeated:
        doubts.add(
            "repeated-heading",
            "note",
            f"{counted(len(repeated), 'row')} with the headings again ({places(repeated)}) passed over.",
            repeated,
        )
    if summaries:
        doubts.add(
            "summary-row",
            "note",
            f"{counted(len(summaries), 'row')} of totals, means or the like ({places(summaries)}), told by label or by "
            "formula, not taken as measured values.",
            summaries,
        )


def _first_cell(headings: HeadingRow, row: int) -> Cell:
    return headings.block.sheet.cell(row, headings.block.columns(row)[0])


def _repeats(headings: HeadingRow, row: int) -> bool:
    """Whether a row says the headings again."""
    sheet = headings.block.sheet
    if any(held.__class__ is float for held in sheet.rows[row].values()):
        return False
    columns = headings.block.columns(row)
    if not all(is_text(sheet.at(row, c)) for c in columns):
        return False
    same = sum(1 for c in columns if vocabulary.key(sheet.text(row, c)) == vocabulary.key(headings.texts.get(c, "")))
    return 2 * same > len(columns)


def _summary_column(held: dict[int, Held], row: int, values: Sequence[int], labels: Sequence[int]) -> int | None:
    """The column that makes a row a summary: a label such as Mean beside the values, or formulas over the column."""
    for column in labels:
        content = held.get(column)
        if content is None or content.__class__ is float or not is_text(content):
            continue
        if vocabulary.word_in("summary_row", shown(content).strip()):
            return column
    formulas = [c for c in values if isinstance(held.get(c), Content)]
    over = [c for c in formulas if _is_over_column(held[c], row, c)]
    return over[0] if over and 2 * len(over) >= sum(1 for c in values if c in held) else None


def _is_over_column(held: Held, row: int, column: int) -> bool:
    """Whether a formula sums up cells above it in its own column."""
    match = _SUMMARY.match(formula_in(held))
    area = area_of(match["range"].replace("$", "")) if match is not None else None
    return area is not None and area.bottom > area.top and area.bottom < row and area.left <= column <= area.right


def _labelled(columns: Columns, numbers: Sequence[int]) -> list[Row]:
    labels = {name: _labels(columns, name, numbers) for name in ("subgroup", "time", "stream")}
    reasons = [_reason(columns, number) for number in numbers] if "leave_out" in columns.fields else repeat("")
    return [
        Row(number=number, place=place, subgroup=subgroup, time=time, stream=stream, reason=reason)
        for place, (number, subgroup, time, stream, reason) in enumerate(
            zip(numbers, labels["subgroup"], labels["time"], labels["stream"], reasons, strict=False), start=1
        )
    ]


def _labels(columns: Columns, field: str, numbers: Sequence[int]) -> Iterable[str]:
    column = columns.fields.get(field)
    if column is None:
        return repeat("")
    return [columns.block.sheet.spread_text(number, column) for number in numbers]


def _filled_down(rows: list[Row], columns: Columns, doubts: Doubts) -> list[Row]:
    """Rows without a subgroup label take the one above: people often write a label in its first row only."""
    bare = [row for row in rows if not row.subgroup]
    if "subgroup" not in columns.fields or not bare or len(bare) == len(rows):
        return rows
    label = ""
    filled: list[Row] = []
    for row in rows:
        label = row.subgroup or label
        filled.append(replace(row, subgroup=label))
    cells = [columns.block.sheet.cell(row.number, columns.fields["subgroup"]) for row in bare]
    doubts.add(
        "subgroup-filled-down",
        "note",
        f"{counted(len(cells), 'row')} without a subgroup ({places(cells)}) were counted to the subgroup above. Fill "
        "the column in if that is wrong.",
        cells,
    )
    return filled


def _reason(columns: Columns, row: int) -> str:
    """The reason a row is kept out, "" when it is not: any text keeps it out, FALSE does not."""
    column = columns.fields.get("leave_out")
    held = None if column is None else columns.block.sheet.at(row, column)
    if held is None or (isinstance(held, Content) and held.nature == "boolean" and not held.number):
        return ""
    return shown(held).strip()
