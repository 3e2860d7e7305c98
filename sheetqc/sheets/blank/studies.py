"""The small sheets of the blank intake workbook: the study as a whole, the gauge study, the counts."""

from __future__ import annotations

import datetime
from typing import Any

from sheetqc import vocabulary
from sheetqc.sheets.blank import notes
from sheetqc.sheets.blank.look import Look, message, page
from sheetqc.sheets.blank.plan import Plan

_GUIDE = (
    "1   Fill in what is known of the study below. Nothing here is needed for an answer.",
    "2   Sheet Characteristics: a row for each, with its Id and at least one limit.",
    "3   Sheet Measurements: the values in order of production, a column for each characteristic.",
    "4   Sheets Gauge and Counts: only if there is a gauge study or a count of defects.",
    "5   Save, and drop the file where studies are taken in. Select a heading to see what belongs there.",
)
_TAG_ROW = 8
_GAUGE_ROWS = 270
_COUNT_ROWS = 100


def fill(sheet: Any, look: Look) -> None:
    """Fills the sheet Study."""
    page(sheet, "Study")
    sheet.set_portrait()
    sheet.fit_to_pages(1, 1)
    sheet.set_column(0, 0, 24)
    sheet.set_column(1, 1, 58)
    sheet.set_row(0, 26)
    sheet.write(0, 0, "Capability study", look.title)
    for row, line in enumerate(_GUIDE, start=2):
        sheet.write(row, 0, line, look.text)
    sheet.write(_TAG_ROW, 0, "qc:study", look.tag)
    for row, heading in enumerate(vocabulary.headings("study"), start=_TAG_ROW + 1):
        _study_row(sheet, row, heading, look)


def _study_row(sheet: Any, row: int, heading: vocabulary.Heading, look: Look) -> None:
    sheet.set_row(row, 48 if heading.field == "note" else 19)
    sheet.write(row, 0, heading.title, look.label)
    entry = {
        "date": look.entry_date,
        "confidence": look.entry_percent,
        "note": look.entry_wrapped,
    }.get(heading.field, look.entry_left)
    if heading.field == "confidence":
        sheet.write_number(row, 1, 0.95, entry)
    else:
        sheet.write_blank(row, 1, None, entry)
    note = {"input_title": heading.title, "input_message": notes.STUDY[heading.field]}
    sheet.data_validation(row, 1, row, 1, {**_study_check(heading.field), **note})


def _study_check(field: str) -> dict[str, Any]:
    """What may be entered beside a label."""
    checks: dict[str, dict[str, Any]] = {
        "date": {
            "validate": "date",
            "criteria": ">=",
            "value": datetime.date(1990, 1, 1),
            "error_title": "Not a date",
            "error_message": "A date is expected here, such as 2026-03-12.",
            "error_type": "warning",
        },
        "requirement": {
            "validate": "decimal",
            "criteria": "between",
            "minimum": 0.1,
            "maximum": 9.9,
            "error_title": "Not an index",
            "error_message": "A number above 0 is expected here, such as 1.33.",
        },
        "confidence": {
            "validate": "decimal",
            "criteria": "between",
            "minimum": 0.5,
            "maximum": 0.9999,
            "error_title": "Not a confidence",
            "error_message": "A share from 50 % to below 100 % is expected here, such as 95 %.",
        },
        "requirement_on": {
            "validate": "list",
            "source": ["Ppk", "Cpk"],
            "error_title": "Not an index",
            "error_message": "Choose Ppk or Cpk.",
        },
        "stage": {
            "validate": "list",
            "source": list(vocabulary.STUDIES),
            "error_title": "Not a stage of a study",
            "error_message": "Choose preliminary or ongoing.",
        },
    }
    return checks.get(field, {"validate": "any"})


def fill_gauge(sheet: Any, look: Look, plan: Plan) -> None:
    """Fills the sheet Gauge."""
    fields = ("characteristic", "part", "appraiser", "trial", "value")
    lead = "Only if there is a gauge study: the same parts measured several times by several people."
    first, last = _table(sheet, look, "Gauge study", "qc:gauge", lead, fields, notes.GAUGE, _GAUGE_ROWS)
    sheet.set_column(0, 4, 16)
    sheet.data_validation(
        first,
        0,
        last,
        0,
        {
            "validate": "list",
            "source": plan.ids,
            "error_title": "Not a listed characteristic",
            "error_message": "Choose an Id from the sheet Characteristics.",
        },
    )
    sheet.data_validation(first, 4, last, 4, _any_number("A number is expected here."))


def fill_counts(sheet: Any, look: Look) -> None:
    """Fills the sheet Counts."""
    fields = ("category", "count", "period", "inspected", "cost")
    lead = "Only if defects were counted: a row for each category, and for each period if there are several."
    first, last = _table(sheet, look, "Counts of defects", "qc:counts", lead, fields, notes.COUNTS, _COUNT_ROWS)
    sheet.set_column(0, 0, 32)
    sheet.set_column(1, 4, 14)
    for column in (1, 3):
        sheet.data_validation(
            first,
            column,
            last,
            column,
            {
                "validate": "integer",
                "criteria": ">=",
                "value": 0,
                "error_title": "Not a count",
                "error_message": "A whole number of 0 or more is expected here.",
            },
        )
    sheet.data_validation(first, 4, last, 4, _any_number("An amount is expected here."))


def _any_number(text: str) -> dict[str, Any]:
    return {
        "validate": "decimal",
        "criteria": "between",
        "minimum": -1e99,
        "maximum": 1e99,
        "error_title": "Not a number",
        "error_message": text,
    }


def _table(
    sheet: Any,
    look: Look,
    title: str,
    tag: str,
    lead: str,
    fields: tuple[str, ...],
    about: dict[str, str],
    rows: int,
) -> tuple[int, int]:
    """A titled table of entry cells below a tag; gives the first and last row of its entries."""
    page(sheet, title)
    sheet.set_portrait()
    sheet.fit_to_pages(1, 0)
    sheet.set_row(0, 26)
    sheet.write(0, 0, title, look.title)
    sheet.write(1, 0, lead, look.quiet)
    sheet.write(2, 0, tag, look.tag)
    sheet.set_row(3, 22)
    titles = {h.field: h.title for h in vocabulary.headings(tag.partition(":")[2])}
    needed = ("part", "appraiser", "value", "category", "count", "characteristic")
    for column, field in enumerate(fields):
        sheet.write(3, column, titles[field], look.needed if field in needed else look.optional)
        message(sheet, 3, column, titles[field], about[field])
        for row in range(4, 4 + rows):
            sheet.write_blank(row, column, None, look.entry_on(row - 4))
    sheet.freeze_panes(4, 0)
    sheet.repeat_rows(0, 3)
    return 4, 3 + rows
