"""Rows of qc:characteristics: what is read, and which cell is named when an entry is doubtful."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sheetqc import intake
from sheetqc.study import Study
from tests.intake.building import Formula, Page, Shown, cells, codes, finding, study_of, table


def _study(tmp_path: Path, headings: list[Any], *rows: list[Any]) -> Study:
    spec = table("A1", [["qc:characteristics"], headings, *rows])
    run = table("A1", [["qc:measurements"], ["D12"], [12], [12.1]])
    return study_of(tmp_path, run, spec)


def test_every_field_is_read_with_its_cell(tmp_path: Path) -> None:
    headings = [
        "Id", "Name", "Unit", "Nominal", "LSL", "USL", "Natural lower bound", "Natural upper bound", "Kind", "Model",
        "Requirement", "Subgroup size", "Resolution", "Class", "Claimed index", "Claimed value", "Note",
    ]  # fmt: skip
    row = ["D12", "Bore", "mm", 12, 11, 13, 0, 20, "diameter", "Weibull", 1.67, 5, 0.001, "critical", "Cpk", 1.9, "new"]
    asked = _study(tmp_path, headings, row).characteristics[0]
    assert (asked.id, asked.name, asked.unit) == ("D12", "Bore", "mm")
    limits = asked.limits
    assert (limits.lower, limits.upper, limits.nominal) == (11, 13, 12)
    assert (limits.natural_lower, limits.natural_upper) == (0, 20)
    assert (asked.kind, asked.model) == ("two-sided dimension", "weibull")
    assert (asked.requirement, asked.subgroup_size, asked.resolution) == (1.67, 5, 0.001)
    assert (asked.critical_class, asked.claimed_index, asked.claimed_value) == ("critical", "Cpk", 1.9)
    assert asked.note == "new"
    assert {name: str(cell) for name, cell in asked.cells}["upper"] == "'Spec'!F3"
    assert len(asked.cells) == 17


def test_columns_in_any_order_under_other_names(tmp_path: Path) -> None:
    asked = _study(tmp_path, ["Max", "Feature no.", "Lower specification limit"], [13, "D12", 11]).characteristics[0]
    assert (asked.id, asked.limits.lower, asked.limits.upper) == ("D12", 11, 13)


@pytest.mark.parametrize(
    ("typed", "value"), [("12,5", 12.5), ("12.5 mm", 12.5), ("max 12,5", 12.5), ("≤ 12.5", 12.5), ("<12.5", 12.5)]
)
def test_limits_typed_as_texts(tmp_path: Path, typed: str, value: float) -> None:
    study = _study(tmp_path, ["Id", "Unit", "USL"], ["D12", "mm", typed])
    assert study.characteristics[0].limits.upper == value
    assert cells(finding(study, "entry-as-text", "D12")) == ["'Spec'!C3"]


def test_limit_in_another_unit_is_converted_with_a_caution(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "Unit", "USL"], ["D12", "mm", "50 µm"])
    assert study.characteristics[0].limits.upper == pytest.approx(0.05)
    assert finding(study, "entry-as-text", "D12").level == "caution"


@pytest.mark.parametrize(
    "typed", ["see drawing", ">= 12", Formula("=1/0", "#DIV/0!"), Shown(45000, "dd.mm.yyyy"), True]
)
def test_unreadable_limits_stop_the_characteristic(tmp_path: Path, typed: Any) -> None:
    study = _study(tmp_path, ["Id", "LSL", "USL"], ["D12", 10, typed])
    assert study.characteristics[0].limits.upper is None
    found = finding(study, "unreadable-entry", "D12")
    assert found.level == "stop"
    assert cells(found) == ["'Spec'!C3"]


@pytest.mark.parametrize("typed", ["-", "none", "n/a", "–", "entfällt"])
def test_words_for_no_limit(tmp_path: Path, typed: str) -> None:
    study = _study(tmp_path, ["Id", "LSL", "USL"], ["D12", typed, 13])
    assert study.characteristics[0].limits.lower is None
    assert codes(study) == []


def test_crossed_limits_stop_with_both_cells(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "LSL", "USL"], ["D12", 13, 11])
    found = finding(study, "limits-crossed", "D12")
    assert found.level == "stop"
    assert cells(found) == ["'Spec'!B3", "'Spec'!C3"]


def test_equal_limits_are_crossed_too(tmp_path: Path) -> None:
    assert "limits-crossed" in codes(_study(tmp_path, ["Id", "LSL", "USL"], ["D12", 12, 12]))


def test_deviations_instead_of_limits_are_asked_about(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "Nominal", "LSL", "USL"], ["D12", 12, -0.1, 0.1])
    assert cells(finding(study, "nominal-outside", "D12")) == ["'Spec'!B3", "'Spec'!C3", "'Spec'!D3"]


def test_limit_at_a_natural_bound_is_asked_about(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "Natural lower bound", "LSL", "USL"], ["D12", 0, 0, 0.1])
    assert cells(finding(study, "limit-at-natural-bound", "D12")) == ["'Spec'!C3", "'Spec'!B3"]


def test_unknown_kind_and_model_name_those_that_are_known(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "USL", "Kind", "Model"], ["D12", 13, "smell", "weibul"])
    assert (study.characteristics[0].kind, study.characteristics[0].model) == ("", "")
    kind, model = finding(study, "unknown-kind", "D12"), finding(study, "unknown-model", "D12")
    assert cells(kind) == ["'Spec'!C3"]
    assert cells(model) == ["'Spec'!D3"]
    assert "flatness" in kind.text
    assert "weibull_threshold" in model.text


def test_kinds_in_other_languages(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "USL", "Art"], ["D12", 13, "Ebenheit"], ["D13", 13, "振れ"], ["D14", 13, "drsnost"])
    assert [c.kind for c in study.characteristics] == ["flatness", "runout", "roughness"]


def test_duplicate_ids_use_the_first_row(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "USL"], ["D12", 13], ["d 12", 14])
    assert [c.limits.upper for c in study.characteristics] == [13]
    assert cells(finding(study, "duplicate-id", "D12")) == ["'Spec'!A3", "'Spec'!A4"]


def test_row_without_id_is_told(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "Name", "USL"], ["D12", "Bore", 13], [None, "Shaft", 5])
    assert [c.id for c in study.characteristics] == ["D12"]
    assert cells(finding(study, "missing-id")) == ["'Spec'!A4"]


def test_names_serve_as_ids_where_there_is_no_id_column(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Characteristic", "USL"], ["D12", 13])
    assert study.samples[0].values == (12, 12.1)
    assert cells(finding(study, "names-as-ids")) == ["'Spec'!A2"]


def test_unknown_heading_is_told_with_those_that_are_known(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "USL", "Colour"], ["D12", 13, "red"])
    found = finding(study, "unknown-column")
    assert cells(found) == ["'Spec'!C2"]
    assert "Natural lower bound" in found.text


def test_heading_twice_uses_the_first(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Id", "USL", "Max"], ["D12", 13, 14])
    assert study.characteristics[0].limits.upper == 13
    assert cells(finding(study, "heading-twice")) == ["'Spec'!B2", "'Spec'!C2"]


@pytest.mark.parametrize("typed", [2.5, 0, -3, "five"])
def test_subgroup_size_that_is_none(tmp_path: Path, typed: Any) -> None:
    study = _study(tmp_path, ["Id", "USL", "Subgroup size"], ["D12", 13, typed])
    assert study.characteristics[0].subgroup_size is None
    assert cells(finding(study, "unreadable-entry", "D12")) == ["'Spec'!C3"]


def test_uncalculated_limit_stops(tmp_path: Path) -> None:
    import openpyxl

    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    for row in (
        ["qc:characteristics"],
        ["Id", "USL"],
        ["D12", "=INDIRECT(A1)"],
        [],
        ["qc:measurements"],
        ["D12"],
        [12],
    ):
        sheet.append(row)
    book.save(tmp_path / "u.xlsx")
    study = intake.read(tmp_path / "u.xlsx")
    found = finding(study, "unreadable-entry", "D12")
    assert found.level == "stop"
    assert cells(found) == ["'Sheet'!B3"]


def test_two_blocks_of_characteristics_are_joined(tmp_path: Path) -> None:
    spec = {
        **table("A1", [["qc:characteristics"], ["Id", "USL"], ["D12", 13]]),
        **table("A6", [["qc:characteristics"], ["USL", "Id"], [5, "F7"]]),
    }
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["D12", "F7"], [12, 4]]), spec)
    assert [(c.id, c.limits.upper) for c in study.characteristics] == [("D12", 13), ("F7", 5)]


def test_hidden_row_of_a_characteristic_is_read_and_told(tmp_path: Path) -> None:
    spec = Page(table("A1", [["qc:characteristics"], ["Id", "USL"], ["D12", 13]]), hidden_rows=(3,))
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["D12"], [12]]), spec)
    assert [c.id for c in study.characteristics] == ["D12"]
    assert cells(finding(study, "hidden-characteristics")) == ["'Spec'!A3"]
