"""The new sheets as a whole: names, formulas, texts of the sender, what stands alone."""

from __future__ import annotations

import re
import zipfile
from dataclasses import replace
from pathlib import Path

import openpyxl
import pytest

from sheetqc import sheets
from sheetqc.finding import Cell, Finding
from sheetqc.sheets.workbook import SHEET_KINDS
from sheetqc.study import Header
from tests.sheets.conftest import Written
from tests.sheets.made import Asked, made_answer
from tests.sheets.samples import bore

TRAPS = ("=1+1", "+A1", "@SUM(A1)", "{=1}", '=HYPERLINK("http://x")', "<0.5", "a & b \"c\" 'd'", "-5", "12.5")


def test_a_sheet_is_wanted_for_the_overview_each_characteristic_and_the_methods() -> None:
    answer, _ = made_answer(bore(), bore(id="C001"))
    assert sheets.wanted_names(answer) == ("QC overview", "QC D12", "QC C001", "QC method")
    assert SHEET_KINDS == ("overview", "characteristic", "method")


def test_sheets_bear_the_names_given(tmp_path: Path) -> None:
    answer, study = made_answer(bore())
    given = ("QC overview (2)", "It's C001", "QC method (2)")
    sheets.write(answer, study, given, tmp_path / "a.xlsx")
    book = openpyxl.load_workbook(tmp_path / "a.xlsx")
    assert tuple(book.sheetnames) == given
    formulas = [c.value for row in book[given[0]].iter_rows() for c in row if c.data_type == "f"]
    assert any("'It''s C001'!" in f for f in formulas)


def test_too_few_names_are_refused(tmp_path: Path) -> None:
    answer, study = made_answer(bore())
    with pytest.raises(ValueError, match="3 sheets need as many names"):
        sheets.write(answer, study, ("only",), tmp_path / "a.xlsx")


def test_the_same_answer_gives_the_same_parts(tmp_path: Path) -> None:
    answer, study = made_answer(bore())
    for name in ("a", "b"):
        sheets.write(answer, study, sheets.wanted_names(answer), tmp_path / f"{name}.xlsx")
    parts = []
    for name in ("a", "b"):
        with zipfile.ZipFile(tmp_path / f"{name}.xlsx") as file:
            parts.append({n: file.read(n) for n in file.namelist() if n != "docProps/core.xml"})
    assert parts[0] == parts[1]


@pytest.mark.parametrize("trap", TRAPS)
def test_texts_of_the_sender_stay_texts(tmp_path: Path, trap: str) -> None:
    asked = Asked(id=trap, name=trap, unit=trap, values=bore().values, upper=25.03, lower=25.0)
    answer, study = made_answer(asked)
    finding = Finding(code="x", level="note", text=trap, cells=(Cell("Run 1", 5, 3),))
    header = Header(part_number=trap, part_name=trap, supplier=trap, lot=trap, date=trap, prepared_by=trap)
    found = replace(answer.assessments[0], findings=(finding,))
    answer = replace(answer, header=header, assessments=(found,), findings=(finding,))
    sheets.write(answer, study, ("QC overview", "QC 1", "QC method"), tmp_path / "a.xlsx")
    book = openpyxl.load_workbook(tmp_path / "a.xlsx")
    seen = 0
    for sheet in book.worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.data_type == "f":
                    assert trap not in str(cell.value) or trap in ("-5", "12.5")
                elif isinstance(cell.value, str) and trap in cell.value:
                    seen += 1
                    assert cell.data_type == "s"
    assert seen >= 6


def test_formulas_refer_to_the_cells_of_the_values(written: Written) -> None:
    book = written.formulas()
    told = {str(c.value) for row in book["QC D12"].iter_rows() for c in row if c.data_type == "f"}
    sample = written.answer.assessments[0].sample
    for cell, copied in zip(sample.cells, sample.copied, strict=True):
        assert (f"={cell.reference}" in told) is not copied


def test_alone_nothing_refers_to_the_sender(tmp_path: Path) -> None:
    answer, study = made_answer(bore())
    sheets.write(answer, study, sheets.wanted_names(answer), tmp_path / "a.xlsx", alone=True)
    with zipfile.ZipFile(tmp_path / "a.xlsx") as file:
        for name in file.namelist():
            if name.startswith("xl/worksheets/sheet"):
                content = file.read(name).decode()
                assert "Run 1" not in re.sub(r"<v>.*?</v>", "", content)
                assert "List of parts" not in content


def test_every_formula_has_its_value(written: Written) -> None:
    formulas, values = written.formulas(), written.values()
    count = 0
    for sheet in formulas.worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.data_type == "f":
                    count += 1
                    assert values[sheet.title][cell.coordinate].value is not None, f"{sheet.title}!{cell.coordinate}"
    assert count > 3000


def test_newer_functions_carry_their_prefix_and_none_depends_on_the_locale(written: Written) -> None:
    newer = re.compile(r"(?<!_xlfn\.)\b(NORM\.|BETA\.|GAMMA\.|STDEV\.S|AGGREGATE)")
    for sheet in written.formulas().worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.data_type == "f":
                    assert not newer.search(str(cell.value)), cell.value
                    assert "TEXT(" not in str(cell.value)
                    assert len(str(cell.value)) < 8192


def test_no_formula_shows_an_error_but_points_that_are_not_drawn(written: Written) -> None:
    for sheet in written.values().worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.data_type == "e":
                    assert cell.value == "#N/A"
                    assert cell.column > 26, f"{sheet.title}!{cell.coordinate} stands on the printed page"


def test_pages_print_on_one_sheet(written: Written) -> None:
    book = written.formulas()
    for name in written.names[:-1]:
        sheet = book[name]
        assert sheet.sheet_properties.pageSetUpPr.fitToPage
        assert sheet.page_setup.fitToHeight in (None, 1)
        assert sheet.print_area
        assert not sheet.protection.sheet


def test_links_lead_to_cells_that_are_there(written: Written) -> None:
    book = written.formulas()
    cells = [cell for sheet in book.worksheets for row in sheet.iter_rows() for cell in row]
    links = [cell.hyperlink for cell in cells if cell.hyperlink is not None]
    assert len(links) >= len(written.answer.assessments)
    for link in links:
        sheet, _, address = link.location.rpartition("!")
        assert book[sheet.strip("'").replace("''", "'")][address] is not None
