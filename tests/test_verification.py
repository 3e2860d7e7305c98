"""An answered workbook is verified, and a tampered one found out."""

from pathlib import Path

import openpyxl
import pytest

from sheetqc import pipeline
from sheetqc.cli import main
from sheetqc.errors import NothingToAnswer
from sheetqc.verification import named_results, same, verify

EXAMPLE = Path(__file__).parent.parent / "example_workbooks" / "seal-ring.xlsx"


@pytest.fixture(scope="module")
def answered(tmp_path_factory: pytest.TempPathFactory) -> Path:
    outcome = pipeline.answer(EXAMPLE, tmp_path_factory.mktemp("answered"))
    assert outcome.workbook is not None
    return outcome.workbook


def test_an_untouched_answer_is_verified(answered: Path, capsys: pytest.CaptureFixture[str]) -> None:
    before = answered.read_bytes()
    found = verify(answered)
    assert found.compared > 40
    assert found.differences == ()
    assert answered.read_bytes() == before
    assert main(["verify", str(answered)]) == 0
    assert "0 differ" in capsys.readouterr().out


def test_a_changed_reading_is_found_out(answered: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book = openpyxl.load_workbook(answered, data_only=True)
    sheet = next(s for s in book.worksheets if any(c.value == "qc:measurements" for row in s["A1:J20"] for c in row))
    cell = next(c for row in sheet.iter_rows() for c in row if isinstance(c.value, float))
    cell.value += 0.05
    book.save(tmp_path / "changed.xlsx")
    found = verify(tmp_path / "changed.xlsx")
    assert {d.name.rsplit(".", 1)[-1] for d in found.differences} >= {"Mean", "s", "Ppk"}
    assert main(["verify", str(tmp_path / "changed.xlsx")]) == 1
    assert "qc.FL1.Mean: stored" in capsys.readouterr().out


def test_a_workbook_without_results_is_told() -> None:
    assert named_results(EXAMPLE) == {}
    with pytest.raises(NothingToAnswer, match="no results"):
        verify(EXAMPLE)


def test_a_missing_file_is_wrong_usage(tmp_path: Path) -> None:
    assert main(["verify", str(tmp_path / "no.xlsx")]) == 2


@pytest.mark.parametrize(
    ("one", "other", "equal"),
    [(1.0, 1.0 + 1e-11, True), (1.0, 1.001, False), ("shown", "shown", True), ("–", 1.0, False), (None, 1.0, False)],
)
def test_sameness(one: object, other: object, equal: bool) -> None:
    assert same(one, other) is equal  # type: ignore[arg-type]


def test_a_sheet_with_an_apostrophe_in_its_name(tmp_path: Path) -> None:
    book = openpyxl.load_workbook(EXAMPLE)
    heading = [c for s in book.worksheets for row in s.iter_rows() for c in row if c.value == "H2"]
    for each in heading:
        each.value = "O'H2"
    book.save(tmp_path / "named.xlsx")
    outcome = pipeline.answer(tmp_path / "named.xlsx", tmp_path / "out")
    assert outcome.workbook is not None
    assert verify(outcome.workbook).differences == ()
