"""The sheet Characteristics of the blank intake workbook."""

from __future__ import annotations

from typing import Any

from xlsxwriter.utility import xl_col_to_name

from sheetqc import vocabulary
from sheetqc.sheets.blank import notes, words
from sheetqc.sheets.blank.look import Look, message, page
from sheetqc.sheets.blank.plan import Plan

_WIDTHS = {
    "id": 11,
    "name": 22,
    "unit": 7,
    "kind": 19,
    "model": 18,
    "requirement": 12.5,
    "critical_class": 11,
    "claimed_index": 9,
    "note": 22,
}
_NEEDED = ("id", "lower", "upper")


def fill(sheet: Any, look: Look, plan: Plan) -> None:
    """Fills the sheet Characteristics."""
    page(sheet, "Characteristics")
    sheet.fit_to_pages(1, 0)
    sheet.set_row(0, 26)
    sheet.write(0, 0, "Characteristics", look.title)
    sheet.write(1, 0, "Needed: an Id and at least one limit. Select a heading to see what belongs there.", look.quiet)
    sheet.write(2, 0, "qc:characteristics", look.tag)
    sheet.set_row(3, 42)
    for row in range(plan.first_characteristic, plan.last_characteristic + 1):
        sheet.set_row(row, 17)
    first, last = plan.first_characteristic, plan.last_characteristic
    headings = vocabulary.headings("characteristics")
    columns = {heading.field: column for column, heading in enumerate(headings)}
    for column, heading in enumerate(headings):
        sheet.set_column(column, column, _WIDTHS.get(heading.field, 10.5))
        sheet.write(3, column, heading.title, look.needed if heading.field in _NEEDED else look.optional)
        message(sheet, 3, column, heading.title, notes.CHARACTERISTICS[heading.field])
        for row in range(first, last + 1):
            sheet.write_blank(row, column, None, look.entry)
        check = _check(heading.field, columns, first + 1, last + 1)
        if check is not None:
            sheet.data_validation(first, column, last, column, check)
    sheet.freeze_panes(4, 2)
    sheet.repeat_rows(0, 3)


def _check(field: str, columns: dict[str, int], first: int, last: int) -> dict[str, Any] | None:
    """What may be entered in a column; rows count from 1 here, as in formulas."""
    letter = {name: xl_col_to_name(column) for name, column in columns.items()}
    own = f"{letter[field]}{first}"
    lower, upper = f"{letter['lower']}{first}", f"{letter['upper']}{first}"
    custom = {
        "id": (
            f"=COUNTIF(${letter['id']}${first}:${letter['id']}${last},{own})=1",
            "Id used twice",
            "Each characteristic needs an Id of its own.",
        ),
        "lower": (
            f'=AND(ISNUMBER({lower}),OR({upper}="",{lower}<{upper}))',
            "Not a lower limit",
            "A number below USL is expected here: a value, not a deviation from the nominal.",
        ),
        "upper": (
            f'=AND(ISNUMBER({upper}),OR({lower}="",{upper}>{lower}))',
            "Not an upper limit",
            "A number above LSL is expected here: a value, not a deviation from the nominal.",
        ),
    }
    if field in custom:
        formula, title, text = custom[field]
        return {"validate": "custom", "value": formula, "error_title": title, "error_message": text}
    if field in ("nominal", "natural_lower", "natural_upper", "claimed_value"):
        formula = f"=ISNUMBER({own})"
        return _refusal("custom", value=formula, title="Not a number", text="A number is expected here.")
    return _CHECKS.get(field)


def _refusal(validate: str, *, title: str, text: str, **rule: Any) -> dict[str, Any]:
    return {"validate": validate, "error_title": title, "error_message": text, **rule}


_CHECKS: dict[str, dict[str, Any]] = {
    "kind": _refusal(
        "list", source=words.KINDS_RANGE, title="Not a listed kind", text="Choose a kind from the list, or leave empty."
    ),
    "model": _refusal(
        "list",
        source=words.MODELS_RANGE,
        title="Not a listed model",
        text="Choose a model from the list, or leave empty to let the data decide.",
    ),
    "requirement": _refusal(
        "decimal",
        criteria="between",
        minimum=0.1,
        maximum=9.9,
        title="Not an index",
        text="A number above 0 is expected here, such as 1.67.",
    ),
    "subgroup_size": _refusal(
        "integer",
        criteria="between",
        minimum=1,
        maximum=100,
        title="Not a subgroup size",
        text="A whole number of parts is expected here, such as 5.",
    ),
    "resolution": _refusal(
        "decimal", criteria=">", value=0, title="Not a resolution", text="A number above 0 is expected, such as 0.001."
    ),
    "claimed_index": _refusal(
        "list",
        source=["Cp", "Cpk", "Pp", "Ppk", "Cm", "Cmk"],
        title="Another index",
        text="Is this the name of an index?",
        error_type="warning",
    ),
    "critical_class": _refusal(
        "list",
        source=["critical", "significant", "standard"],
        title="Another class",
        text="Keep this word?",
        error_type="information",
    ),
}
