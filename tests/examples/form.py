"""The pump works' own intake form: a sheet with the study and its characteristics, a sheet with the values."""

from __future__ import annotations

import datetime
from pathlib import Path
from typing import Any

import xlsxwriter
from xlsxwriter.utility import xl_rowcol_to_cell

from tests.examples.study import Asked, Entry

CREATED = datetime.datetime(2026, 3, 2, 8, 0)
"""Fixed, so that the same script writes the same bytes."""

WIDTHS = {"Kind": 20, "Note": 36, "Unit": 8}
"""Columns of the characteristics that are not of the common width."""

INK, FRAME, FIELD, BAND = "#1F2A33", "#9AA7AE", "#F4F8FA", "#2F5D73"


class Look:
    """Formats of the form."""

    def __init__(self, book: xlsxwriter.Workbook) -> None:
        self._book = book
        self.title = self._format(bold=True, font_size=15, font_color=BAND)
        self.tag = self._format(font_size=8, font_color="#8795A0")
        self.heading = self._format(
            bold=True, font_color="#FFFFFF", bg_color=BAND, text_wrap=True, border=1, valign="top"
        )
        self.label = self._format(font_color="#51606B")
        self.entry = self._format(bg_color=FIELD, border=1, border_color=FRAME, align="left")
        self.date = self._format(bg_color=FIELD, border=1, border_color=FRAME, align="left", num_format="yyyy-mm-dd")
        self.moment = self._format(border=1, border_color=FRAME, num_format="yyyy-mm-dd hh:mm")

    def _format(self, **properties: Any) -> Any:
        return self._book.add_format({"font_name": "Arial", "font_size": 10, "font_color": INK, **properties})

    def value(self, decimals: int) -> Any:
        """The format of a column of readings."""
        number = "0" if decimals == 0 else "0." + "0" * decimals
        return self._format(border=1, border_color=FRAME, num_format=number)


def opened(path: Path) -> xlsxwriter.Workbook:
    """A workbook to be written, with everything fixed that a clock would decide."""
    book = xlsxwriter.Workbook(str(path), {"default_format_properties": {"font_name": "Arial", "font_size": 10}})
    book.set_properties({"title": "Capability study", "author": "Example", "created": CREATED})
    return book


def write(asked: Asked, path: Path) -> None:
    """Writes a study on the pump works' form."""
    with opened(path) as book:
        fill(book, asked)


def fill(book: xlsxwriter.Workbook, asked: Asked, *, study: str = "Study", values: str = "Measurements") -> None:
    """Adds the two sheets of the form to a workbook."""
    look = Look(book)
    _study_sheet(book.add_worksheet(study), look, asked)
    _values_sheet(book.add_worksheet(values), look, asked)


def _study_sheet(sheet: Any, look: Look, asked: Asked) -> None:
    sheet.hide_gridlines(2)
    sheet.set_column(0, 0, 18)
    sheet.set_column(1, 1, 26)
    for column, heading in enumerate(asked.headings[2:], start=2):
        sheet.set_column(column, column, WIDTHS.get(heading, 11))
    sheet.write_string(0, 0, asked.title, look.title)
    sheet.write_string(2, 0, "qc:study", look.tag)
    row = 3
    for label, entry in asked.header.items():
        sheet.write_string(row, 0, label, look.label)
        write_entry(sheet, row, 1, entry, look.date if isinstance(entry, datetime.date) else look.entry)
        row += 1
    row += 1
    sheet.write_string(row, 0, "qc:characteristics", look.tag)
    sheet.set_row(row + 1, 40)
    for column, heading in enumerate(asked.headings):
        sheet.write_string(row + 1, column, heading, look.heading)
    for below, characteristic in enumerate(asked.characteristics, start=row + 2):
        for column, heading in enumerate(asked.headings):
            write_entry(sheet, below, column, characteristic.get(heading), look.entry)
    sheet.set_landscape()
    sheet.fit_to_pages(1, 0)


def _values_sheet(sheet: Any, look: Look, asked: Asked) -> None:
    sheet.write_string(0, 0, "qc:measurements", look.tag)
    for column, heading in enumerate(asked.columns):
        sheet.write_string(1, column, heading, look.heading)
        sheet.set_column(column, column, 28 if heading == "Leave out" else 17)
    formats = [look.value(asked.decimals.get(heading, 0)) for heading in asked.columns]
    for row, entries in enumerate(asked.rows(), start=2):
        for column, entry in enumerate(entries):
            form = look.moment if isinstance(entry, datetime.datetime) else formats[column]
            write_entry(sheet, row, column, entry, form)
    sheet.freeze_panes(2, 0)
    sheet.repeat_rows(0, 1)


def write_entry(sheet: Any, row: int, column: int, entry: Entry, form: Any) -> None:
    """Writes one entry by its kind; nothing is ever taken for a formula."""
    if entry is None:
        sheet.write_blank(row, column, None, form)
    elif isinstance(entry, str):
        sheet.write_string(row, column, entry, form)
    elif isinstance(entry, datetime.date):
        sheet.write_datetime(row, column, entry, form)
    else:
        sheet.write_number(row, column, entry, form)


def place(row: int, column: int) -> str:
    """The address of a cell, rows and columns counted from 0."""
    return str(xl_rowcol_to_cell(row, column))
