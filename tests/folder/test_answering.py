from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from sheetqc.errors import EncryptedWorkbook
from sheetqc.finding import Cell
from sheetqc.folder.answering import Reply, ready, tried
from sheetqc.outcome import Outcome
from tests.folder.standin import answer, package


def _reply(tmp_path: Path, answerer: Callable[[Path, Path], Outcome], content: str = "") -> Reply:
    into = tmp_path / "into"
    into.mkdir()
    return tried(answerer, package(tmp_path / "a.xlsx", content), into, 0.0)


def _raising(error: BaseException) -> Callable[[Path, Path], Outcome]:
    def answerer(_: Path, __: Path) -> Outcome:
        raise error

    return answerer


def test_answered(tmp_path: Path) -> None:
    reply = _reply(tmp_path, answer)
    assert (reply.state, reply.text) == ("answered", "all shown")
    assert [p.name for p in reply.results] == ["a.answered.xlsx", "a.answered.json"]


def test_returned(tmp_path: Path) -> None:
    assert _reply(tmp_path, answer, "declined").state == "returned"


def test_refused_keeps_what_the_error_says(tmp_path: Path) -> None:
    error = EncryptedWorkbook("it has a password", advice="Send it without.", cell=Cell("S", 2, 3))
    reply = _reply(tmp_path, _raising(error))
    assert reply.state == "refused"
    assert reply.details == {
        "code": "encrypted",
        "met": "it has a password",
        "expected": "",
        "advice": "Send it without.",
        "cell": "'S'!C2",
    }


@pytest.mark.parametrize(
    ("error", "state"),
    [
        (OSError(28, "No space left on device"), "full"),
        (OSError(5, "Input/output error"), "trouble"),
        (PermissionError(13, "Permission denied"), "trouble"),
        (MemoryError(), "trouble"),
        (ValueError("odd"), "unexpected"),
        (RecursionError(), "unexpected"),
    ],
)
def test_kinds_of_failure(tmp_path: Path, error: Exception, state: str) -> None:
    reply = _reply(tmp_path, _raising(error))
    assert reply.state == state
    assert reply.text


@pytest.mark.parametrize("wrong", ["missing", "elsewhere", "no workbook", "other name"])
def test_outcomes_that_cannot_be(tmp_path: Path, wrong: str) -> None:
    def answerer(path: Path, into: Path) -> Outcome:
        good = answer(path, into)
        assert good.workbook is not None
        if wrong == "missing":
            good.report.unlink()
        if wrong == "elsewhere":
            return Outcome(source=path, state="answered", report=good.report, workbook=path)
        if wrong == "no workbook":
            return Outcome(source=path, state="answered", report=good.report)
        if wrong == "other name":
            moved = good.workbook.rename(into / "other.xlsx")
            return Outcome(source=path, state="answered", report=good.report, workbook=moved)
        return good

    assert _reply(tmp_path, answerer).state == "unexpected"


def test_ready_is_nothing() -> None:
    assert ready() is None
