"""Many workbooks in one go."""

from pathlib import Path

import pytest

from sheetqc import batch, pipeline
from sheetqc.outcome import Outcome


@pytest.fixture
def tree(tmp_path: Path) -> Path:
    for name in ("a.xlsx", "sub/a.xlsx", "sub/b.xlsm", "a.answered.xlsx", "~$a.xlsx", ".hidden.xlsx", "notes.txt"):
        path = tmp_path / "tree" / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(b"")
    return tmp_path / "tree"


def test_a_folder_is_walked_and_own_results_are_left_alone(tree: Path, tmp_path: Path) -> None:
    jobs, missing = batch.planned([tree], tmp_path / "out")
    assert missing == ()
    assert [(j.source.relative_to(tree).as_posix(), j.into.relative_to(tmp_path).as_posix()) for j in jobs] == [
        ("a.xlsx", "out"),
        ("sub/a.xlsx", "out/sub"),
        ("sub/b.xlsm", "out/sub"),
    ]


def test_results_stand_beside_the_original_by_default(tree: Path) -> None:
    jobs, _ = batch.planned([tree / "sub" / "a.xlsx"], None)
    assert [(j.into, j.stem) for j in jobs] == [(tree / "sub", "a")]


def test_the_same_name_twice_gets_a_number(tree: Path, tmp_path: Path) -> None:
    jobs, _ = batch.planned([tree / "a.xlsx", tree / "sub" / "a.xlsx"], tmp_path / "out")
    assert [j.stem for j in jobs] == ["a", "a (2)"]


def test_a_file_named_twice_is_answered_once(tree: Path) -> None:
    jobs, _ = batch.planned([tree / "a.xlsx", tree], None)
    assert [j.source.name for j in jobs] == ["a.xlsx", "a.xlsx", "b.xlsm"]


def test_paths_that_lead_nowhere_are_told(tree: Path) -> None:
    jobs, missing = batch.planned([tree / "no.xlsx", tree / "a.xlsx"], None)
    assert missing == (tree / "no.xlsx",)
    assert len(jobs) == 1


def test_a_full_disk_stops_one_workbook_and_not_the_run(tree: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def answer(path: Path, into: Path, *, stem: str) -> Outcome:
        if path.name == "a.xlsx":
            raise OSError(28, "No space left on device")
        return Outcome(source=path, state="answered", report=into / f"{stem}.answered.json")

    monkeypatch.setattr(pipeline, "answer", answer)
    jobs, _ = batch.planned([tree / "a.xlsx", tree / "sub" / "b.xlsm"], None)
    outcomes = list(batch.answer_all(jobs))
    assert [o.state for o in outcomes] == ["returned", "answered"]
    assert "No space" in outcomes[0].text


def test_workers_answer_all(tmp_path: Path) -> None:
    examples = Path(__file__).parent.parent / "example_workbooks"
    names = ("burst-pressure.xlsx", "gasket-summary-only.xlsx")
    jobs, _ = batch.planned([examples / name for name in names], tmp_path)
    outcomes = {o.source.name: o.state for o in batch.answer_all(jobs, workers=2)}
    assert outcomes == {"burst-pressure.xlsx": "answered", "gasket-summary-only.xlsx": "returned"}
