"""Bad input ends in words: where it is, what was met, what to do; never in a traceback, never in a changed original."""

from __future__ import annotations

import hashlib
import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from tests.bad_workbooks import FAULTS, Fault, no_tag, plain
from tests.office import opened


def sheetqc(*arguments: str | Path, cwd: Path | None = None) -> subprocess.CompletedProcess[str]:
    """Runs the command in a process of its own."""
    command = [sys.executable, "-m", "sheetqc", *map(str, arguments)]
    return subprocess.run(command, capture_output=True, text=True, encoding="utf-8", timeout=300, cwd=cwd)


def findings(document: dict[str, Any]) -> list[dict[str, Any]]:
    """All findings of a JSON answer."""
    return [*document["findings"], *(f for c in document.get("characteristics", ()) for f in c["findings"])]


def digest(path: Path) -> str:
    return hashlib.sha256(path.read_bytes()).hexdigest()


def names_in(folder: Path) -> set[str]:
    return {p.name for p in folder.iterdir()}


@pytest.fixture(scope="module")
def answered(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """Every fault answered in one run, as a folder of dropped workbooks would be."""
    drop = tmp_path_factory.mktemp("drop")
    into = drop.parent / f"{drop.name}-answers"
    for number, fault in enumerate(FAULTS):
        fault.write(drop / f"{number:02}{fault.ending}")
    hashes = {p.name: digest(p) for p in drop.iterdir()}
    run = sheetqc("answer", drop, "--into", into)
    return {"drop": drop, "into": into, "hashes": hashes, "run": run}


def report(answered: dict[str, Any], fault: Fault) -> dict[str, Any]:
    """The JSON of a fault's workbook, which has to be of the intended kind."""
    kind = "answered" if fault.answered else "returned"
    path = answered["into"] / f"{FAULTS.index(fault):02}.{kind}.json"
    return json.loads(path.read_text(encoding="utf-8"))


def test_the_run_goes_on_and_says_that_some_were_returned(answered: dict[str, Any]) -> None:
    run = answered["run"]
    assert run.returncode == 1
    assert "Traceback" not in run.stderr + run.stdout
    lines = run.stderr.splitlines()
    assert len(lines) == sum(1 for fault in FAULTS if not fault.answered)
    assert all(line.startswith("sheetqc: ") for line in lines)


def test_every_original_is_untouched_and_nothing_stands_beside_it(answered: dict[str, Any]) -> None:
    assert {p.name: digest(p) for p in answered["drop"].iterdir()} == answered["hashes"]


def test_each_workbook_has_its_results_and_no_others(answered: dict[str, Any]) -> None:
    expected = set()
    for number, fault in enumerate(FAULTS):
        endings = (".answered.xlsx", ".answered.json") if fault.answered else (".returned.json",)
        expected |= {f"{number:02}{ending}" for ending in endings}
    assert names_in(answered["into"]) == expected


@pytest.mark.parametrize("fault", FAULTS, ids=lambda f: f.name)
def test_the_answer_names_the_fault_and_its_place(fault: Fault, answered: dict[str, Any]) -> None:
    document = report(answered, fault)
    found = [f for f in findings(document) if f["code"] == fault.code]
    assert found, [f["code"] for f in findings(document)]
    about = [f for f in found if set(fault.cells) <= set(f["cells"])]
    assert about, [f["cells"] for f in found]
    assert any(all(word in f["text"] for word in fault.words) for f in about), [f["text"] for f in about]
    assert all(f["text"].endswith((".", "?")) for f in about)


@pytest.mark.parametrize("fault", [f for f in FAULTS if f.answered], ids=lambda f: f.name)
def test_what_can_be_answered_is(fault: Fault, answered: dict[str, Any]) -> None:
    document = report(answered, fault)
    states = {c["id"]: c["verdict"]["state"] for c in document["characteristics"]}
    for identity, state in (fault.states or {}).items():
        assert states[identity] == state
    sound = set(states) - set(fault.states or {})
    assert all(states[identity] in ("shown", "likely", "doubtful", "not met") for identity in sound)
    for characteristic in document["characteristics"]:
        assert characteristic["verdict"]["reasons"]


@pytest.mark.parametrize("fault", [f for f in FAULTS if f.answered], ids=lambda f: f.name)
def test_the_answered_copy_opens_and_keeps_the_sheets(fault: Fault, answered: dict[str, Any]) -> None:
    book = opened(answered["into"] / f"{FAULTS.index(fault):02}.answered.xlsx")
    assert book.sheetnames[:2] == ["Asked", "Run 1"]
    assert len(book.sheetnames) > 2


@pytest.mark.parametrize("fault", [f for f in FAULTS if not f.answered], ids=lambda f: f.name)
def test_a_returned_workbook_gives_its_reason(fault: Fault, answered: dict[str, Any]) -> None:
    document = report(answered, fault)
    name = f"{FAULTS.index(fault):02}{fault.ending}"
    assert document["source"]["name"] == name
    assert document["source"]["sha256"] == answered["hashes"][name]
    assert document["reason"] == document["findings"][0]["text"]
    assert document["findings"][0]["level"] == "stop"
    line = next(line for line in answered["run"].stderr.splitlines() if name in line)
    assert " ".join(document["reason"].split()) in line


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["answer", "nowhere.xlsx"], "nowhere.xlsx"),
        (["answer", "empty-folder"], "no workbook"),
        (["read", "nowhere.xlsx"], "nowhere.xlsx"),
        (["register", "nowhere"], "nowhere"),
        (["status", "nowhere"], "nowhere"),
        (["blank", "form.txt"], ".xlsx"),
        (["blank", "there.xlsx"], "there.xlsx"),
        (["blank", "no/such/folder/form.xlsx"], "form.xlsx"),
    ],
)
def test_wrong_usage_is_told_in_a_line(arguments: list[str], said: str, tmp_path: Path) -> None:
    (tmp_path / "empty-folder").mkdir()
    (tmp_path / "there.xlsx").write_bytes(b"mine")
    done = sheetqc(*arguments, cwd=tmp_path)
    assert done.returncode == 2
    assert len(done.stderr.splitlines()) == 1
    assert said in done.stderr
    assert (tmp_path / "there.xlsx").read_bytes() == b"mine"
    assert names_in(tmp_path) == {"empty-folder", "there.xlsx"}


@pytest.mark.parametrize("arguments", [[], ["answer"], ["answer", "x.xlsx", "--workers", "0"], ["judge", "x.xlsx"]])
def test_a_wrong_command_line_ends_with_2(arguments: list[str], tmp_path: Path) -> None:
    done = sheetqc(*arguments, cwd=tmp_path)
    assert done.returncode == 2
    assert "Traceback" not in done.stderr


def test_one_missing_file_does_not_keep_the_others_from_their_answer(tmp_path: Path) -> None:
    plain(tmp_path / "good.xlsx")
    done = sheetqc("answer", tmp_path / "nowhere.xlsx", tmp_path / "good.xlsx")
    assert done.returncode == 2
    assert "nowhere.xlsx" in done.stderr
    assert names_in(tmp_path) == {"good.xlsx", "good.answered.xlsx", "good.answered.json"}


def test_nothing_returned_ends_with_0(tmp_path: Path) -> None:
    plain(tmp_path / "good.xlsx")
    done = sheetqc("answer", tmp_path / "good.xlsx", "--into", tmp_path / "out")
    assert done.returncode == 0
    assert done.stderr == ""
    assert names_in(tmp_path / "out") == {"good.answered.xlsx", "good.answered.json"}


def test_a_mended_workbook_takes_the_place_of_its_return(tmp_path: Path) -> None:
    book = tmp_path / "study.xlsx"
    no_tag(book)
    assert sheetqc("answer", book).returncode == 1
    assert names_in(tmp_path) == {"study.xlsx", "study.returned.json"}
    plain(book)
    assert sheetqc("answer", book).returncode == 0
    assert names_in(tmp_path) == {"study.xlsx", "study.answered.xlsx", "study.answered.json"}


def test_read_says_in_a_line_why_it_cannot(tmp_path: Path) -> None:
    no_tag(tmp_path / "study.xlsx")
    done = sheetqc("read", tmp_path / "study.xlsx")
    assert done.returncode == 1
    assert len(done.stderr.splitlines()) == 1
    assert "qc:characteristics" in done.stderr
