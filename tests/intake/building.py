"""Builds awkward workbooks for the tests of intake."""

from __future__ import annotations

import datetime
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import xlsxwriter

from sheetqc import intake
from sheetqc.finding import Finding
from sheetqc.study import Study


@dataclass(frozen=True)
class Formula:
    """A formula with the result that is stored for it."""

    text: str
    result: Any = 0


@dataclass(frozen=True)
class Shown:
    """A value with a cell format."""

    value: Any
    number_format: str = "General"
    struck: bool = False


@dataclass
class Page:
    """A sheet: entries by address, and what is done to it as a whole."""

    cells: dict[str, Any] = field(default_factory=dict)
    merged: Sequence[str] = ()
    hidden_rows: Sequence[int] = ()
    hidden_columns: str = ""
    hidden: bool = False
    filtered: str = ""


def column(first: str, values: Sequence[Any]) -> dict[str, Any]:
    """Entries below each other from an address such as B3 on."""
    letters, row = first.rstrip("0123456789"), int(first.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ"))
    return {f"{letters}{row + i}": value for i, value in enumerate(values) if value is not None}


def table(first: str, rows: Sequence[Sequence[Any]]) -> dict[str, Any]:
    """Entries of a table from an address on."""
    letters, row = first.rstrip("0123456789"), int(first.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ"))
    left = xlsxwriter.utility.xl_cell_to_rowcol(f"{letters}1")[1]
    return {
        xlsxwriter.utility.xl_rowcol_to_cell(row - 1 + i, left + j): value
        for i, entries in enumerate(rows)
        for j, value in enumerate(entries)
        if value is not None
    }


def write(path: Path, pages: Mapping[str, Page | dict[str, Any]], **options: Any) -> Path:
    """Writes a workbook of pages."""
    with xlsxwriter.Workbook(str(path), options) as book:
        for name, page in pages.items():
            sheet = book.add_worksheet(name)
            _fill(book, sheet, page if isinstance(page, Page) else Page(page))
    return path


def _fill(book: Any, sheet: Any, page: Page) -> None:
    for reference in page.merged:
        sheet.merge_range(reference, "")
    for address, value in page.cells.items():
        if isinstance(value, Formula):
            sheet.write_formula(address, value.text, None, value.result)
        elif isinstance(value, Shown):
            look = book.add_format({"num_format": value.number_format, "font_strikeout": value.struck})
            _write(sheet, address, value.value, look)
        else:
            _write(sheet, address, value, None)
    for row in page.hidden_rows:
        sheet.set_row(row - 1, None, None, {"hidden": True})
    if page.hidden_columns:
        sheet.set_column(page.hidden_columns, None, None, {"hidden": True})
    if page.hidden:
        sheet.hide()


def _write(sheet: Any, address: str, value: Any, look: Any) -> None:
    if isinstance(value, str):
        sheet.write_string(address, value, look)
    elif isinstance(value, datetime.date | datetime.time):
        sheet.write_datetime(address, value, look)
    else:
        sheet.write(address, value, look)


CHARACTERISTICS = table(
    "A1",
    [
        ["qc:characteristics"],
        ["Id", "Name", "Unit", "LSL", "USL", "Kind", "Model"],
        ["D12", "Bore", "mm", 11.9, 12.1, None, None],
        ["F7", "Flatness", "mm", None, 0.05, "flatness", None],
    ],
)
"""Two characteristics on a sheet of their own."""

VALUES = [11.98, 12.01, 12.0, 12.03, 11.99, 12.02, 12.01, 11.97]


def study_of(path: Path, measurements: Page | dict[str, Any], characteristics: Any = None, **options: Any) -> Study:
    """The study read from a workbook with the usual two characteristics and a sheet Run of measurements."""
    pages = {"Spec": CHARACTERISTICS if characteristics is None else characteristics, "Run": measurements}
    return intake.read(write(path / "study.xlsx", pages, **options))


def bore(path: Path, values: Sequence[Any], **options: Any) -> Study:
    """The study of a workbook whose D12 column, from Run!B3 on, holds the values."""
    return study_of(path, {"B1": "qc:measurements", "B2": "D12", **column("B3", values)}, **options)


def finding(study: Study, code: str, of: str | None = None) -> Finding:
    """The one finding of a code; fails when there is none or more than one."""
    found = [f for f in study.findings if f.code == code and of is None]
    found += [f for identity, f in study.findings_of if f.code == code and of in (None, identity)]
    assert len(found) == 1, [f"{f.code}: {f.text}" for f in (*study.findings, *(f for _, f in study.findings_of))]
    return found[0]


def cells(found: Finding) -> list[str]:
    """The cells of a finding, in words."""
    return [str(cell) for cell in found.cells]


def codes(study: Study) -> list[str]:
    """The codes of all findings."""
    return [f.code for f in study.findings] + [f.code for _, f in study.findings_of]
