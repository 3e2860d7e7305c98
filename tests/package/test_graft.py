"""Sheets added to a copy: what is there afterwards, and that nothing else has changed."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest

from sheetqc.errors import CannotGraft
from sheetqc.package import graft, sheet_names
from tests.package.additions import write_additions
from tests.package.packages import changed, contents

LISTS = {"[Content_Types].xml", "xl/workbook.xml", "xl/_rels/workbook.xml.rels", "xl/styles.xml"}


@pytest.fixture
def additions(tmp_path: Path) -> Path:
    return write_additions(tmp_path / "additions.xlsx")


@pytest.fixture
def original(tmp_path: Path) -> Path:
    book = openpyxl.Workbook()
    book.active.title = "Data"
    book.active.append(["x", 1.25, "=B1*2"])
    book.create_sheet("Hidden one").sheet_state = "veryHidden"
    book.save(tmp_path / "original.xlsx")
    return tmp_path / "original.xlsx"


def test_new_sheets_come_last_and_old_parts_keep_their_bytes(original: Path, additions: Path, tmp_path: Path) -> None:
    into = tmp_path / "copy.xlsx"
    graft(original, additions, into)
    assert sheet_names(into) == ("Data", "Hidden one", "Answer", "Answer D12")
    assert changed(original, into) == LISTS & set(contents(original))
    book = openpyxl.load_workbook(into)
    assert book["Hidden one"].sheet_state == "veryHidden"
    assert book["Data"]["C1"].value == "=B1*2"
    assert book.active.title == "Data"


def test_the_added_sheets_hold_what_was_written(original: Path, additions: Path, tmp_path: Path) -> None:
    into = tmp_path / "copy.xlsx"
    graft(str(original), str(additions), str(into))
    book = openpyxl.load_workbook(into)
    sheet = book["Answer"]
    assert [sheet["A1"].value, sheet["A2"].value, sheet["A3"].value] == ["Index", 1.5, "='Answer'!A2*2"]
    assert sheet["A4"].value == '=1+1 is text, and so is "Answer!A1"'
    assert sheet["A4"].data_type == "s"
    assert sheet["A5"].value == "plain bold end"
    assert sheet["A1"].font.b
    assert sheet["A1"].number_format == "0.0000"
    assert sheet["A3"].number_format == "0.00%"
    assert sheet["A1"].fill.fgColor.rgb == "FFFFEECC"
    assert sheet["C2"].comment.text == "A remark"
    assert list(sheet.tables) == ["Findings"]
    assert len(sheet._charts) == 1
    assert sheet.print_area == "'Answer'!$A$1:$H$40"
    assert book.defined_names["qc.D12.Ppk"].attr_text == "'Answer'!$A$2"
    assert openpyxl.load_workbook(into, data_only=True)["Answer"]["A3"].value == 3


def test_a_copy_never_takes_the_place_of_its_original(original: Path, additions: Path) -> None:
    before = original.read_bytes()
    with pytest.raises(CannotGraft):
        graft(original, additions, original)
    assert original.read_bytes() == before


def test_answering_again_replaces_the_earlier_answer(original: Path, additions: Path, tmp_path: Path) -> None:
    once, twice = tmp_path / "once.xlsx", tmp_path / "twice.xlsx"
    graft(original, additions, once)
    assert sheet_names(once, earlier_answer=False) == ("Data", "Hidden one")
    graft(once, additions, twice)
    assert sheet_names(twice) == sheet_names(once)
    assert len(contents(twice)) == len(contents(once))
    assert changed(original, twice) == LISTS & set(contents(original))
    assert contents(twice)["xl/styles.xml"] == contents(once)["xl/styles.xml"]
