"""Workbooks with something wrong in them, one fault each; FAULTS is the register the tests run over."""

from __future__ import annotations

import random
import struct
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import openpyxl

from tests.examples.compound_file import Entry, compound_file

HEAD = ["Id", "Name", "Unit", "LSL", "USL"]
GOOD = ["D1", "Width", "mm", 9.0, 11.0]
Rows = Sequence[Sequence[Any]]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fault:
    """A fault: how to make it, whether the workbook is answered or returned, and what the answer has to say of it.

    `code` is that of a finding, `cells` are places that it has to name, `words` have to stand in its text. `states`
    are the verdicts of the characteristics that can be told all the same.
    """

    name: str
    write: Callable[[Path], None]
    answered: bool
    code: str
    cells: tuple[str, ...] = ()
    words: tuple[str, ...] = ()
    states: dict[str, str] | None = None
    ending: str = ".xlsx"


def readings(count: int = 60) -> list[float]:
    """Steady readings around 10, to a hundredth."""
    source = random.Random(7)
    return [round(source.gauss(10.0, 0.12), 2) for _ in range(count)]


def book(path: Path, characteristics: Rows, measurements: Rows) -> None:
    """A workbook with a sheet "Asked" (tag in A1) and a sheet "Run 1" (tag in B2)."""
    workbook = openpyxl.Workbook()
    asked = workbook.active
    assert asked is not None
    asked.title = "Asked"
    asked["A1"] = "qc:characteristics"
    for row in characteristics:
        asked.append(list(row))
    run = workbook.create_sheet("Run 1")
    run["B2"] = "qc:measurements"
    for place, row in enumerate(measurements, start=3):
        for column, entry in enumerate(row, start=2):
            run.cell(place, column, entry)
    workbook.save(path)


def columns(*lists: Sequence[Any]) -> list[list[Any]]:
    """Columns, each its heading first, as rows."""
    return [list(row) for row in zip(*lists, strict=True)]


def plain(path: Path) -> None:
    """A workbook with nothing wrong."""
    book(path, [HEAD, GOOD], columns(["D1", *readings()]))


def not_a_workbook(path: Path) -> None:
    path.write_text("Dear colleagues, please find the results below.", encoding="utf-8")


def other_archive(path: Path) -> None:
    import zipfile

    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("letter.txt", "no workbook")


def empty(path: Path) -> None:
    path.write_bytes(b"")


def encrypted(path: Path) -> None:
    """What a spreadsheet program makes of a workbook with a password: its streams, with nothing readable in them."""
    path.write_bytes(
        compound_file([Entry("EncryptionInfo", struct.pack("<HHL", 4, 4, 0x40)), Entry("EncryptedPackage", bytes(800))])
    )


def truncated(path: Path) -> None:
    plain(path)
    path.write_bytes(path.read_bytes()[:-400])


def no_tag(path: Path) -> None:
    workbook = openpyxl.Workbook()
    sheet = workbook.active
    assert sheet is not None
    sheet.append(["Width", "mm"])
    for reading in readings():
        sheet.append([reading])
    workbook.save(path)


def no_heading_row_of_characteristics(path: Path) -> None:
    book(path, [GOOD], columns(["D1", *readings()]))


def no_heading_row_of_measurements(path: Path) -> None:
    book(path, [HEAD, GOOD], [[reading] for reading in readings()])


def tag_alone(path: Path) -> None:
    book(path, [], [])


def unknown_characteristic(path: Path) -> None:
    long = [["Characteristic", "Value"], *[["D1", r] for r in readings()], ["D9", 4.2], ["D9", 4.3]]
    book(path, [HEAD, GOOD], long)


def text_in_a_value_cell(path: Path) -> None:
    values: list[Any] = [*readings()]
    values[20] = "gauge dropped"
    book(path, [HEAD, GOOD], columns(["D1", *values]))


def no_limits(path: Path) -> None:
    book(path, [HEAD, ["D1", "Width", "mm", None, None]], columns(["D1", *readings()]))


def crossed_limits(path: Path) -> None:
    book(path, [HEAD, ["D1", "Width", "mm", 11.0, 9.0]], columns(["D1", *readings()]))


def equal_limits(path: Path) -> None:
    book(path, [HEAD, ["D1", "Width", "mm", 10.0, 10.0]], columns(["D1", *readings()]))


def limit_in_words(path: Path) -> None:
    book(path, [HEAD, ["D1", "Width", "mm", "see drawing", 11.0]], columns(["D1", *readings()]))


def too_few(path: Path) -> None:
    book(path, [HEAD, GOOD], columns(["D1", 10.1, 9.9]))


def one_value(path: Path) -> None:
    book(path, [HEAD, GOOD], columns(["D1", 10.1]))


def all_equal(path: Path) -> None:
    book(path, [HEAD, GOOD], columns(["D1", *[10.0] * 60]))


def column_without_characteristic(path: Path) -> None:
    book(path, [HEAD, GOOD], columns(["D1", *readings()], ["D77", *readings()]))


def characteristic_without_column(path: Path) -> None:
    book(path, [HEAD, GOOD, ["D2", "Depth", "mm", 4.0, 5.0]], columns(["D1", *readings()]))


def nothing_but_a_wrong_column(path: Path) -> None:
    book(path, [HEAD, GOOD], columns(["D77", *readings()], ["Time", *range(60)]))


FAULTS: tuple[Fault, ...] = (
    Fault(name="not a workbook", write=not_a_workbook, answered=False, code="not-a-workbook"),
    Fault(name="another archive", write=other_archive, answered=False, code="not-a-workbook"),
    Fault(name="an empty file", write=empty, answered=False, code="damaged", words=("empty",)),
    Fault(name="encrypted", write=encrypted, answered=False, code="encrypted", words=("password",)),
    Fault(name="truncated", write=truncated, answered=False, code="damaged"),
    Fault(name="no tag", write=no_tag, answered=False, code="nothing-to-answer", words=("qc:characteristics",)),
    Fault(
        name="characteristics without a heading row",
        write=no_heading_row_of_characteristics,
        answered=False,
        code="nothing-to-answer",
        cells=("'Asked'!A1",),
        words=("heading",),
    ),
    Fault(
        name="tags with nothing below", write=tag_alone, answered=False, code="nothing-to-answer", cells=("'Asked'!A1",)
    ),
    Fault(
        name="measurements without a heading row",
        write=no_heading_row_of_measurements,
        answered=False,
        code="nothing-to-answer",
        cells=("'Run 1'!B2",),
        words=("row of headings", "D1"),
    ),
    Fault(
        name="an unknown characteristic",
        write=unknown_characteristic,
        answered=True,
        code="unlisted-characteristic",
        cells=("'Run 1'!B64",),
        words=("D9", "D1"),
    ),
    Fault(
        name="text in a value cell",
        write=text_in_a_value_cell,
        answered=True,
        code="not-a-number",
        cells=("'Run 1'!B24",),
        words=("gauge dropped",),
    ),
    Fault(
        name="no limits",
        write=no_limits,
        answered=True,
        code="no-limits",
        cells=("'Asked'!A3",),
        words=("limit",),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="LSL above USL",
        write=crossed_limits,
        answered=True,
        code="limits-crossed",
        cells=("'Asked'!D3", "'Asked'!E3"),
        words=("11", "9"),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="LSL equal to USL",
        write=equal_limits,
        answered=True,
        code="limits-crossed",
        cells=("'Asked'!D3", "'Asked'!E3"),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="a limit in words",
        write=limit_in_words,
        answered=True,
        code="unreadable-entry",
        cells=("'Asked'!D3",),
        words=("see drawing",),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="two values",
        write=too_few,
        answered=True,
        code="fewer-than-three",
        cells=("'Run 1'!B4", "'Run 1'!B5"),
        words=("2 values",),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="one value",
        write=one_value,
        answered=True,
        code="fewer-than-three",
        cells=("'Run 1'!B4",),
        words=("1 value",),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="all values equal",
        write=all_equal,
        answered=True,
        code="all-equal",
        cells=("'Run 1'!B4",),
        words=("10",),
        states={"D1": "no verdict"},
    ),
    Fault(
        name="a value column without a characteristic",
        write=column_without_characteristic,
        answered=True,
        code="value-column-without-characteristic",
        cells=("'Run 1'!C3",),
        words=("D77", "D1"),
    ),
    Fault(
        name="a characteristic without values",
        write=characteristic_without_column,
        answered=True,
        code="no-values",
        cells=("'Asked'!A4",),
        words=("D2",),
        states={"D2": "no verdict"},
    ),
    Fault(
        name="no column of a listed characteristic",
        write=nothing_but_a_wrong_column,
        answered=False,
        code="nothing-to-answer",
        cells=("'Run 1'!B2",),
        words=("'Run 1'!B3", "D77", "D1"),
    ),
)
"""The register of faults."""
