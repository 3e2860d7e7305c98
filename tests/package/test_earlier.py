"""An answered copy answered again: after other people moved, renamed, copied and added sheets."""

from __future__ import annotations

import re
from pathlib import Path

import openpyxl
import pytest
from lxml import etree

from sheetqc.package import check, graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import furnished, plain
from tests.package.packages import contents, packed

MAIN = "{http://schemas.openxmlformats.org/spreadsheetml/2006/main}"


@pytest.fixture
def additions(tmp_path: Path) -> Path:
    return write_additions(tmp_path / "additions.xlsx")


@pytest.fixture
def answered(tmp_path: Path, additions: Path) -> Path:
    graft(furnished(tmp_path / "original.xlsx"), additions, tmp_path / "answered.xlsx")
    return tmp_path / "answered.xlsx"


def _with_workbook(path: Path, target: Path, *swaps: tuple[str, str]) -> Path:
    members = contents(path)
    text = members["xl/workbook.xml"].decode("utf-8")
    for old, new in swaps:
        assert re.search(old, text), old
        text = re.sub(old, new, text)
    members["xl/workbook.xml"] = text.encode("utf-8")
    return packed(target, members)


def test_renamed_sheets_are_still_known(answered: Path, additions: Path, tmp_path: Path) -> None:
    renamed = _with_workbook(
        answered, tmp_path / "renamed.xlsx", ('name="Answer"', 'name="Mine"'), ("'Answer'!", "Mine!")
    )
    assert check(renamed).earlier_answer == ("Mine", "Answer D12")
    graft(renamed, additions, tmp_path / "again.xlsx")
    assert "Mine" not in sheet_names(tmp_path / "again.xlsx")


def test_sheets_moved_to_the_front_leave_places_right(answered: Path, additions: Path, tmp_path: Path) -> None:
    members = contents(answered)
    root = etree.fromstring(members["xl/workbook.xml"])
    sheets = root.find(f"{MAIN}sheets")
    count = len(sheets)
    for element in list(sheets)[-2:][::-1]:
        sheets.insert(0, element)
    for name in root.iter(f"{MAIN}definedName"):
        if name.get("localSheetId") is not None:
            name.set("localSheetId", str((int(name.get("localSheetId")) + 2) % count))
    view = next(root.iter(f"{MAIN}workbookView"))
    view.set("activeTab", str(int(view.get("activeTab")) + 2))
    members["xl/workbook.xml"] = etree.tostring(root)
    moved = packed(tmp_path / "moved.xlsx", members)
    again = tmp_path / "again.xlsx"
    graft(moved, additions, again)
    assert sheet_names(again) == sheet_names(answered)
    before, after = openpyxl.load_workbook(answered), openpyxl.load_workbook(again)
    for sheet in before.worksheets:
        assert after[sheet.title].print_area == sheet.print_area
        assert after[sheet.title].print_title_rows == sheet.print_title_rows
    assert after.active.title == before.active.title


def test_a_sheet_that_was_copied_stays(answered: Path, additions: Path, tmp_path: Path) -> None:
    book = openpyxl.load_workbook(answered)
    kept = book.copy_worksheet(book["Answer"])
    kept.title = "Kept for me"
    book.save(tmp_path / "saved.xlsx")
    graft(tmp_path / "saved.xlsx", additions, tmp_path / "again.xlsx")
    assert sheet_names(tmp_path / "again.xlsx").count("Kept for me") == 1
    assert sheet_names(tmp_path / "again.xlsx")[-2:] == ("Answer", "Answer D12")


def test_marks_without_sheets_are_replaced(answered: Path, additions: Path, tmp_path: Path) -> None:
    orphaned = _with_workbook(
        answered, tmp_path / "orphaned.xlsx", (r"(<definedName name=\"qc\.sheet\.\d\" hidden=\"1\">)[^<]*", r"\1#REF!")
    )
    assert check(orphaned).earlier_answer == ()
    graft(orphaned, additions, tmp_path / "again.xlsx")
    marks = re.findall(rb'name="qc\.sheet\.\d"', contents(tmp_path / "again.xlsx")["xl/workbook.xml"])
    assert len(marks) == len(set(marks)) == 2
    assert check(tmp_path / "again.xlsx").earlier_answer == ("Answer (2)", "Answer D12 (2)")


def test_names_of_an_earlier_answer_go_with_its_sheets(answered: Path, tmp_path: Path) -> None:
    fewer = write_additions(tmp_path / "fewer.xlsx", ("Overview",))
    old = _with_workbook(
        answered,
        tmp_path / "old.xlsx",
        ("</definedNames>", '<definedName name="qc.D99.Ppk">Answer!$A$9</definedName></definedNames>'),
    )
    graft(old, fewer, tmp_path / "again.xlsx")
    names = openpyxl.load_workbook(tmp_path / "again.xlsx").defined_names
    assert names["qc.D12.Ppk"].attr_text == "'Overview'!$A$2"
    assert "qc.D99.Ppk" not in names
    assert "limits" in names


@pytest.mark.parametrize("listed", [True, False])
def test_a_calculation_chain_goes_only_when_it_lists_what_is_gone(
    listed: bool, additions: Path, tmp_path: Path
) -> None:
    first = tmp_path / "first.xlsx"
    graft(plain(tmp_path / "original.xlsx"), additions, first)
    members = contents(first)
    ids = re.findall(rb'<sheet [^>]*name="([^"]*)" sheetId="(\d+)"', members["xl/workbook.xml"])
    number = dict(ids)[b"Answer" if listed else b"Runout"]
    members["xl/calcChain.xml"] = b'<calcChain xmlns="%s"><c r="D1" i="%s"/></calcChain>' % (
        MAIN[1:-1].encode(),
        number,
    )
    link = (
        b'<Relationship Id="rId77" Target="calcChain.xml" '
        b'Type="http://schemas.openxmlformats.org/officeDocument/2006/relationships/calcChain"/></Relationships>'
    )
    links = members["xl/_rels/workbook.xml.rels"]
    members["xl/_rels/workbook.xml.rels"] = links.replace(b"</Relationships>", link)
    graft(packed(tmp_path / "chained.xlsx", members), additions, tmp_path / "again.xlsx")
    after = contents(tmp_path / "again.xlsx")
    assert ("xl/calcChain.xml" in after) is not listed
    assert (b"calcChain" in after["xl/_rels/workbook.xml.rels"]) is not listed
