"""Layouts as people make them: where blocks stand, how values are arranged, what is passed over."""

from __future__ import annotations

import datetime
import pickle
from pathlib import Path
from typing import Any

import pytest

from sheetqc import intake
from sheetqc.errors import NothingToAnswer
from sheetqc.study import Study
from tests.intake.building import (
    CHARACTERISTICS,
    VALUES,
    Formula,
    Page,
    Shown,
    cells,
    codes,
    column,
    finding,
    study_of,
    table,
    write,
)


@pytest.mark.parametrize("tag", ["qc:measurements", "QC:Measurements", "  qc:measurements\u00a0", "ｑｃ：measurements"])
def test_tags_in_any_case_with_blanks_around(tmp_path: Path, tag: str) -> None:
    study = study_of(tmp_path, {"F20": tag, "F21": "D12", **column("F22", VALUES)})
    assert study.samples[0].values == tuple(VALUES)
    assert str(study.samples[0].cells[0]) == "'Run'!F22"


def test_a_text_that_merely_contains_a_tag_opens_nothing(tmp_path: Path) -> None:
    study = study_of(
        tmp_path, {"A1": "see qc:measurements", "A2": 5, "C5": "qc:measurements", "C6": "D12", **column("C7", VALUES)}
    )
    assert study.samples[0].values == tuple(VALUES)
    assert codes(study) == ["no-values"]


def test_all_blocks_on_one_sheet_below_each_other(tmp_path: Path) -> None:
    sheet = {
        **table("B2", [["qc:study"], ["Part number", "P1"], ["Requirement", 1.5]]),
        **table("B7", [["qc:characteristics"], ["Id", "USL"], ["D12", 13], ["F7", 1]]),
        **table("B12", [["qc:measurements"], ["D12", "F7"], [12, 0.1], [12.5, 0.2]]),
    }
    study = intake.read(write(tmp_path / "one.xlsx", {"Data": sheet}))
    assert study.header.part_number == "P1"
    assert [c.id for c in study.characteristics] == ["D12", "F7"]
    assert [s.values for s in study.samples] == [(12, 12.5), (0.1, 0.2)]
    assert codes(study) == []


@pytest.mark.parametrize("gap", [0, 1, 3])
def test_blocks_side_by_side(tmp_path: Path, gap: int) -> None:
    right = "CDEFG"[gap]
    sheet = {
        **table("A1", [["qc:characteristics"], ["Id", "USL"], ["D12", 13], ["F7", 1]]),
        **table(f"{right}1", [["qc:measurements"], ["D12", "F7"], *([12 + i / 100, i / 1000] for i in range(30))]),
    }
    study = intake.read(write(tmp_path / "side.xlsx", {"Data": sheet}))
    assert [c.id for c in study.characteristics] == ["D12", "F7"]
    assert [len(s.values) for s in study.samples] == [30, 30]
    assert codes(study) == []


def test_study_and_characteristics_left_of_long_measurements(tmp_path: Path) -> None:
    sheet = {
        **table("A1", [["qc:study"], ["Part number", "P1"], ["Lot", "L7"]]),
        **table("A6", [["qc:characteristics"], ["Id", "USL"], ["D12", 13]]),
        **table("D1", [["qc:measurements"], ["D12"], *([12 + i / 100] for i in range(40))]),
    }
    study = intake.read(write(tmp_path / "left.xlsx", {"Data": sheet}))
    assert (study.header.part_number, study.header.lot) == ("P1", "L7")
    assert [c.id for c in study.characteristics] == ["D12"]
    assert len(study.samples[0].values) == 40
    assert codes(study) == []


def test_wide_measurements_below_two_blocks_side_by_side(tmp_path: Path) -> None:
    sheet = {
        **table("A1", [["qc:study"], ["Part number", "P1"]]),
        **table("D1", [["qc:characteristics"], ["Id", "USL"], ["D12", 13], ["F7", 1]]),
        **table("A10", [["qc:measurements"], ["Subgroup", "Time", "Stream", "D12", "F7"], ["1", "a", "x", 12, 0.5]]),
    }
    study = intake.read(write(tmp_path / "below.xlsx", {"Data": sheet}))
    assert [c.id for c in study.characteristics] == ["D12", "F7"]
    assert [s.values for s in study.samples] == [(12,), (0.5,)]
    assert codes(study) == []


def test_measurements_further_down_to_the_right(tmp_path: Path) -> None:
    sheet = {
        **table("A1", [["qc:characteristics"], ["Id", "USL"], *([f"C{i}", 13] for i in range(9))]),
        **table("F4", [["qc:measurements"], [f"C{i}" for i in range(9)], *([[12.0] * 9] * 5)]),
    }
    study = intake.read(write(tmp_path / "right.xlsx", {"Data": sheet}))
    assert len(study.characteristics) == 9
    assert [len(s.values) for s in study.samples] == [5] * 9


def test_untagged_sheets_are_left_alone(tmp_path: Path) -> None:
    pages = {
        "Cover": {"A1": "Id", "B1": "USL", "A2": "Z", "B2": 1},
        "Spec": CHARACTERISTICS,
        "Run": {"A1": "qc:measurements", "A2": "D12", **column("A3", VALUES)},
    }
    study = intake.read(write(tmp_path / "c.xlsx", pages))
    assert [c.id for c in study.characteristics] == ["D12", "F7"]


def test_hidden_sheets_are_left_alone_and_told(tmp_path: Path) -> None:
    run = {"A1": "qc:measurements", "A2": "D12", **column("A3", VALUES)}
    pages = {"Spec": CHARACTERISTICS, "Old": Page(dict(run), hidden=True), "Run": run}
    study = intake.read(write(tmp_path / "h.xlsx", pages))
    assert len(study.samples[0].values) == len(VALUES)
    assert cells(finding(study, "hidden-sheet")) == ["'Old'!A1"]


def test_several_sheets_for_one_characteristic_are_joined_and_told(tmp_path: Path) -> None:
    pages = {
        "Spec": CHARACTERISTICS,
        "Day 1": table("A1", [["qc:measurements"], ["Subgroup", "D12"], [1, 12], [1, 12.1], [2, 12.2]]),
        "Day 2": table("A1", [["qc:measurements"], ["Subgroup", "D12"], [1, 11.9], [2, 11.8]]),
    }
    study = intake.read(write(tmp_path / "s.xlsx", pages))
    sample = study.samples[0]
    assert sample.values == (12, 12.1, 12.2, 11.9, 11.8)
    assert sample.subgroups is not None
    assert len(dict.fromkeys(sample.subgroups)) == 4, "subgroups of two days are not one"
    assert cells(finding(study, "several-blocks", "D12")) == ["'Day 1'!A1", "'Day 2'!A1"]


def test_subgroups_times_and_streams_by_column(tmp_path: Path) -> None:
    rows = [
        ["Time", "D12", "Cavity", "Subgroup"],
        ["06:00", 12, 1, "a"],
        ["06:10", 12.1, 2, "a"],
        ["07:00", 11.9, 1, "b"],
    ]
    sample = study_of(tmp_path, table("A1", [["qc:measurements"], *rows])).samples[0]
    assert sample.subgroups == ("a", "a", "b")
    assert sample.times == ("06:00", "06:10", "07:00")
    assert sample.streams == ("1", "2", "1")


def test_subgroups_by_size_count_the_rows_that_were_measured_together(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "USL", "Subgroup size"], ["D12", 13, 3]])
    page = {"A1": "qc:measurements", "A2": "D12", **column("A3", [12, "lost", 12.2, 12.3, 12.4, 12.5, 12.6])}
    sample = study_of(tmp_path, page, spec).samples[0]
    assert sample.values == (12, 12.2, 12.3, 12.4, 12.5, 12.6)
    assert sample.subgroups == ("1", "1", "2", "2", "2", "3")


def test_left_out_rows_are_listed_with_their_reason(tmp_path: Path) -> None:
    rows = [["D12", "F7", "Leave out"], [12, 0.01, None], [99, 0.02, "chip in the jaw"], [12.1, 0.03, None]]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    bore, flatness = study.samples
    assert bore.values == (12, 12.1)
    assert [(p.value, str(p.cell), p.reason) for p in bore.left_out] == [(99, "'Run'!A4", "chip in the jaw")]
    assert [str(p.cell) for p in flatness.left_out] == ["'Run'!B4"]


def test_long_form(tmp_path: Path) -> None:
    rows = [
        ["Characteristic", "Value", "Subgroup"],
        ["D12", 12, 1], ["F7", 0.01, 1], ["d12", 12.1, 2], ["Bore", 12.2, 2], ["Z9", 5, 1], [None, 7, 1],
    ]  # fmt: skip
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert study.samples[0].values == (12, 12.1, 12.2)
    assert study.samples[0].subgroups == ("1", "2", "2")
    assert study.samples[1].values == (0.01,)
    told = [f for f in study.findings if f.code == "unlisted-characteristic"]
    assert [cells(f) for f in told] == [["'Run'!A7"], ["'Run'!A8"]]
    assert "Z9" in told[0].text
    assert "D12" in told[0].text


def test_subgroups_as_rows_with_merged_heading(tmp_path: Path) -> None:
    entries = table(
        "A1", [["qc:measurements"], ["Subgroup", "D12"], *([i, *(12 + i + j / 10 for j in range(5))] for i in (1, 2))]
    )
    study = study_of(tmp_path, Page(entries, merged=("B2:F2",)))
    sample = study.samples[0]
    assert sample.values == pytest.approx([13, 13.1, 13.2, 13.3, 13.4, 14, 14.1, 14.2, 14.3, 14.4])
    assert sample.subgroups == ("1",) * 5 + ("2",) * 5
    assert cells(finding(study, "values-across", "D12")) == [f"'Run'!{c}2" for c in "BCDEF"]


def test_subgroups_as_rows_below_two_row_headings(tmp_path: Path) -> None:
    rows = [
        ["No", "D12", None, None, "F7"],
        [None, "x1", "x2", "x3", None],
        [1, 12, 12.1, 12.2, 0.01],
        [2, 13, 13.1, 13.2, 0.02],
    ]
    study = study_of(tmp_path, Page(table("A1", [["qc:measurements"], *rows]), merged=("B2:D2",)))
    bore, flatness = study.samples
    assert bore.values == (12, 12.1, 12.2, 13, 13.1, 13.2)
    assert bore.subgroups == ("1", "1", "1", "2", "2", "2")
    assert flatness.values == (0.01, 0.02)


def test_streams_as_columns(tmp_path: Path) -> None:
    rows = [["D12", None], ["Cavity 1", "Cavity 2"], [12, 12.5], [12.1, 12.6]]
    study = study_of(tmp_path, Page(table("A1", [["qc:measurements"], *rows]), merged=("A2:B2",)))
    sample = study.samples[0]
    assert sample.values == (12, 12.5, 12.1, 12.6)
    assert sample.streams == ("1", "2", "1", "2")
    assert sample.subgroups is None


def test_merged_subgroup_labels_hold_for_all_their_rows(tmp_path: Path) -> None:
    rows = [["Subgroup", "D12"], ["a", 12], [None, 12.1], ["b", 12.2], [None, 12.3]]
    study = study_of(tmp_path, Page(table("A1", [["qc:measurements"], *rows]), merged=("A3:A4", "A5:A6")))
    assert study.samples[0].subgroups == ("a", "a", "b", "b")


def test_merged_values_are_not_duplicated(tmp_path: Path) -> None:
    study = study_of(
        tmp_path, Page(table("A1", [["qc:measurements"], ["D12"], [12], [None], [12.3]]), merged=("A3:A4",))
    )
    assert study.samples[0].values == (12, 12.3)


def test_two_row_headings_of_characteristics(tmp_path: Path) -> None:
    rows = [["Id", "Specification", None], [None, "LSL", "USL"], ["D12", 11, 13]]
    spec = Page(table("A1", [["qc:characteristics"], *rows]), merged=("B2:C2", "A2:A3"))
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["D12"], [12]]), spec)
    assert (study.characteristics[0].limits.lower, study.characteristics[0].limits.upper) == (11, 13)
    assert codes(study) == []


def test_a_line_of_words_between_tag_and_headings(tmp_path: Path) -> None:
    page = {"A1": "qc:measurements", "A2": "All values in the order of production", "A4": "D12", **column("A5", VALUES)}
    assert study_of(tmp_path, page).samples[0].values == tuple(VALUES)


def test_spacer_rows_and_wide_gaps_lose_nothing(tmp_path: Path) -> None:
    page = {"A1": "qc:measurements", "A2": "D12", "A3": 12, "A10": 12.1, "A4000": 12.2, "A200000": 12.3}
    sample = study_of(tmp_path, page).samples[0]
    assert sample.values == (12, 12.1, 12.2, 12.3)
    assert str(sample.cells[-1]) == "'Run'!A200000"


def test_repeated_heading_rows_are_passed_over(tmp_path: Path) -> None:
    rows = [["No", "D12", "F7"], [1, 12, 0.01], ["No", "D12", "F7"], [2, 12.1, 0.02]]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert study.samples[0].values == (12, 12.1)
    assert cells(finding(study, "repeated-heading")) == ["'Run'!A4"]


@pytest.mark.parametrize(
    "label", ["Mean", "Average:", "Mittelwert", "Summe", "Std. Dev.", "平均値", "n", "Cpk", "Écart-type"]
)
def test_summary_rows_by_label(tmp_path: Path, label: str) -> None:
    rows = [["No", "D12"], [1, 12], [2, 12.2], [None, None], [label, 12.1]]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert study.samples[0].values == (12, 12.2)
    assert cells(finding(study, "summary-row")) == ["'Run'!A6"]


def test_summary_rows_by_a_label_left_of_the_block(tmp_path: Path) -> None:
    study = study_of(tmp_path, {"B1": "qc:measurements", "B2": "D12", "B3": 12, "B4": 12.2, "A6": "Mean", "B6": 12.1})
    assert study.samples[0].values == (12, 12.2)
    assert cells(finding(study, "summary-row")) == ["'Run'!A6"]


@pytest.mark.parametrize(
    "formula", ["=AVERAGE(A3:A10)", "=SUM($A$3:$A$10)", "=STDEV(A3:A10)", "=_xlfn.STDEV.S(A3:A10)"]
)
def test_summary_rows_by_formula(tmp_path: Path, formula: str) -> None:
    study = study_of(
        tmp_path, {"A1": "qc:measurements", "A2": "D12", **column("A3", VALUES), "A12": Formula(formula, 12.5)}
    )
    assert study.samples[0].values == tuple(VALUES)
    assert cells(finding(study, "summary-row")) == ["'Run'!A12"]


def test_a_mean_across_the_row_is_a_value(tmp_path: Path) -> None:
    page = {"A1": "qc:measurements", "A2": "D12", **{f"A{r}": Formula(f"=AVERAGE(C{r}:F{r})", r) for r in range(3, 9)}}
    assert study_of(tmp_path, page).samples[0].values == (3, 4, 5, 6, 7, 8)


@pytest.mark.parametrize(
    "heading", ["d12", "D 12", "D12 ", "Ｄ１２", "D12 [mm]", "D12 (mm)", "Bore", "BORE", "D12 Bore", "D12: Bore"]
)
def test_headings_as_people_write_them(tmp_path: Path, heading: str) -> None:
    assert study_of(tmp_path, {"A1": "qc:measurements", "A2": heading, "A3": 12}).samples[0].values == (12,)


def test_headings_that_are_formulas_or_numbers(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "USL"], [10, 13], ["20", 13]])
    page = {"A1": "qc:measurements", "A2": Formula("=Spec!A3", 10), "B2": Formula("=Spec!A4", "20"), "A3": 12, "B3": 11}
    study = study_of(tmp_path, page, spec)
    assert [c.id for c in study.characteristics] == ["10", "20"]
    assert [s.values for s in study.samples] == [(12,), (11,)]


def test_ids_that_differ_in_punctuation_alone_are_kept_apart(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "USL"], ["1.2", 13], ["12", 13], ["1-2", 13]])
    page = table("A1", [["qc:measurements"], ["12", "1.2", "1-2"], [1, 2, 3]])
    study = study_of(tmp_path, page, spec)
    assert [(s.characteristic, s.values) for s in study.samples] == [("1.2", (2,)), ("12", (1,)), ("1-2", (3,))]


def test_value_column_without_a_characteristic(tmp_path: Path) -> None:
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["D12", "D13"], [12, 5], [12.1, 6]]))
    found = finding(study, "value-column-without-characteristic")
    assert cells(found) == ["'Run'!B2"]
    assert "D13" in found.text
    assert "D12 and F7" in found.text


def test_values_without_any_heading(tmp_path: Path) -> None:
    study = study_of(tmp_path, {"A1": "qc:measurements", "A2": "D12", "A3": 12, "C3": 7, "C4": 8})
    assert cells(finding(study, "value-column-without-characteristic")) == ["'Run'!C2"]


def test_unknown_column(tmp_path: Path) -> None:
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["D12", "Weather"], [12, "rain"], [12.1, "sun"]]))
    found = finding(study, "unknown-column")
    assert cells(found) == ["'Run'!B2"]
    assert "Weather" in found.text


def test_columns_beside_the_values_that_everybody_has(tmp_path: Path) -> None:
    rows = [
        ["No.", "Serial number", "Operator", "D12", "Remark"],
        [1, "S1", "Kim", 12, "x"],
        [2, "S2", "Lee", 12.1, None],
    ]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert study.samples[0].values == (12, 12.1)
    assert codes(study) == ["no-values"]


def test_characteristic_without_values(tmp_path: Path) -> None:
    study = study_of(tmp_path, {"A1": "qc:measurements", "A2": "D12", "A3": 12})
    found = finding(study, "no-values", "F7")
    assert found.level == "stop"
    assert cells(found) == ["'Spec'!A4"]


def test_measurements_without_a_known_heading(tmp_path: Path) -> None:
    page = table("A1", [["qc:measurements"], ["X", "Y"], [1, 2]]) | table("D1", [["qc:measurements"], ["D12"], [12]])
    found = finding(study_of(tmp_path, page), "no-heading-row")
    assert found.level == "stop"
    assert cells(found) == ["'Run'!A1", "'Run'!A2", "'Run'!B2"]
    assert "D12 and F7" in found.text


@pytest.mark.parametrize("rows", [[[1, 2], [3, 4]], [["X", "Y"], [1, 2]], []])
def test_nothing_but_measurements_without_headings_is_returned(tmp_path: Path, rows: list[list[Any]]) -> None:
    with pytest.raises(NothingToAnswer) as caught:
        study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert str(caught.value.cell) == "'Run'!A1"
    assert "D12 and F7" in str(caught.value)
    assert "no-heading-row" in [f.code for f in caught.value.findings]
    assert pickle.loads(pickle.dumps(caught.value)).findings == caught.value.findings


def test_times_are_kept_as_texts(tmp_path: Path) -> None:
    moments = [datetime.datetime(2026, 3, 12, 6, 0), datetime.datetime(2026, 3, 12, 6, 30)]
    entries = {"A1": "qc:measurements", "A2": "Time", "B2": "D12", **column("B3", [12, 12.1])}
    entries |= column("A3", [Shown(m, "yyyy-mm-dd hh:mm") for m in moments])
    assert study_of(tmp_path, entries).samples[0].times == ("2026-03-12 06:00:00", "2026-03-12 06:30:00")


def test_headings_in_other_languages(tmp_path: Path) -> None:
    spec = table(
        "A1",
        [["qc:characteristics"], ["Merkmal-Nr.", "Einheit", "Untere Toleranzgrenze", "OGW"], ["D12", "mm", 11, 13]],
    )
    rows = [
        ["Stichprobe", "Uhrzeit", "Nest", "D12", "Auslassen"],
        [1, "06:00", 3, 12, None],
        [1, "06:01", 4, 99, "Grat"],
    ]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]), spec)
    assert study.characteristics[0].limits.lower == 11
    assert study.characteristics[0].limits.upper == 13
    assert study.samples[0].streams == ("3",)
    assert study.samples[0].left_out[0].reason == "Grat"
    assert codes(study) == []


def _timed(path: Path, times: list[Any]) -> Study:
    entries = {"A1": "qc:measurements", "A2": "Time", "B2": "D12", **column("A3", times)}
    return study_of(path, entries | column("B3", [12 + i / 100 for i in range(len(times))]))


@pytest.mark.parametrize(
    "times",
    [
        ["2026-03-12 06:00", "2026-03-12 07:00", "2026-03-12 06:59"],
        ["12.03.2026", "13.03.2026", "01.03.2026"],
        ["3/12/2026 6:00", "3/13/2026 6:00", "3/12/2026 7:00"],
        [3, 4, 2],
    ],
)
def test_rows_out_of_time_order_are_told(tmp_path: Path, times: list[Any]) -> None:
    study = _timed(tmp_path, times)
    assert study.samples[0].order_known is False
    found = finding(study, "not-in-time-order", "D12")
    assert cells(found) == ["'Run'!B5"]


@pytest.mark.parametrize(
    "times",
    [
        ["2026-03-12 06:00", "2026-03-12 06:00", "2026-03-13 05:00"],
        ["22:00", "23:00", "06:00"],
        ["31.01.2026", "01.02.2026", "02.02.2026"],
        ["01/02/2026", "02/01/2026", "03/01/2026"],
        ["early", "late", "early"],
        ["2026-03-12", None, "2026-03-13"],
    ],
)
def test_rows_that_may_stand_in_time_order_bring_no_doubt(tmp_path: Path, times: list[Any]) -> None:
    study = _timed(tmp_path, times)
    assert study.samples[0].order_known is True
    assert codes(study) == ["no-values"]


def test_subgroup_written_in_its_first_row_only(tmp_path: Path) -> None:
    rows = [["Subgroup", "D12"], ["a", 12], [None, 12.1], ["b", 12.2], [None, 12.3]]
    study = study_of(tmp_path, table("A1", [["qc:measurements"], *rows]))
    assert study.samples[0].subgroups == ("a", "a", "b", "b")
    assert cells(finding(study, "subgroup-filled-down")) == ["'Run'!A4", "'Run'!A6"]


def test_heading_that_may_mean_two_characteristics(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "Name", "USL"], ["D1", "Bore", 13], ["D2", "Bore", 14]])
    study = study_of(tmp_path, table("A1", [["qc:measurements"], ["Bore", "D1"], [12, 12.5]]), spec)
    assert study.samples[0].values == (12.5,)
    found = finding(study, "value-column-without-characteristic")
    assert cells(found) == ["'Run'!A2"]
    assert "D1 or D2" in found.text


def test_thousands_of_merged_labels_are_read_at_once(tmp_path: Path) -> None:
    entries: dict[str, Any] = {"A1": "qc:measurements", "A2": "Subgroup", "B2": "D12"}
    entries |= {f"A{3 + 2 * i}": f"g{i}" for i in range(4000)} | column("B3", [12.0] * 8000)
    merged = [f"A{3 + 2 * i}:A{4 + 2 * i}" for i in range(4000)]
    sample = study_of(tmp_path, Page(entries, merged=merged)).samples[0]
    assert sample.subgroups == tuple(f"g{i // 2}" for i in range(8000))
