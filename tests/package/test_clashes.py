"""Additions whose sheets, names, tables, formats or dates meet others of the same name, number or day."""

from __future__ import annotations

import datetime
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from openpyxl.workbook.defined_name import DefinedName

from sheetqc.errors import CannotGraft
from sheetqc.package import graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import bare_styles, crowded, furnished, plain, since_1904, strict
from tests.package.packages import contents


def test_a_sheet_whose_name_is_taken_gets_another_and_its_formulas_follow(tmp_path: Path) -> None:
    original = furnished(tmp_path / "original.xlsx")
    additions = write_additions(tmp_path / "additions.xlsx", ("kept BACK", "Answer D12"))
    graft(original, additions, tmp_path / "copy.xlsx")
    assert sheet_names(tmp_path / "copy.xlsx")[-2:] == ("kept BACK (2)", "Answer D12")
    book = openpyxl.load_workbook(tmp_path / "copy.xlsx")
    sheet = book["kept BACK (2)"]
    assert sheet["A3"].value == "='kept BACK (2)'!A2*2"
    assert sheet["A4"].value == '=1+1 is text, and so is "kept BACK!A1"'
    assert book["Answer D12"]["A1"].value == "='kept BACK (2)'!A1"
    assert book["Answer D12"]["A2"].hyperlink.location == "'kept BACK (2)'!A1"
    assert sheet.data_validations.dataValidation[0].formula1 == "'kept BACK (2)'!$A$2:$A$3"
    assert sheet._charts[0].ser[0].yVal.numRef.f == "'kept BACK (2)'!$A$2:$A$3"
    assert book.defined_names["qc.D12.Ppk"].attr_text == "'kept BACK (2)'!$A$2"
    assert sheet.print_area == "'kept BACK (2)'!$A$1:$H$40"


def test_a_table_whose_name_is_taken_gets_another_and_its_formulas_follow(tmp_path: Path) -> None:
    original = furnished(tmp_path / "original.xlsx")
    graft(original, write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    book = openpyxl.load_workbook(tmp_path / "copy.xlsx")
    tables = [table for sheet in book.worksheets for table in sheet.tables.values()]
    assert sorted(table.displayName for table in tables) == ["Findings", "Findings_2"]
    assert len({table.id for table in tables}) == 2
    assert book["Answer"]["H1"].value == "=ROWS(Findings_2[Code])"


def test_a_name_that_is_taken_by_somebody_else_is_refused(tmp_path: Path) -> None:
    additions = tmp_path / "additions.xlsx"
    book = xlsxwriter.Workbook(str(additions))
    book.add_worksheet("New")
    book.define_name("Limits", "=New!$A$1")
    book.close()
    with pytest.raises(CannotGraft, match="Limits"):
        graft(furnished(tmp_path / "original.xlsx"), additions, tmp_path / "copy.xlsx")
    assert not (tmp_path / "copy.xlsx").exists()


def test_a_name_of_an_answer_replaces_its_namesake(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    book.defined_names["QC.d12.ppk"] = DefinedName("QC.d12.ppk", attr_text="0")
    book.save(tmp_path / "original.xlsx")
    graft(tmp_path / "original.xlsx", write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    names = openpyxl.load_workbook(tmp_path / "copy.xlsx").defined_names
    assert "QC.d12.ppk" not in names
    assert names["qc.D12.Ppk"].attr_text == "'Answer'!$A$2"


@pytest.mark.parametrize("options", [{}, {"date_1904": True}])
def test_days_stay_the_same_days_in_the_other_date_system(options: dict[str, bool], tmp_path: Path) -> None:
    additions = tmp_path / "additions.xlsx"
    book = xlsxwriter.Workbook(str(additions), options)
    sheet = book.add_worksheet("New")
    day = book.add_format({"num_format": "yyyy-mm-dd"})
    hours = book.add_format({"num_format": "hh:mm"})
    sheet.write_datetime("A1", datetime.datetime(2026, 12, 1, 6, 0), day)
    sheet.write_number("A2", 1500.25)
    sheet.write_number("A3", 0.5, hours)
    book.close()
    for maker in (since_1904, plain):
        graft(maker(tmp_path / "original.xlsx"), additions, tmp_path / "copy.xlsx")
        new = openpyxl.load_workbook(tmp_path / "copy.xlsx")["New"]
        assert new["A1"].value == datetime.datetime(2026, 12, 1, 6, 0)
        assert new["A2"].value == 1500.25
        assert new["A3"].value in (datetime.time(12, 0), datetime.datetime(1904, 1, 1, 12, 0))


def test_a_built_in_number_format_that_the_original_means_otherwise_is_told_outright(tmp_path: Path) -> None:
    graft(bare_styles(tmp_path / "o.xlsx"), write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    styles = contents(tmp_path / "copy.xlsx")["xl/styles.xml"]
    assert b'numFmtId="10" formatCode="0.0000%"' in styles
    assert b'numFmtId="164" formatCode="0.00%"' in styles
    assert b'patternType="gray125"' in styles


def test_conditional_formats_keep_their_look(tmp_path: Path) -> None:
    graft(furnished(tmp_path / "o.xlsx"), write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    book = openpyxl.load_workbook(tmp_path / "copy.xlsx")
    rule = next(iter(book["Answer"].conditional_formatting)).rules[0]
    assert rule.dxf.font.color.rgb == "FF9C0006"
    assert next(iter(book["O'Hara & Söhne"].conditional_formatting)).rules[0].dxf.font.color.rgb == "00FF0000"


def test_formulas_that_spill_share_what_the_original_says_about_them(tmp_path: Path) -> None:
    additions = tmp_path / "additions.xlsx"
    book = xlsxwriter.Workbook(str(additions))
    book.add_worksheet("New").write_dynamic_array_formula("A1:A2", "=SORT(B1:B2)", None, 0)
    book.close()
    graft(plain(tmp_path / "o.xlsx"), additions, tmp_path / "copy.xlsx")
    members = contents(tmp_path / "copy.xlsx")
    assert b"XLDAPR" in members["xl/metadata.xml"]
    assert b'cm="1"' in members["xl/added/worksheets/sheet1.xml"]
    original = crowded(tmp_path / "c.xlsx")
    graft(original, additions, tmp_path / "copy.xlsx")
    members = contents(tmp_path / "copy.xlsx")
    assert members["xl/metadata.xml"] == contents(original)["xl/metadata.xml"]
    assert b"cm=" in members["xl/added/worksheets/sheet1.xml"]


def test_the_strict_dialect_is_kept_throughout(tmp_path: Path) -> None:
    original = strict(tmp_path / "o.xlsx")
    additions = tmp_path / "additions.xlsx"
    book = xlsxwriter.Workbook(str(additions))
    sheet = book.add_worksheet("New")
    chart = book.add_chart({"type": "column"})
    fill = {"color": "#336699", "transparency": 40}
    chart.add_series({"values": "=New!$A$1:$A$2", "gap": 30, "overlap": -10, "fill": fill})
    sheet.insert_chart("B2", chart)
    book.close()
    graft(original, additions, tmp_path / "copy.xlsx")
    members = contents(tmp_path / "copy.xlsx")
    new = {name: content for name, content in members.items() if "/added/" in name}
    for content in new.values():
        assert b"openxmlformats.org/spreadsheetml/2006" not in content
        assert b"openxmlformats.org/drawingml/2006" not in content
        assert b"openxmlformats.org/officeDocument/2006/relationships" not in content
    told = new["xl/added/charts/chart1.xml"]
    assert b'gapWidth val="30%"' in told
    assert b'overlap val="-10%"' in told
    assert b'alpha val="60%"' in told
    assert b"purl.oclc.org/ooxml/officeDocument/relationships/worksheet" in members["xl/_rels/workbook.xml.rels"]


def test_pictures_inside_cells_are_refused(tmp_path: Path) -> None:
    with pytest.raises(CannotGraft, match="inside cells"):
        graft(plain(tmp_path / "o.xlsx"), crowded(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")


def test_a_chart_sheet_can_be_added(tmp_path: Path) -> None:
    graft(plain(tmp_path / "o.xlsx"), _with_chart_sheet(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    book = openpyxl.load_workbook(tmp_path / "copy.xlsx")
    assert [sheet.title for sheet in book.chartsheets] == ["Graph"]
    assert book["Back"].sheet_state == "hidden"


def _with_chart_sheet(path: Path) -> Path:
    book = xlsxwriter.Workbook(str(path))
    book.add_worksheet("Front").write_column("A1", [1, 2])
    chart = book.add_chart({"type": "line"})
    chart.add_series({"values": "=Front!$A$1:$A$2"})
    book.add_chartsheet("Graph").set_chart(chart)
    book.add_worksheet("Back").hide()
    book.close()
    return path
