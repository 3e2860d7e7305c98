from __future__ import annotations

import os
from itertools import pairwise
from pathlib import Path

import pytest

from sheetqc.folder import sweep as module
from sheetqc.folder.sweep import OPEN, Sweep, dropped_files
from tests.folder.standin import package


def _ready(sweep: Sweep, now: float) -> list[str]:
    sweep.look(now)
    return [p.name for p in sweep.ready(now, 10)]


def test_taken_after_it_lay_still(tmp_path: Path) -> None:
    sweep = Sweep(tmp_path, settle=0.5)
    package(tmp_path / "a.xlsx")
    assert _ready(sweep, 100.0) == []
    assert sweep.next_look(100.0) == 0.5
    assert _ready(sweep, 100.4) == []
    assert _ready(sweep, 100.5) == ["a.xlsx"]


def test_a_change_starts_the_wait_anew(tmp_path: Path) -> None:
    sweep = Sweep(tmp_path, settle=0.5)
    path = package(tmp_path / "a.xlsx")
    assert _ready(sweep, 100.0) == []
    os.utime(path, (1.0, 1.0))  # a clock set back is a change like any other
    assert _ready(sweep, 100.6) == []
    assert _ready(sweep, 101.1) == ["a.xlsx"]


def test_slow_copy(tmp_path: Path) -> None:
    content = package(tmp_path / "whole" / "a.xlsx", size=4000).read_bytes()
    sweep, inbox, now = Sweep(tmp_path / "in", settle=0.2, patience=30.0), tmp_path / "in", 0.0
    inbox.mkdir()
    for length in range(100, len(content), 500):
        (inbox / "a.xlsx").write_bytes(content[:length])
        for _ in range(3):  # a pause longer than the settling time
            assert _ready(sweep, now) == []
            now += 1.0
    (inbox / "a.xlsx").write_bytes(content)
    assert _ready(sweep, now) == []
    assert _ready(sweep, now + 0.2) == ["a.xlsx"]


def test_unfinished_is_taken_as_it_is_in_the_end(tmp_path: Path) -> None:
    (tmp_path / "a.xlsx").write_bytes(b"PK\3\4 and no more")
    sweep = Sweep(tmp_path, settle=0.2, patience=30.0)
    assert _ready(sweep, 0.0) == []
    assert _ready(sweep, 29.0) == []
    assert _ready(sweep, 30.0) == ["a.xlsx"]


def test_other_files_wait_a_little_longer(tmp_path: Path) -> None:
    (tmp_path / "a.csv").write_text("1;2")
    sweep = Sweep(tmp_path, settle=0.2)
    assert _ready(sweep, 0.0) == []
    assert _ready(sweep, 0.5) == []
    assert _ready(sweep, 1.0) == ["a.csv"]


@pytest.mark.parametrize("lock", ["~$a.xlsx", ".~lock.a.xlsx#"])
def test_lock_files(tmp_path: Path, lock: str) -> None:
    package(tmp_path / "a.xlsx")
    package(tmp_path / "b.xlsx")
    (tmp_path / lock).touch()
    sweep = Sweep(tmp_path, settle=0.1)
    assert _ready(sweep, 0.0) == []
    assert _ready(sweep, 1.0) == ["b.xlsx"]
    assert OPEN in {d.aside for d in sweep.aside()}
    (tmp_path / lock).unlink()
    sweep.look(2.0)
    assert "a.xlsx" in _ready(sweep, 3.0)


def test_links_are_not_followed(tmp_path: Path) -> None:
    outside = package(tmp_path / "outside" / "secret.xlsx")
    inbox = tmp_path / "in"
    inbox.mkdir()
    try:
        (inbox / "file.xlsx").symlink_to(outside)
        (inbox / "folder").symlink_to(outside.parent, target_is_directory=True)
    except OSError:
        pytest.skip("links need a privilege here")
    found = dropped_files(inbox)
    assert {d.path.name for d in found} == {"file.xlsx", "folder"}
    assert all("link" in d.aside for d in found)


def test_subfolders_but_hidden_ones(tmp_path: Path) -> None:
    package(tmp_path / "a/b/c.xlsx")
    package(tmp_path / ".stfolder/d.xlsx")
    assert [d.path.name for d in dropped_files(tmp_path)] == ["c.xlsx"]


def test_a_subfolder_that_cannot_be_listed_stops_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    package(tmp_path / "bad/a.xlsx")
    package(tmp_path / "good/b.xlsx")
    scandir = os.scandir

    def failing(path: Path) -> object:
        if Path(path).name == "bad":
            raise OSError(22, "Invalid argument")
        return scandir(path)

    monkeypatch.setattr(module.os, "scandir", failing)
    assert [d.path.name for d in dropped_files(tmp_path)] == ["b.xlsx"]


def test_unreadable_is_tried_again_ever_later(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    package(tmp_path / "a.xlsx")
    sweep, tried = Sweep(tmp_path, settle=0.1), []

    def held(_: Path) -> str:
        tried.append(now)
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(module, "completeness", held)
    now = 0.0
    while now < 200:
        sweep.look(now)
        assert sweep.ready(now, 10) == []
        now += 0.05
    pauses = [round(b - a, 1) for a, b in pairwise(tried)]
    assert pauses[0] == pytest.approx(0.25, abs=0.06)
    assert pauses == sorted(pauses)
    assert max(pauses) == pytest.approx(30.0, abs=0.1)
    assert "cannot be read now: Permission denied" in sweep.waiting()[0].hindrance


def test_a_vanished_inbox_is_an_error(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        Sweep(tmp_path / "none", settle=0.1).look(0.0)
