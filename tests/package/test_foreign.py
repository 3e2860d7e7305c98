"""Every kind of foreign workbook: sheets are added, every part keeps its bytes but those that list the sheets."""

from __future__ import annotations

import warnings
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from lxml import etree
from openpyxl.cell import Cell
from python_calamine import CalamineError, CalamineWorkbook

from sheetqc.package import check, graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import FOREIGN, MACROS
from tests.package.packages import changed, contents

LISTS = ("[content_types].xml", "styles.xml", "workbook.xml", "workbook.xml.rels", "book one.xml", "book one.xml.rels")


@pytest.fixture(scope="module")
def additions(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_additions(tmp_path_factory.mktemp("additions") / "additions.xlsx")


@pytest.fixture(params=FOREIGN, ids=lambda maker: maker.__name__)
def original(request: pytest.FixtureRequest, tmp_path: Path) -> Path:
    maker: Callable[[Path], Path] = request.param
    return maker(tmp_path / "original.xlsx")


@pytest.fixture
def copy(original: Path, additions: Path, tmp_path: Path) -> Path:
    graft(original, additions, tmp_path / f"copy{original.suffix}")
    return tmp_path / f"copy{original.suffix}"


def test_only_the_lists_change(original: Path, copy: Path) -> None:
    touched = {name.rpartition("/")[2].lower() for name in changed(original, copy)}
    assert touched <= set(LISTS)
    assert list(contents(copy))[: len(contents(original))] == list(contents(original))


def test_sheets_are_the_old_ones_and_the_new_ones(original: Path, copy: Path) -> None:
    assert sheet_names(copy) == (*sheet_names(original), "Answer", "Answer D12")
    assert check(copy).earlier_answer == ("Answer", "Answer D12")
    assert check(copy).kind == check(original).kind


def test_another_reader_finds_the_new_values(original: Path, copy: Path) -> None:
    try:
        CalamineWorkbook.from_path(original)
    except (CalamineError, OSError):
        pytest.skip("calamine does not open this original either")
    book = CalamineWorkbook.from_path(copy)
    assert book.sheet_names[-2:] == ["Answer", "Answer D12"]
    rows = book.get_sheet_by_name("Answer").to_python()
    assert [row[0] for row in rows[:3]] == ["Index", 1.5, 3.0]


def test_openpyxl_opens_what_it_could_open_before(original: Path, copy: Path) -> None:
    before = _loaded(original)
    if before is None or not before.sheetnames:
        pytest.skip("openpyxl does not open this original either")
    after = _loaded(copy)
    assert after is not None
    assert after.sheetnames == [*before.sheetnames, "Answer", "Answer D12"]
    assert after["Answer"]["A2"].value == 1.5
    assert after["Answer"]["A2"].number_format == "0.0000"
    assert after["Answer"]["A3"].number_format == "0.00%"
    assert after.active.title == before.active.title
    for sheet in before.worksheets:
        for mine, theirs in zip(sheet.iter_rows(), after[sheet.title].iter_rows(), strict=True):
            for a, b in zip(mine, theirs, strict=True):
                assert (_value(a), a.number_format) == (_value(b), b.number_format)
                assert (a.font.name, a.font.sz, a.font.b) == (b.font.name, b.font.sz, b.font.b)
                assert repr(a.fill) == repr(b.fill)


def _value(cell: Cell) -> object:
    return getattr(cell.value, "text", cell.value)


def _loaded(path: Path) -> openpyxl.Workbook | None:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        try:
            return openpyxl.load_workbook(path)
        except (KeyError, TypeError, ValueError, IndexError, AttributeError):
            return None


def test_no_two_sheets_are_selected(copy: Path) -> None:
    new = [content for name, content in contents(copy).items() if "/added/worksheets/sheet" in f"/{name.lower()}"]
    assert len(new) == 2
    assert not any(b"tabSelected" in content for content in new)


def test_every_new_part_is_well_formed_and_typed(original: Path, copy: Path) -> None:
    members = contents(copy)
    types = etree.fromstring(members["[Content_Types].xml"])
    named = {e.get("PartName").lower() for e in types if e.get("PartName")}
    for name in members.keys() - contents(original).keys():
        if name.endswith((".xml", ".vml", ".rels")):
            etree.fromstring(members[name])
        assert f"/{name}".lower().replace(" ", "%20") in named or name.endswith(".rels") or f"/{name}".lower() in named


def test_macros_are_copied_as_they_are(original: Path, copy: Path) -> None:
    for name, content in contents(original).items():
        if name.endswith("vbaProject.bin"):
            assert content == MACROS
            assert contents(copy)[name] == MACROS


def test_answered_twice_is_answered_once(original: Path, copy: Path, additions: Path, tmp_path: Path) -> None:
    again = tmp_path / f"again{original.suffix}"
    graft(copy, additions, again)
    assert sheet_names(again) == sheet_names(copy)
    assert len(contents(again)) == len(contents(copy))
    third = tmp_path / f"third{original.suffix}"
    graft(again, additions, third)
    assert contents(third).keys() == contents(copy).keys()
