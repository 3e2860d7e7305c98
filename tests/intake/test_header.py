"""Labels and values of qc:study."""

from __future__ import annotations

import datetime
from pathlib import Path
from typing import Any

import pytest

from sheetqc import intake
from sheetqc.study import Study
from tests.intake.building import CHARACTERISTICS, Page, Shown, cells, codes, finding, table, write

RUN = {"A1": "qc:measurements", "A2": "D12", "A3": 12, "B2": "F7", "B3": 0.01}


def _study(path: Path, page: Page | dict[str, Any]) -> Study:
    return intake.read(write(path / "s.xlsx", {"Study": page, "Spec": CHARACTERISTICS, "Run": RUN}))


def test_every_label(tmp_path: Path) -> None:
    rows = [
        ["Part number", 4711], ["Part name", "Shaft"], ["Supplier", "Works"], ["Lot", "L1"],
        ["Date", Shown(datetime.datetime(2026, 3, 12), "yyyy-mm-dd")], ["Prepared by", "K"], ["Requirement", 1.67],
        ["Requirement on", "cpk"], ["Confidence", Shown(0.9, "0 %")], ["Study", "Preliminary"], ["Note", "none"],
    ]  # fmt: skip
    study = _study(tmp_path, table("C5", [["qc:study"], *rows]))
    header = study.header
    assert (header.part_number, header.part_name, header.supplier, header.lot) == ("4711", "Shaft", "Works", "L1")
    assert (header.date, header.prepared_by, header.note) == ("2026-03-12", "K", "none")
    assert (header.requirement, header.requirement_on, header.confidence) == (1.67, "Cpk", 0.9)
    assert header.stage == "preliminary"
    assert str(header.cell("requirement")) == "'Study'!D12"
    assert codes(study) == []


def test_what_is_not_filled_in_keeps_its_default(tmp_path: Path) -> None:
    study = _study(tmp_path, table("A1", [["qc:study"], ["Requirement"], ["Confidence"], ["Study"]]))
    assert (study.header.requirement, study.header.confidence, study.header.stage) == (None, 0.95, None)
    assert study.header.requirement_on == "Ppk"
    assert study.header.cells == ()
    assert codes(study) == []


@pytest.mark.parametrize(("typed", "value"), [("95 %", 0.95), (95, 0.95), (0.99, 0.99), ("90,0%", 0.9), ("0,9", 0.9)])
def test_confidence_as_people_write_it(tmp_path: Path, typed: Any, value: float) -> None:
    study = _study(tmp_path, table("A1", [["qc:study"], ["Confidence level", typed]]))
    assert study.header.confidence == pytest.approx(value)
    assert codes(study) == []


@pytest.mark.parametrize(
    ("label", "typed"),
    [
        ("Confidence", 0.3), ("Confidence", 100), ("Requirement", -1), ("Requirement", "high"), ("Requirement", 133),
        ("Requirement on", "Cmk"), ("Study", "final"), ("Confidence", "sure"),
    ],
)  # fmt: skip
def test_entries_that_cannot_be_used(tmp_path: Path, label: str, typed: Any) -> None:
    study = _study(tmp_path, table("A1", [["qc:study"], [label, typed]]))
    assert cells(finding(study, "unusable-entry")) == ["'Study'!B2"]
    assert study.header.confidence == 0.95
    assert study.header.requirement is None


@pytest.mark.parametrize("typed", ["≥ 1,33", "1.33", "Cpk >= 1,33", "Ppk: 1.33", "Cmk 1.33"])
def test_requirement_as_text(tmp_path: Path, typed: str) -> None:
    assert _study(tmp_path, table("A1", [["qc:study"], ["Requirement", typed]])).header.requirement == 1.33


def test_labels_merged_over_columns(tmp_path: Path) -> None:
    page = Page(
        table("A1", [["qc:study"], ["Part number", None, "P1"], ["Lot", None, "L1"]]), merged=("A2:B2", "A3:B3")
    )
    header = _study(tmp_path, page).header
    assert (header.part_number, header.lot) == ("P1", "L1")


def test_unknown_label_is_told(tmp_path: Path) -> None:
    study = _study(tmp_path, table("A1", [["qc:study"], ["Part number", "P1"], ["Moon phase", "full"]]))
    assert cells(finding(study, "unknown-label")) == ["'Study'!A3"]


def test_label_twice_uses_the_first(tmp_path: Path) -> None:
    study = _study(tmp_path, table("A1", [["qc:study"], ["Lot", "L1"], ["Batch", "L2"]]))
    assert study.header.lot == "L1"
    assert cells(finding(study, "label-twice")) == ["'Study'!B2", "'Study'!B3"]


def test_labels_in_german(tmp_path: Path) -> None:
    rows = [["Teilenummer", "P1"], ["Studie", "laufend"], ["Geforderter Index", 1.5], ["Vertrauensniveau", "90%"]]
    header = _study(tmp_path, table("A1", [["qc:study"], *rows])).header
    assert (header.part_number, header.stage, header.requirement, header.confidence) == ("P1", "ongoing", 1.5, 0.9)
