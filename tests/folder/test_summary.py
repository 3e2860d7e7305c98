from __future__ import annotations

from collections.abc import Iterator
from concurrent.futures import Future
from pathlib import Path

import pytest

from sheetqc.folder import summary as module
from sheetqc.folder.layout import Layout
from sheetqc.folder.log import Log
from sheetqc.folder.summary import Summary


class Pool:
    """Workers whose work ends when the test says so."""

    def __init__(self) -> None:
        self.given: list[tuple[str, Path]] = []

    def submit(self, key: str, _: object, root: Path) -> None:
        self.given.append((key, root))


@pytest.fixture
def clock(monkeypatch: pytest.MonkeyPatch) -> list[float]:
    now = [1000.0]
    monkeypatch.setattr(module.time, "monotonic", lambda: now[0])
    return now


@pytest.fixture
def pool() -> Pool:
    return Pool()


@pytest.fixture
def summary(layout: Layout, pool: Pool, said: list[str], tmp_path: Path) -> Iterator[Summary]:
    log = Log(tmp_path / "a.log", said.append)
    yield Summary(layout, print, pool, log)  # type: ignore[arg-type]
    log.close()


def _ended(error: Exception | None = None) -> Future[object]:
    future: Future[object] = Future()
    future.set_exception(error) if error else future.set_result(None)
    return future


def test_not_without_results(summary: Summary, pool: Pool) -> None:
    assert not summary.is_due()
    summary.start(quiet=True)
    assert pool.given == []


def test_once_for_what_is_there(summary: Summary, pool: Pool, layout: Layout) -> None:
    layout.due.write_text("1")
    summary.start(quiet=True)
    summary.start(quiet=True)
    assert pool.given == [(module.KEY, layout.root)]
    summary.finished(_ended())
    assert not summary.is_due()
    assert not layout.due.exists()


def test_results_while_it_was_made_make_it_due_again(summary: Summary, pool: Pool, layout: Layout) -> None:
    layout.due.write_text("1")
    summary.start(quiet=True)
    layout.due.write_text("2")
    summary.finished(_ended())
    assert summary.is_due()


def test_seldom_while_files_keep_coming(summary: Summary, pool: Pool, layout: Layout, clock: list[float]) -> None:
    layout.due.write_text("1")
    summary.start(quiet=False)
    clock[0] += 10.0  # it took ten seconds, so that ninety are left to other work
    layout.due.write_text("2")
    summary.finished(_ended())
    clock[0] += 89.0
    summary.start(quiet=False)
    assert len(pool.given) == 1
    clock[0] += 1.0
    summary.start(quiet=False)
    assert len(pool.given) == 2


def test_failure_is_tried_again_ever_later(
    summary: Summary, pool: Pool, layout: Layout, clock: list[float], said: list[str]
) -> None:
    layout.due.write_text("1")
    pauses = []
    for number in range(1, 9):
        summary.start(quiet=True)
        assert len(pool.given) == number
        summary.finished(_ended(PermissionError(13, "it is open")))
        pauses.append(0.0)
        while len(pool.given) == number and pauses[-1] < 100:
            clock[0] += 1.0
            pauses[-1] += 1.0
            summary.start(quiet=True)
        pool.given.pop()
        summary._running = False
    assert pauses == [1.0, 2.0, 4.0, 8.0, 16.0, 32.0, 60.0, 60.0]
    assert "it is open" in said[0]


def test_cancelled_is_no_failure(summary: Summary, layout: Layout) -> None:
    layout.due.write_text("1")
    summary.start(quiet=True)
    future: Future[object] = Future()
    future.cancel()
    summary.finished(future)
    assert summary.is_due()
    assert summary.failures == 0
