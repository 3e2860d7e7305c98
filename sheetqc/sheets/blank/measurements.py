"""The sheet Measurements of the blank intake workbook: headings follow the sheet Characteristics by formula."""

from __future__ import annotations

from typing import Any

from xlsxwriter.utility import xl_col_to_name

from sheetqc import vocabulary
from sheetqc.sheets.blank import notes
from sheetqc.sheets.blank.look import Look, message, page
from sheetqc.sheets.blank.plan import Plan

_LABELS = ("subgroup", "time", "stream", "leave_out")
_WIDTHS = (10, 15, 9, 15)
_FOLLOWED = (("name", "Name"), ("unit", "Unit"), ("lower", "LSL"), ("upper", "USL"))
_COUNT_ROW = 5
_HEADING_ROW = 7
_LIT_COLUMNS = 10
_LIT_ROWS = 125
_BREAK_EVERY = 10


def fill(sheet: Any, look: Look, plan: Plan) -> None:
    """Fills the sheet Measurements."""
    first, last = _HEADING_ROW + 1, _HEADING_ROW + plan.rows
    left, right = len(_LABELS), len(_LABELS) + plan.characteristics - 1
    _set_up(sheet, look, left, right)
    _labels(sheet, look)
    for place in range(plan.characteristics):
        _follow(sheet, look, plan, left + place, plan.first_characteristic + place + 1, first + 1, last + 1)
    for row in range(first, min(last, first + _LIT_ROWS - 1) + 1):
        for column in range(min(right, left + _LIT_COLUMNS - 1) + 1):
            sheet.write_blank(row, column, None, look.entry_on(row - first, left=column < left))
    _conditions(sheet, look, first, last, left, right)
    _check(sheet, first, last, left, right)


def _set_up(sheet: Any, look: Look, left: int, right: int) -> None:
    page(sheet, "Measurements")
    sheet.set_print_scale(76)
    sheet.print_across()
    sheet.set_v_pagebreaks(range(left + _BREAK_EVERY, right + 1, _BREAK_EVERY))
    sheet.repeat_rows(0, _HEADING_ROW)
    sheet.repeat_columns(0, left - 1)
    sheet.freeze_panes(_HEADING_ROW + 1, left)
    for column, width in enumerate(_WIDTHS):
        sheet.set_column(column, column, width, look.bare_left)
    sheet.set_column(left, right, 10, look.bare)
    sheet.set_row(0, 26)
    sheet.set_row(_HEADING_ROW, 24)
    sheet.write(0, 0, "Measurements", look.title)
    sheet.write(_HEADING_ROW - 1, 0, "qc:measurements", look.tag)


def _labels(sheet: Any, look: Look) -> None:
    titles = {h.field: h.title for h in vocabulary.headings("measurements")}
    for column, field in enumerate(_LABELS):
        sheet.write(_HEADING_ROW, column, titles[field], look.optional)
        message(sheet, _HEADING_ROW, column, titles[field], notes.MEASUREMENTS[field])
    for row, (_, title) in enumerate(_FOLLOWED, start=1):
        sheet.write(row, len(_LABELS) - 1, title, look.follows_label)
    sheet.write(_COUNT_ROW, len(_LABELS) - 1, "Values entered", look.follows_label)


def _follow(sheet: Any, look: Look, plan: Plan, column: int, source_row: int, first: int, last: int) -> None:
    """The heading of a column and what stands above it, as formulas on the row of its characteristic."""
    letters = {h.field: xl_col_to_name(c) for c, h in enumerate(vocabulary.headings("characteristics"))}
    own = xl_col_to_name(column)
    for row, (field, _) in enumerate(_FOLLOWED, start=1):
        source = f"Characteristics!${letters[field]}${source_row}"
        sheet.write_formula(row, column, f'=IF({source}="","",{source})', look.follows, "")
    heading = f"{own}${_HEADING_ROW + 1}"
    sheet.write_formula(_COUNT_ROW, column, f'=IF({heading}="","",COUNTA({own}{first}:{own}{last}))', look.follows, "")
    source = f"Characteristics!$A${source_row}"
    sheet.write_formula(_HEADING_ROW, column, f'=IF({source}="","",{source})', look.needed_centre, "")
    if column == len(_LABELS):
        text = "Ids come from the sheet Characteristics by themselves. Enter or paste the values below, as numbers."
        message(sheet, _HEADING_ROW, column, "Values", text)


def _conditions(sheet: Any, look: Look, first: int, last: int, left: int, right: int) -> None:
    """Columns light up when their characteristic is named; doubtful and outlying values show."""
    own, row = xl_col_to_name(left), first + 1
    heading = f"{own}${_HEADING_ROW + 1}"
    lower, upper = f"{own}$4", f"{own}$5"
    cell = f"{own}{row}"
    outside = f"=AND(ISNUMBER({cell}),OR(AND(ISNUMBER({lower}),{cell}<{lower}),AND(ISNUMBER({upper}),{cell}>{upper})))"
    doubtful = f'=AND(ISTEXT({cell}),LEFT({cell},1)<>"<",LEFT({cell},1)<>">")'
    area = (first, left, last, right)
    for formula, look_of in ((outside, look.beyond), (doubtful, look.doubt), (f'={heading}<>""', look.lit)):
        sheet.conditional_format(*area, {"type": "formula", "criteria": formula, "format": look_of})
    named = f'=${own}${_HEADING_ROW + 1}<>""'
    sheet.conditional_format(first, 0, last, left - 1, {"type": "formula", "criteria": named, "format": look.lit})


def _check(sheet: Any, first: int, last: int, left: int, right: int) -> None:
    cell = f"{xl_col_to_name(left)}{first + 1}"
    sheet.data_validation(
        first,
        left,
        last,
        right,
        {
            "validate": "custom",
            "value": f'=OR(ISNUMBER({cell}),LEFT({cell},1)="<",LEFT({cell},1)=">")',
            "error_title": "Not a number",
            "error_message": "A number is expected here, or a bound such as <0.5. Keep this entry?",
            "error_type": "warning",
        },
    )
