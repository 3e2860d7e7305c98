"""Workbooks whose own layout stays: rows of qc:places."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
import xlsxwriter

from sheetqc import intake
from sheetqc.study import Study
from tests.intake.building import Formula, cells, codes, column, finding, table, write

OWN = {
    "A1": "Report of the works", "B3": "Bore", "B4": "mm", "B5": 11.9, "B6": 12.1,
    "D9": "Nest", "E9": "Reading",
    **column("E10", [12.0, 12.01, None, 12.03, "12,04"]), **column("D10", [1, 2, 1, 2, 1]),
}  # fmt: skip


def _study(path: Path, rows: list[list[Any]], **more: Any) -> Study:
    places = table("B2", [["qc:places"], ["Characteristic", "What", "Where"], *rows])
    return intake.read(write(path / "s.xlsx", {"Run 1": OWN, "For the office": places, **more}))


def test_everything_can_stand_elsewhere(tmp_path: Path) -> None:
    study = _study(
        tmp_path,
        [
            ["D12", "Values", "'Run 1'!E10:E14"],
            ["D12", "Stream", "'Run 1'!$D$10:$D$14"],
            ["D12", "Name", "'Run 1'!B3"],
            ["D12", "Unit", "'Run 1'!B4"],
            ["D12", "LSL", "'Run 1'!B5"],
            ["D12", "Upper limit", "=’Run 1’!B6".replace("’", "'")],
        ],
    )
    asked = study.characteristics[0]
    assert (asked.id, asked.name, asked.unit) == ("D12", "Bore", "mm")
    assert (asked.limits.lower, asked.limits.upper) == (11.9, 12.1)
    assert str(asked.cell("upper")) == "'Run 1'!B6"
    sample = study.samples[0]
    assert sample.values == (12.0, 12.01, 12.03, 12.04)
    assert sample.streams == ("1", "2", "2", "1")
    assert [str(c) for c in sample.cells] == ["'Run 1'!E10", "'Run 1'!E11", "'Run 1'!E13", "'Run 1'!E14"]
    assert codes(study) == ["number-as-text"]


@pytest.mark.parametrize("where", ["'Run 1'!E10:E14", "'run 1'!e10:e14", "'Run 1'!E:E", "'Run 1'!E10,'Run 1'!E11:E14"])
def test_references_in_all_their_forms(tmp_path: Path, where: str) -> None:
    study = _study(tmp_path, [["D12", "Values", where], ["D12", "USL", 12.1]])
    assert study.samples[0].values == (12.0, 12.01, 12.03, 12.04)
    assert study.characteristics[0].limits.upper == 12.1


def test_a_formula_as_reference(tmp_path: Path) -> None:
    study = _study(tmp_path, [["D12", "Values", "'Run 1'!E10:E14"], ["D12", "USL", Formula("='Run 1'!B6", 12.1)]])
    assert study.characteristics[0].limits.upper == 12.1
    assert str(study.characteristics[0].cell("upper")) == "'Run 1'!B6"


def test_listed_characteristics_are_filled_in(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "USL", "Kind"], ["D12", 13, "diameter"]])
    rows = [["d12", "Values", "'Run 1'!E10:E14"], ["D12", "USL", "'Run 1'!B6"], ["D12", "LSL", "'Run 1'!B5"]]
    study = _study(tmp_path, rows, Spec=spec)
    asked = study.characteristics[0]
    assert (asked.id, asked.kind) == ("D12", "two-sided dimension")
    assert (asked.limits.lower, asked.limits.upper) == (11.9, 13), "what is listed goes first"
    assert len(study.samples[0].values) == 4


def test_subgroups_as_rows(tmp_path: Path) -> None:
    own = table("B3", [[1, 2, 3], [4, 5, 6]])
    study = _study(tmp_path, [["D12", "Values", "Grid!B3:D4"], ["D12", "USL", 9]], Grid=own)
    assert study.samples[0].values == (1, 2, 3, 4, 5, 6)
    assert study.samples[0].subgroups == ("1", "1", "1", "2", "2", "2")


def test_values_across_a_row_with_times(tmp_path: Path) -> None:
    own = table("B3", [["a", "b", "c"], [4, 5, 6]])
    rows = [["D12", "Values", "Grid!B4:D4"], ["D12", "Time", "Grid!B3:D3"], ["D12", "USL", 9]]
    sample = _study(tmp_path, rows, Grid=own).samples[0]
    assert sample.values == (4, 5, 6)
    assert sample.times == ("a", "b", "c")
    assert sample.subgroups is None


def test_left_out_by_place(tmp_path: Path) -> None:
    own = table("A1", [[4, None], [5, "dropped"], [6, None]])
    rows = [["D12", "Values", "Grid!A1:A3"], ["D12", "Leave out", "Grid!B1:B3"], ["D12", "USL", 9]]
    sample = _study(tmp_path, rows, Grid=own).samples[0]
    assert sample.values == (4, 6)
    assert [(str(p.cell), p.reason) for p in sample.left_out] == [("'Grid'!A2", "dropped")]


def _with_table_and_name(path: Path) -> Path:
    with xlsxwriter.Workbook(str(path)) as book:
        run = book.add_worksheet("Run 1")
        run.add_table(
            "B3:C7", {"name": "Readings", "columns": [{"header": "No"}, {"header": "D 12"}], "total_row": True}
        )
        for row, value in enumerate([12.0, 12.1, 12.2]):
            run.write(3 + row, 1, row + 1)
            run.write(3 + row, 2, value)
        run.write(6, 2, 99)
        book.define_name("bore_values", "='Run 1'!$C$4:$C$6")
        places = book.add_worksheet("Places")
        places.write(0, 0, "qc:places")
        places.write_row(1, 0, ["Characteristic", "What", "Where"])
        places.write_row(2, 0, ["A", "Values", "bore_values"])
        places.write_row(3, 0, ["B", "Values", "Readings[D 12]"])
        places.write_row(4, 0, ["A", "USL", 13])
        places.write_row(5, 0, ["B", "USL", 13])
    return path


def test_defined_names_and_tables(tmp_path: Path) -> None:
    study = intake.read(_with_table_and_name(tmp_path / "t.xlsx"))
    assert [s.values for s in study.samples] == [(12.0, 12.1, 12.2), (12.0, 12.1, 12.2)]


@pytest.mark.parametrize("where", ["'Run 9'!E10:E14", "no_such_name", "Table9[D12]", "E10 to E14", "'Run 1'!ZZZZ1"])
def test_references_to_nothing(tmp_path: Path, where: str) -> None:
    study = _study(tmp_path, [["D12", "Values", where], ["D12", "USL", 13], ["E1", "Values", "'Run 1'!E10:E14"]])
    found = finding(study, "unknown-reference", "D12")
    assert found.level == "stop"
    assert cells(found) == ["'For the office'!D4"]


def test_unknown_what(tmp_path: Path) -> None:
    study = _study(tmp_path, [["D12", "Values", "'Run 1'!E10:E14"], ["D12", "Weather", "'Run 1'!B3"]])
    assert cells(finding(study, "unknown-place", "D12")) == ["'For the office'!D5"]
