"""One try at one workbook, on the side of the worker process; nothing raised there gets lost on the way back."""

from __future__ import annotations

import contextlib
import errno
import os
import signal
import threading
import traceback
from collections.abc import Callable
from dataclasses import dataclass, field
from multiprocessing import connection, parent_process
from pathlib import Path
from typing import Literal

from sheetqc.errors import WorkbookError
from sheetqc.outcome import Outcome

Answerer = Callable[[Path, Path], Outcome]
"""Answers a workbook (first) into a folder (second); must be a function that can be pickled."""

OVERTIME = "overtime"
"""Name of the file in a try's folder that tells that it was ended for its time."""

_FULL = {errno.ENOSPC, getattr(errno, "EDQUOT", errno.ENOSPC)}
_WIN_FULL = {39, 112}


@dataclass(frozen=True, slots=True, kw_only=True)
class Reply:
    """What came of a try.

    answered, returned: the answerer's own decision, with its results; refused: it raised a WorkbookError;
    unexpected: it raised anything else; trouble: the machine failed, not the file (try again); full: no room on disk.
    """

    state: Literal["answered", "returned", "refused", "unexpected", "trouble", "full"]
    text: str = ""
    results: tuple[Path, ...] = ()
    details: dict[str, str] = field(default_factory=dict)
    traceback: str = ""


def tried(answer: Answerer, source: Path, into: Path, seconds: float) -> Reply:
    """The reply to one try, whatever happens in it; the process ends itself when `seconds` (0: never) have passed."""
    alarm = threading.Timer(seconds, _end_for_time, (into,))
    alarm.daemon = True
    if seconds > 0:
        alarm.start()
    try:
        return _replied(answer(source, into), source, into)
    except WorkbookError as error:
        return _refusal(error)
    except OSError as error:
        full = error.errno in _FULL or getattr(error, "winerror", None) in _WIN_FULL
        return Reply(state="full" if full else "trouble", text=_said(error), traceback=traceback.format_exc())
    except MemoryError as error:
        return Reply(state="trouble", text="not enough memory", traceback=_said(error))
    except Exception as error:
        return Reply(state="unexpected", text=_said(error), traceback=traceback.format_exc())
    finally:
        alarm.cancel()


def _replied(outcome: Outcome, source: Path, into: Path) -> Reply:
    results = tuple(p for p in (outcome.workbook, outcome.report) if p is not None)
    for path in results:
        if path.parent != into or not path.is_file():
            return Reply(state="unexpected", text=f"the answer names {path.name}, which is not where it should be")
    if outcome.state == "answered" and outcome.workbook is None:
        return Reply(state="unexpected", text="the answer has no workbook")
    if any(not p.name.startswith(source.stem) for p in results):
        return Reply(state="unexpected", text="the answer is not named after the workbook")
    return Reply(state=outcome.state, text=outcome.text, results=results)


def _refusal(error: WorkbookError) -> Reply:
    details = {
        "code": error.code,
        "met": error.met,
        "expected": error.expected,
        "advice": error.advice,
        "cell": str(error.cell) if error.cell else "",
    }
    return Reply(state="refused", text=str(error), details=details)


def _said(error: BaseException) -> str:
    return f"{type(error).__name__}: {error}" if str(error) else type(error).__name__


def _end_for_time(into: Path) -> None:
    with contextlib.suppress(OSError):
        (into / OVERTIME).touch()
    os._exit(1)


def prepare(warm: Callable[[], object] | None) -> None:
    """Make a fresh worker process ready: keyboard signals are the service's business, imports are done now,
    and it must not outlive the service."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent.sentinel,), daemon=True).start()
    if warm is not None:
        warm()


def _end_with(sentinel: int) -> None:
    connection.wait([sentinel])
    os._exit(1)


def ready(*_: object) -> None:
    """Nothing; given to a worker so that it starts, and imports what it is handed, before it is needed."""
