"""The blank intake workbook: entry cells, lists, checks and short notes, ready to be filled in and sent."""

from __future__ import annotations

import datetime
from pathlib import Path

from sheetqc.sheets.blank.look import Look
from sheetqc.sheets.blank.plan import Plan

__all__ = ["write"]

_CREATED = datetime.datetime(2026, 1, 1, tzinfo=datetime.UTC).replace(tzinfo=None)
"""Fixed, so that the same version writes the same bytes."""


def write(path: Path, rows: int = 500, characteristics: int = 40) -> None:
    """Writes a blank intake workbook.

    Parameters
    ----------
    path : the file to write
    rows : rows for measured values
    characteristics : rows for characteristics, and columns for their values
    """
    import xlsxwriter

    from sheetqc.sheets.blank import characteristics as characteristics_sheet
    from sheetqc.sheets.blank import measurements, studies, words

    plan = Plan(rows=rows, characteristics=characteristics)
    options = {"default_format_properties": {"font_name": "Arial", "font_size": 10}}
    with xlsxwriter.Workbook(str(path), options) as book:
        book.set_properties({"title": "Intake of a capability study", "created": _CREATED})
        look = Look(book)
        sheets = {name: book.add_worksheet(name) for name in plan.sheet_names}
        studies.fill(sheets["Study"], look)
        characteristics_sheet.fill(sheets["Characteristics"], look, plan)
        measurements.fill(sheets["Measurements"], look, plan)
        studies.fill_gauge(sheets["Gauge"], look, plan)
        studies.fill_counts(sheets["Counts"], look)
        words.fill(sheets["Kinds and models"], look)
        sheets["Study"].activate()
