"""Value cells as people fill them: what is read, what is repaired, what is set aside, and which cells are named."""

from __future__ import annotations

import datetime
from pathlib import Path

import openpyxl
import pytest

from sheetqc import intake
from sheetqc.errors import NothingToAnswer
from tests.intake.building import VALUES, Formula, Page, Shown, bore, cells, codes, column, finding, study_of, table


def test_plain_numbers_bring_no_finding(tmp_path: Path) -> None:
    study = study_of(
        tmp_path,
        {"B1": "qc:measurements", "B2": "D12", "C2": "F7", **column("B3", VALUES), **column("C3", [0.01, 0.02])},
    )
    bore_sample, flatness = study.samples
    assert bore_sample.values == tuple(VALUES)
    assert str(bore_sample.cells[0]) == "'Run'!B3"
    assert bore_sample.copied == ()
    assert bore_sample.censored == ()
    assert flatness.values == (0.01, 0.02)
    assert codes(study) == []


def test_decimal_commas_are_read_by_the_evidence_of_the_block(tmp_path: Path) -> None:
    study = bore(tmp_path, ["11,98", "12,01", "12,003", *VALUES])
    assert study.samples[0].values[:3] == (11.98, 12.01, 12.003)
    found = finding(study, "number-as-text", "D12")
    assert cells(found) == ["'Run'!B3", "'Run'!B4", "'Run'!B5"]
    assert found.level == "note"
    assert study.samples[0].copied[:4] == (True, True, True, False)


def test_thousands_marks(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "LSL"], ["D12", 1000]])
    values = ["1,250.5", "1,300", "1 310", "1'290", 1280]
    study = study_of(tmp_path, {"B1": "qc:measurements", "B2": "D12", **column("B3", values)}, spec)
    assert study.samples[0].values == (1250.5, 1300, 1310, 1290, 1280)
    assert cells(finding(study, "number-as-text", "D12")) == ["'Run'!B3", "'Run'!B4", "'Run'!B5", "'Run'!B6"]


def test_ambiguous_figure_is_read_by_the_size_of_the_others(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, "12,013"])
    assert study.samples[0].values[-1] == 12.013
    found = finding(study, "number-read-by-size", "D12")
    assert found.level == "caution"
    assert cells(found) == ["'Run'!B11"]


def test_size_overrules_a_decimal_mark_that_would_be_absurd(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, "12.5", "12,013"])
    assert study.samples[0].values[-1] == 12.013
    assert cells(finding(study, "number-read-by-size", "D12")) == ["'Run'!B12"]


def test_ambiguous_figure_without_evidence_is_asked_about(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id"], ["D12"]])
    with pytest.raises(NothingToAnswer) as caught:
        study_of(tmp_path, {"B1": "qc:measurements", "B2": "D12", **column("B3", ["1,234", "2,345"])}, spec)
    found = next(f for f in caught.value.findings if f.code == "ambiguous-number")
    assert cells(found) == ["'Run'!B3", "'Run'!B4"]
    assert found.text in str(caught.value)


@pytest.mark.parametrize(
    ("typed", "value"),
    [
        ("12,03 mm", 12.03),
        ("12.03mm", 12.03),
        ("12.03\u00a0", 12.03),
        ("  12.03", 12.03),
        ("１２．０３", 12.03),
        ("+12.03", 12.03),
        ("1.203e1", 12.03),
        ("12,03*", 12.03),
        ("12,03 OK", 12.03),
        ("12,03 i.O.", 12.03),
    ],
)
def test_texts_that_are_surely_numbers(tmp_path: Path, typed: str, value: float) -> None:
    study = bore(tmp_path, [*VALUES, typed])
    sample = study.samples[0]
    assert sample.values[-1] == value
    assert sample.copied[-1] is True
    named = [c for _, f in study.findings_of for c in cells(f)]
    assert "'Run'!B11" in named


@pytest.mark.parametrize("typed", ["12.03 ?", "12 03", "about 12", "1,2,3", "12.03/12.05", "--12", "12.03 kg"])
def test_texts_that_are_not_surely_numbers_are_set_aside(tmp_path: Path, typed: str) -> None:
    study = bore(tmp_path, [*VALUES, typed])
    assert study.samples[0].values == tuple(VALUES)
    named = [c for _, f in study.findings_of if f.level == "caution" for c in cells(f)]
    assert named == ["'Run'!B11"]


def test_minus_signs_of_all_kinds(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "LSL", "USL"], ["D12", -5, 5]])
    study = study_of(tmp_path, {"B1": "qc:measurements", "B2": "D12", **column("B3", ["−1,5", "–2,5", -0.5])}, spec)
    assert study.samples[0].values == (-1.5, -2.5, -0.5)


def test_unit_typed_with_the_number_is_converted_with_a_finding(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, "12010 µm", "1.2 cm"])
    assert study.samples[0].values[-2:] == pytest.approx((12.01, 12.0), rel=1e-14)
    found = finding(study, "unit-converted", "D12")
    assert cells(found) == ["'Run'!B11", "'Run'!B12"]
    assert found.level == "caution"


def test_unit_in_the_heading_is_converted_with_a_finding(tmp_path: Path) -> None:
    study = study_of(tmp_path, {"B1": "qc:measurements", "B2": "F7 [µm]", **column("B3", [12.5, 20, "8,5"])})
    sample = study.sample("F7")
    assert sample is not None
    assert sample.values == pytest.approx((0.0125, 0.02, 0.0085), rel=1e-14)
    assert sample.copied == (True, True, True)
    assert cells(finding(study, "unit-converted", "F7")) == ["'Run'!B3", "'Run'!B4", "'Run'!B5"]


def test_unit_row_below_the_headings(tmp_path: Path) -> None:
    study = study_of(
        tmp_path, {"B1": "qc:measurements", "B2": "D12", "C2": "F7", "B3": "mm", "C3": "µm", **table("B4", [[12, 9]])}
    )
    assert study.samples[0].values == (12.0,)
    assert study.samples[1].values == pytest.approx((0.009,))


def test_bounds_are_kept_as_bounds(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, "<11,5", "> 12.5", "≤ 11.4"])
    sample = study.samples[0]
    assert sample.values[-3:] == (11.5, 12.5, 11.4)
    assert sample.censored == ("",) * 8 + ("<", ">", "<")
    assert cells(finding(study, "censored-value", "D12")) == ["'Run'!B11", "'Run'!B12", "'Run'!B13"]


@pytest.mark.parametrize("typed", ["n.d.", "ND", "n.n.", "nicht nachweisbar", "未检出", "below detection limit"])
def test_not_detected_without_a_limit_is_asked_about(tmp_path: Path, typed: str) -> None:
    study = bore(tmp_path, [*VALUES, typed])
    assert study.samples[0].values == tuple(VALUES)
    assert cells(finding(study, "below-detection", "D12")) == ["'Run'!B11"]


@pytest.mark.parametrize("typed", ["-", "–", "n/a", "k.A.", "not measured", "/", "?"])
def test_words_for_no_reading(tmp_path: Path, typed: str) -> None:
    study = bore(tmp_path, [*VALUES[:3], typed, *VALUES[3:]])
    assert study.samples[0].values == tuple(VALUES)
    found = finding(study, "no-reading", "D12")
    assert found.level == "note"
    assert cells(found) == ["'Run'!B6"]


def test_free_text_is_set_aside(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, "operator on leave"])
    found = finding(study, "not-a-number", "D12")
    assert cells(found) == ["'Run'!B11"]
    assert "operator on leave" in found.text
    assert found.level == "caution"


@pytest.mark.parametrize("error", ["#DIV/0!", "#N/A", "#VALUE!", "#REF!"])
def test_error_values_are_neither_zero_nor_dropped_in_silence(tmp_path: Path, error: str) -> None:
    study = bore(tmp_path, [*VALUES, Formula("=1/0", error)])
    assert study.samples[0].values == tuple(VALUES)
    assert cells(finding(study, "error-value", "D12")) == ["'Run'!B11"]


@pytest.mark.parametrize("shown", ["dd.mm", "dd/mm/yyyy", "hh:mm:ss", "[h]:mm", "mmm yy"])
def test_dates_typed_by_mistake(tmp_path: Path, shown: str) -> None:
    study = bore(tmp_path, [*VALUES, Shown(datetime.datetime(2026, 3, 12), shown)])
    assert study.samples[0].values == tuple(VALUES)
    found = finding(study, "date-in-values", "D12")
    assert cells(found) == ["'Run'!B11"]
    assert "2026-03-12" in found.text


@pytest.mark.parametrize(
    "shown", ["0.000", '0.00 "mm"', "#,##0.00", "0.00E+00", "[Red]0.0", "0.0_);(0.0)", "General", "@"]
)
def test_number_formats_that_are_no_dates(tmp_path: Path, shown: str) -> None:
    study = bore(tmp_path, [*VALUES, Shown(12.04, shown)])
    assert study.samples[0].values[-1] == 12.04
    assert codes(study) == ["no-values"]


def test_booleans_are_set_aside(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, True])
    assert study.samples[0].values == tuple(VALUES)
    assert cells(finding(study, "boolean-in-values", "D12")) == ["'Run'!B11"]


def test_formulas_with_stored_results_are_values(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, Formula("=D11-E11", 12.05)])
    assert study.samples[0].values[-1] == 12.05
    assert study.samples[0].copied == ()


def _uncalculated(path: Path, formulas: dict[str, str]) -> Path:
    """A workbook written by a program that calculates nothing."""
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Run"
    for address, value in table("A1", [["qc:characteristics"], ["Id", "USL"], ["D12", 13]]).items():
        sheet[address] = value
    for address, value in {"A6": "qc:measurements", "A7": "D12", **column("A8", VALUES)}.items():
        sheet[address] = value
    for address, text in formulas.items():
        sheet[address] = text
    book.save(path)
    return path


def test_formulas_never_calculated_stop_the_characteristic(tmp_path: Path) -> None:
    study = intake.read(_uncalculated(tmp_path / "u.xlsx", {"A16": "=VLOOKUP(1,C1:D9,2)", "A17": "=NOW()"}))
    found = finding(study, "uncalculated-formula", "D12")
    assert found.level == "stop"
    assert cells(found) == ["'Run'!A16", "'Run'!A17"]
    assert intake.questions(study) == (found,)


def test_simple_formulas_never_calculated_are_computed(tmp_path: Path) -> None:
    formulas = {"A16": "=C16+D16/1000", "C16": "=12", "D16": "20", "A17": "=ROUND(AVERAGE(C17:D17),2)"}
    path = _uncalculated(tmp_path / "u.xlsx", {**formulas, "C17": 12.011, "D17": 12.02})  # type: ignore[dict-item]
    book = openpyxl.load_workbook(path)
    book["Run"]["D16"] = 20
    book.save(path)
    study = intake.read(path)
    assert study.samples[0].values[-2:] == pytest.approx((12.02, 12.02))
    found = finding(study, "formula-computed", "D12")
    assert cells(found) == ["'Run'!A16", "'Run'!A17"]
    assert study.samples[0].copied[-2:] == (True, True)


def test_struck_through_values_are_used_and_asked_about(tmp_path: Path) -> None:
    study = bore(tmp_path, [*VALUES, Shown(12.9, struck=True)])
    assert study.samples[0].values[-1] == 12.9
    assert cells(finding(study, "struck-through", "D12")) == ["'Run'!B11"]


def test_percent_format_with_percent_as_unit(tmp_path: Path) -> None:
    spec = table("A1", [["qc:characteristics"], ["Id", "Unit", "USL"], ["D12", "%", 5]])
    values = [Shown(0.03, "0.0%"), Shown(0.035, "0.0%"), 4]
    study = study_of(tmp_path, {"B1": "qc:measurements", "B2": "D12", **column("B3", values)}, spec)
    assert study.samples[0].values == pytest.approx((3, 3.5, 4))
    assert cells(finding(study, "unit-converted", "D12")) == ["'Run'!B3", "'Run'!B4"]


def test_percent_format_without_percent_as_unit_is_asked_about(tmp_path: Path) -> None:
    study = bore(tmp_path, [Shown(0.03, "0%"), 0.04])
    assert study.samples[0].values == (0.03, 0.04)
    assert cells(finding(study, "percent-format", "D12")) == ["'Run'!B3"]


def test_full_precision_is_kept(tmp_path: Path) -> None:
    study = bore(tmp_path, [0.1234567890123456, 12.30000000000001, 1e-17])
    assert study.samples[0].values == (0.1234567890123456, 12.30000000000001, 1e-17)


def test_hidden_and_filtered_rows_are_used_and_told(tmp_path: Path) -> None:
    page = Page({"B1": "qc:measurements", "B2": "D12", **column("B3", VALUES)}, hidden_rows=(4, 7))
    study = study_of(tmp_path, page)
    assert study.samples[0].values == tuple(VALUES)
    found = finding(study, "hidden-rows")
    assert found.level == "caution"
    assert cells(found) == ["'Run'!B4", "'Run'!B7"]


def test_hidden_columns_are_used_and_told(tmp_path: Path) -> None:
    page = Page({"B1": "qc:measurements", "B2": "D12", **column("B3", VALUES[:2])}, hidden_columns="B:B")
    study = study_of(tmp_path, page)
    assert study.samples[0].values == tuple(VALUES[:2])
    assert cells(finding(study, "hidden-columns")) == ["'Run'!B3", "'Run'!B4"]


def test_values_of_the_1904_system_are_no_trouble(tmp_path: Path) -> None:
    page = {"B1": "qc:measurements", "B2": "D12", "C2": "Time", **column("B3", VALUES[:1])}
    page["C3"] = Shown(datetime.datetime(2026, 3, 12, 6, 30), "yyyy-mm-dd hh:mm")
    for number, epoch in enumerate((False, True)):
        folder = tmp_path / str(number)
        folder.mkdir()
        study = study_of(folder, page, date_1904=epoch)
        assert study.samples[0].times == ("2026-03-12 06:30:00",)
