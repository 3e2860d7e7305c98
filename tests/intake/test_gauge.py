"""Gauge studies: rows of qc:gauge."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from sheetqc import intake
from sheetqc.study import Study
from tests.intake.building import CHARACTERISTICS, Page, cells, codes, finding, table, write

RUN = {"A1": "qc:measurements", "A2": "D12", "A3": 12, "B2": "F7", "B3": 0.01}


def _study(path: Path, rows: list[list[Any]], **options: Any) -> Study:
    page = Page(table("A1", [["qc:gauge"], *rows]), **options)
    return intake.read(write(path / "s.xlsx", {"Spec": CHARACTERISTICS, "Run": RUN, "Gauge": page}))


def _rows() -> list[list[Any]]:
    return [[p, a, t, 12 + p / 100 + t / 1000, p / 100] for p in (1, 2, 3) for a in ("Kim", "Lee") for t in (1, 2)]


def test_a_column_for_each_characteristic(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "Appraiser", "Trial", "D12", "F7"], *_rows()])
    bore, flatness = study.gauge_studies
    assert bore.characteristic == "D12"
    assert len(bore.values) == len(bore.parts) == len(bore.appraisers) == len(bore.trials) == len(bore.cells) == 12
    assert bore.parts[:4] == ("1", "1", "1", "1")
    assert bore.appraisers[:4] == ("Kim", "Kim", "Lee", "Lee")
    assert bore.trials[:4] == ("1", "2", "1", "2")
    assert str(bore.cells[-1]) == "'Gauge'!D14"
    assert flatness.values[-1] == 0.03
    assert codes(study) == []


def test_characteristic_and_value(tmp_path: Path) -> None:
    rows = [["D12", *r[:4]] for r in _rows()] + [["X", 1, "Kim", 1, 5]]
    study = _study(tmp_path, [["Characteristic", "Part", "Operator", "Run", "Value"], *rows])
    assert [g.characteristic for g in study.gauge_studies] == ["D12"]
    assert len(study.gauge_studies[0].values) == 12
    assert cells(finding(study, "unlisted-characteristic")) == ["'Gauge'!A15"]


def test_trials_are_counted_where_they_are_not_given(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "Appraiser", "D12"], *([r[0], r[1], r[3]] for r in _rows())])
    assert study.gauge_studies[0].trials == ("1", "2") * 6


def test_merged_parts_and_appraisers(tmp_path: Path) -> None:
    rows = [["Part", "Appraiser", "D12"], [1, "Kim", 12], [None, None, 12.1], [2, "Lee", 12.2], [None, None, 12.3]]
    study = _study(tmp_path, rows, merged=("A3:A4", "B3:B4", "A5:A6", "B5:B6"))
    assert study.gauge_studies[0].parts == ("1", "1", "2", "2")
    assert study.gauge_studies[0].appraisers == ("Kim", "Kim", "Lee", "Lee")


def test_text_among_the_readings_is_set_aside(tmp_path: Path) -> None:
    rows = _rows()
    rows[4][3] = "slipped"
    study = _study(tmp_path, [["Part", "Appraiser", "Trial", "D12"], *(r[:4] for r in rows)])
    assert len(study.gauge_studies[0].values) == 11
    assert cells(finding(study, "not-a-number", "D12")) == ["'Gauge'!D7"]


def test_readings_without_part_or_appraiser(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "Appraiser", "D12"], [1, "Kim", 12], [None, "Kim", 12.1], [2, None, 12.2]])
    assert study.gauge_studies[0].values == (12,)
    assert cells(finding(study, "gauge-unlabelled", "D12")) == ["'Gauge'!C4", "'Gauge'!C5"]


def test_without_appraisers_it_is_not_used(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "D12"], [1, 12]])
    assert study.gauge_studies == ()
    assert cells(finding(study, "gauge-incomplete")) == ["'Gauge'!A1"]


def test_empty_table_is_no_gauge_study(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "Appraiser", "Trial", "D12"]])
    assert study.gauge_studies == ()
    assert codes(study) == []


def test_unknown_column_of_values(tmp_path: Path) -> None:
    study = _study(tmp_path, [["Part", "Appraiser", "D12", "D99"], [1, "Kim", 12, 5]])
    assert cells(finding(study, "value-column-without-characteristic")) == ["'Gauge'!D2"]
