from __future__ import annotations

import threading
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from sheetqc.folder import events as module
from sheetqc.folder.completeness import completeness
from sheetqc.folder.events import Events
from tests.folder.standin import package


@pytest.fixture
def changed() -> threading.Event:
    return threading.Event()


@pytest.fixture
def events(tmp_path: Path, changed: threading.Event) -> Iterator[Events]:
    watching = Events(tmp_path, changed.set)
    watching.supervise()
    yield watching
    watching.close()


def test_tells_of_new_files_also_in_new_subfolders(tmp_path: Path, events: Events, changed: threading.Event) -> None:
    package(tmp_path / "a.xlsx")
    assert changed.wait(10)
    (tmp_path / "sub").mkdir()
    time.sleep(0.5)
    changed.clear()
    package(tmp_path / "sub/b.xlsx")
    assert changed.wait(10)


def test_reading_is_no_change(tmp_path: Path, events: Events, changed: threading.Event) -> None:
    path = package(tmp_path / "a.xlsx")
    assert changed.wait(10)
    time.sleep(0.5)
    changed.clear()
    assert completeness(path) == "whole"  # else the service would wake itself for ever
    assert list(tmp_path.iterdir()) == [path]
    assert not changed.wait(0.5)


def test_an_observer_that_died_is_replaced(tmp_path: Path, events: Events, changed: threading.Event) -> None:
    first = events._observer
    events.supervise()
    assert events._observer is first
    first.stop()
    first.join(10)
    events.supervise()
    assert events._observer is not first
    time.sleep(0.3)
    changed.clear()
    package(tmp_path / "a.xlsx")
    assert changed.wait(10)


def test_does_without_where_events_do_not_work(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def none(*_: object) -> None:
        raise OSError(28, "inotify watch limit reached")

    monkeypatch.setattr(module, "_observer", none)
    watching = Events(tmp_path, lambda: None)
    watching.supervise()
    watching.close()
