"""The blank intake workbook: current template, checks, lists, and that it reads back when filled in."""

from __future__ import annotations

import zipfile
from pathlib import Path

import openpyxl
import pytest

from sheetqc import intake, vocabulary
from sheetqc.errors import NothingToAnswer
from sheetqc.sheets import blank

TEMPLATE = Path(__file__).parents[2] / "templates" / "intake.xlsx"


@pytest.fixture(scope="module")
def written(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("blank") / "blank.xlsx"
    blank.write(path)
    return path


def test_template_is_current(written: Path) -> None:
    assert TEMPLATE.read_bytes() == written.read_bytes(), "write it again: sheetqc blank templates/intake.xlsx"


def test_same_bytes_each_time(written: Path, tmp_path: Path) -> None:
    again = tmp_path / "again.xlsx"
    blank.write(again)
    assert again.read_bytes() == written.read_bytes()


def test_blank_workbook_is_returned_with_what_to_do(written: Path) -> None:
    with pytest.raises(NothingToAnswer) as caught:
        intake.read(written)
    assert caught.value.cell is not None
    assert str(caught.value.cell) == "'Characteristics'!A3"


def _filled(written: Path, into: Path) -> Path:
    """The blank workbook filled in by a program that stores no results of formulas."""
    book = openpyxl.load_workbook(written)
    study, characteristics, measurements = book["Study"], book["Characteristics"], book["Measurements"]
    labels = {study.cell(row, 1).value: row for row in range(1, 40)}
    study.cell(labels["Part number"], 2).value = "PX-1"
    study.cell(labels["Study"], 2).value = "ongoing"
    headings = {characteristics.cell(4, c).value: c for c in range(1, 18)}
    for row, entries in enumerate(
        ({"Id": "D12", "LSL": 11.9, "USL": 12.1, "Unit": "mm"}, {"Id": "F7", "USL": 8, "Kind": "flatness"}), start=5
    ):
        for heading, entry in entries.items():
            characteristics.cell(row, headings[heading]).value = entry
    for place in range(500):
        measurements.cell(9 + place, 1).value = place // 5 + 1
        measurements.cell(9 + place, 5).value = 12 + place / 10_000
        measurements.cell(9 + place, 6).value = 2 + place % 7
    measurements.cell(12, 4).value = "dropped"
    book.save(into)
    return into


def test_filled_in_it_reads_back(written: Path, tmp_path: Path) -> None:
    study = intake.read(_filled(written, tmp_path / "filled.xlsx"))
    assert [c.id for c in study.characteristics] == ["D12", "F7"]
    assert study.header.part_number == "PX-1"
    assert study.header.stage == "ongoing"
    assert study.characteristics[1].kind == "flatness"
    bore, flatness = study.samples
    assert len(bore.values) == 499
    assert bore.values[0] == 12
    assert str(bore.cells[-1]) == "'Measurements'!E508"
    assert [str(place.cell) for place in bore.left_out] == ["'Measurements'!E12"]
    assert flatness.values[:4] == (2, 3, 4, 6)
    assert bore.subgroups is not None
    assert len(set(bore.subgroups)) == 100
    assert not intake.questions(study)
    assert all(f.level == "note" for f in study.findings), [f.text for f in study.findings]


def test_forty_characteristics_have_a_column_each(written: Path) -> None:
    sheet = openpyxl.load_workbook(written)["Measurements"]
    formulas = [sheet.cell(8, column).value for column in range(5, 45)]
    assert formulas[0] == '=IF(Characteristics!$A$5="","",Characteristics!$A$5)'
    assert formulas[-1] == '=IF(Characteristics!$A$44="","",Characteristics!$A$44)'
    assert len(set(formulas)) == 40


def test_headings_are_those_of_the_contract(written: Path) -> None:
    book = openpyxl.load_workbook(written)
    row = [book["Characteristics"].cell(4, c).value for c in range(1, 18)]
    assert row == [
        "Id", "Name", "Unit", "Nominal", "LSL", "USL", "Natural lower bound", "Natural upper bound", "Kind", "Model",
        "Requirement", "Subgroup size", "Resolution", "Class", "Claimed index", "Claimed value", "Note",
    ]  # fmt: skip
    labels = [book["Study"].cell(r, 1).value for r in range(10, 21)]
    assert labels == [h.title for h in vocabulary.headings("study")]
    assert [book["Measurements"].cell(8, c).value for c in range(1, 5)] == ["Subgroup", "Time", "Stream", "Leave out"]


def test_lists_offer_the_words_that_are_known(written: Path) -> None:
    book = openpyxl.load_workbook(written)
    rules = book["Characteristics"].data_validations.dataValidation
    lists = {str(rule.sqref): rule.formula1 for rule in rules if rule.type == "list"}
    for cells, words in (("I5:I44", [k.name for k in vocabulary.KINDS]), ("J5:J44", list(vocabulary.MODELS[1:]))):
        first, last = lists[cells].rpartition("!")[2].replace("$", "").split(":")
        offered = [row[0].value for row in book["Kinds and models"][f"{first}:{last}"]]
        assert offered == words


def test_limits_ids_and_values_are_checked(written: Path) -> None:
    book = openpyxl.load_workbook(written)
    custom = {
        str(rule.sqref): rule
        for rule in book["Characteristics"].data_validations.dataValidation
        if rule.type == "custom"
    }
    assert custom["E5:E44"].formula1 == 'AND(ISNUMBER(E5),OR(F5="",E5<F5))'
    assert custom["F5:F44"].formula1 == 'AND(ISNUMBER(F5),OR(E5="",F5>E5))'
    assert custom["A5:A44"].formula1 == "COUNTIF($A$5:$A$44,A5)=1"
    assert all(rule.error and rule.errorTitle for rule in custom.values())
    values = [r for r in book["Measurements"].data_validations.dataValidation if r.type == "custom"]
    assert [str(r.sqref) for r in values] == ["E9:AR508"]


def test_every_heading_has_a_short_note(written: Path) -> None:
    book = openpyxl.load_workbook(written)
    noted = {str(r.sqref): r.prompt for r in book["Characteristics"].data_validations.dataValidation if r.prompt}
    for column in range(1, 18):
        assert 10 < len(noted[book["Characteristics"].cell(4, column).coordinate]) <= 255


def test_prints_with_titles_repeated(written: Path) -> None:
    book = openpyxl.load_workbook(written)
    assert book["Measurements"].print_title_rows == "$1:$8"
    assert book["Measurements"].print_title_cols == "$A:$D"
    assert book["Characteristics"].print_title_rows == "$1:$4"
    for sheet in book:
        assert str(sheet.page_setup.paperSize) == "9"
    assert book["Measurements"].freeze_panes == "E9"


def test_font_is_set_throughout(written: Path) -> None:
    with zipfile.ZipFile(written) as archive:
        styles = archive.read("xl/styles.xml").decode()
    assert "Calibri" not in styles
    assert 'name val="Arial"' in styles


def test_smaller_workbooks_can_be_written(tmp_path: Path) -> None:
    path = tmp_path / "small.xlsx"
    blank.write(path, rows=20, characteristics=3)
    sheet = openpyxl.load_workbook(path)["Measurements"]
    assert sheet.cell(8, 7).value is not None
    assert sheet.cell(8, 8).value is None
