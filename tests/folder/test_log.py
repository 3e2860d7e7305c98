from __future__ import annotations

from pathlib import Path

import pytest

from sheetqc.folder import log as module
from sheetqc.folder.log import Log


def test_says_and_writes_one_plain_line(tmp_path: Path) -> None:
    said: list[str] = []
    log = Log(tmp_path / "a.log", said.append)
    log.say("bad\nname \x1b[0m.xlsx: answered")
    log.close()
    assert said == ["bad\\nname \\x1b[0m.xlsx: answered"]
    (line,) = (tmp_path / "a.log").read_text().splitlines()
    assert line.endswith(said[0])


def test_rotates(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "_BYTES", 1000)
    log = Log(tmp_path / "a.log", lambda _: None)
    for number in range(500):
        log.say(f"line {number}")
    log.close()
    files = list(tmp_path.iterdir())
    assert len(files) == 6
    assert all(p.stat().st_size <= 1000 for p in files)


def test_a_log_that_cannot_be_written_stops_nothing(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    said: list[str] = []
    log = Log(tmp_path / "missing" / "a.log", said.append)
    log.say("still said")
    log.close()
    assert said == ["still said"]
    assert capsys.readouterr().err == ""


def test_the_same_is_said_rarely(tmp_path: Path) -> None:
    said: list[str] = []
    log = Log(tmp_path / "a.log", said.append)
    for _ in range(5):
        log.say_rarely("again")
        log.say_rarely("other")
    log.say_rarely("again", seconds=0.0)
    log.close()
    assert said == ["again", "other", "again"]
