"""What `sheetqc read` says: as text and as JSON, with its exit code."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from sheetqc import intake
from sheetqc.cli import main
from tests.intake.building import CHARACTERISTICS, VALUES, column, table, write


def _book(path: Path, **more: object) -> Path:
    run = {"A1": "qc:measurements", "A2": "D12", "B2": "F7", "C2": "Leave out", **column("A3", VALUES)}
    run |= {**column("B3", [0.01, "0,02", "<0.005"]), "C4": "dropped", **more}
    study = table("A1", [["qc:study"], ["Part number", "P1"]])
    return write(path / "s.xlsx", {"Study": study, "Spec": CHARACTERISTICS, "Run": run})


def test_text(tmp_path: Path) -> None:
    text = intake.understood_text(intake.read(_book(tmp_path)))
    assert "Part number: P1  ('Study'!B2)" in text
    assert "D12 Bore: LSL 11.9, USL 12.1 mm" in text
    assert "7 values from 'Run'!A3 to 'Run'!A10, 1 left out" in text
    assert "Nothing has to be answered first." in text


def test_plain_types(tmp_path: Path) -> None:
    said = intake.understood(intake.read(_book(tmp_path)))
    again = json.loads(json.dumps(said, allow_nan=False))
    flatness = again["characteristics"][1]
    assert flatness["count"] == 2
    assert flatness["left_out"] == 1
    assert flatness["censored"] == 1
    assert flatness["limits"]["upper"] == 0.05
    assert flatness["first_cell"] == "'Run'!B3"
    assert again["study"]["part_number"] == "P1"
    assert again["questions"] == []


def test_command(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["read", str(_book(tmp_path)), "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["source"]["name"] == "s.xlsx"


def test_command_asks_with_exit_code_1(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    pages = {
        "Spec": table("A1", [["qc:characteristics"], ["Id", "LSL", "USL"], ["D12", 13, 11]]),
        "Run": {"A1": "qc:measurements", "A2": "D12", "A3": 12},
    }
    assert main(["read", str(write(tmp_path / "q.xlsx", pages))]) == 1
    said = capsys.readouterr().out
    assert "STOP: LSL 13 ('Spec'!B3) is not below USL 11 ('Spec'!C3) for D12." in said
    assert "1 to be answered first." in said
