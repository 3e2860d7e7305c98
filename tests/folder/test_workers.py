from __future__ import annotations

import os
import signal
import threading
import time
from concurrent.futures import BrokenExecutor, ThreadPoolExecutor

import pytest

from sheetqc.folder.workers import Workers, process_pool

WARM: list[int] = []


def warm() -> None:
    WARM.append(os.getpid())


def is_warm() -> bool:
    return [os.getpid()] == WARM


def die() -> None:
    os._exit(1)


def ignores_keyboard() -> bool:
    return signal.getsignal(signal.SIGINT) is signal.SIG_IGN


def fail() -> None:
    raise ValueError("odd")


def _finished(workers: Workers, woken: threading.Event) -> list[tuple[str, object]]:
    assert woken.wait(30)
    woken.clear()
    return [(key, f.exception() or f.result()) for key, f in workers.finished()]


def test_processes_are_warm_and_leave_the_keyboard_alone() -> None:
    woken = threading.Event()
    workers = Workers(process_pool(1, warm), 1, woken.set)
    workers.start()
    workers.submit("warm", is_warm)
    assert _finished(workers, woken) == [("warm", True)]
    workers.submit("keyboard", ignores_keyboard)
    assert _finished(workers, woken) == [("keyboard", True)]
    workers.close()


def test_a_broken_pool_is_replaced() -> None:
    woken = threading.Event()
    workers = Workers(process_pool(1, None), 1, woken.set)
    workers.submit("dead", die)
    ((key, error),) = _finished(workers, woken)
    assert key == "dead"
    assert isinstance(error, BrokenExecutor)
    workers.submit("after", os.getpid)
    ((key, pid),) = _finished(workers, woken)
    assert key == "after"
    assert pid != os.getpid()
    workers.close()


def test_work_given_to_a_pool_that_broke_unnoticed() -> None:
    woken = threading.Event()
    workers = Workers(process_pool(1, None), 1, woken.set)
    workers.submit("dead", die)
    assert woken.wait(30)
    woken.clear()
    workers.submit("after", os.getpid)  # before the first end was looked at
    found: dict[str, object] = {}
    while len(found) < 2:
        found |= {key: f.exception() or f.result() for key, f in workers.finished()}
        time.sleep(0.01)
    assert isinstance(found["dead"], BrokenExecutor)
    assert isinstance(found["after"], int)
    workers.close()


def test_any_executor_will_do() -> None:
    woken = threading.Event()
    workers = Workers(lambda: ThreadPoolExecutor(1), 1, woken.set)
    workers.submit("a", fail)
    ((key, error),) = _finished(workers, woken)
    assert key == "a"
    assert isinstance(error, ValueError)
    workers.close()


def test_work_not_begun_is_cancelled() -> None:
    woken, hold = threading.Event(), threading.Event()
    workers = Workers(lambda: ThreadPoolExecutor(1), 1, woken.set)
    workers.submit("first", hold.wait, 30)
    workers.submit("second", os.getpid)
    workers.cancel()
    hold.set()
    states: dict[str, bool] = {}
    while len(states) < 2:
        states |= {key: f.cancelled() for key, f in workers.finished()}
        time.sleep(0.01)
    assert states == {"first": False, "second": True}
    workers.close()


@pytest.mark.parametrize("twice", [False, True])
def test_close_without_work(twice: bool) -> None:
    workers = Workers(process_pool(1, None), 1, lambda: None)
    workers.close()
    if twice:
        workers.close()
    assert list(workers.finished()) == []
