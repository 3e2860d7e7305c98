"""The corridor: what it does when a room fails."""

import json
from pathlib import Path

import pytest

from sheetqc import judgement, pipeline
from sheetqc.study import Study

EXAMPLE = Path(__file__).parent.parent / "example_workbooks" / "burst-pressure.xlsx"


def test_a_fault_of_sheetqc_itself_returns_the_workbook(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def failing(study: Study) -> None:
        raise ZeroDivisionError("division by zero")

    monkeypatch.setattr(judgement, "judge", failing)
    outcome = pipeline.answer(EXAMPLE, tmp_path)
    assert outcome.state == "returned"
    report = json.loads(outcome.report.read_text(encoding="utf-8"))
    assert report["findings"][0]["code"] == "unforeseen"
    assert "ZeroDivisionError" in report["reason"]
    assert sorted(p.name for p in tmp_path.iterdir()) == ["burst-pressure.returned.json"]


def test_a_full_disk_is_no_fault_of_the_workbook(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def failing(study: Study) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(judgement, "judge", failing)
    with pytest.raises(OSError, match="space"):
        pipeline.answer(EXAMPLE, tmp_path)


def test_the_results_may_have_another_stem(tmp_path: Path) -> None:
    outcome = pipeline.answer(EXAMPLE, tmp_path, stem="again (2)")
    assert outcome.workbook == tmp_path / "again (2).answered.xlsx"
    assert outcome.report == tmp_path / "again (2).answered.json"
