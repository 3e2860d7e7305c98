"""A service as a process of its own: how it ends, and what it costs while nothing happens."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from sheetqc.folder.layout import Layout
from tests.folder.standin import package

ROOT = Path(__file__).parents[2]


@pytest.fixture
def service(layout: Layout) -> Iterator[subprocess.Popen[str]]:
    pids = layout.root / "pids"
    pids.mkdir()
    process = subprocess.Popen(
        [sys.executable, "-m", "tests.folder.run_service", str(layout.root)],
        cwd=ROOT,
        env={**os.environ, "STANDIN_PIDS": str(pids)},
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
    )
    yield process
    process.kill()
    process.communicate()


def _await(condition: Callable[[], bool], seconds: float = 30.0) -> None:
    end = time.monotonic() + seconds
    while not condition():
        assert time.monotonic() < end, "nothing happened"
        time.sleep(0.02)


@pytest.mark.skipif(os.name == "nt", reason="signals cannot be sent to one process there")
@pytest.mark.parametrize("number", [signal.SIGINT, signal.SIGTERM])
def test_ends_cleanly_on_a_signal(layout: Layout, service: subprocess.Popen[str], number: signal.Signals) -> None:
    for n in range(5):
        package(layout.inbox / f"{n}.xlsx", f"slow {n}")
    _await(lambda: any(layout.working.glob("*/answer-*")))
    service.send_signal(number)
    output, _ = service.communicate(timeout=30)
    assert service.returncode == 0
    assert "Traceback" not in output
    assert "ended: " in output
    assert not any(layout.working.iterdir())
    assert not any(layout.owners.iterdir())
    left = sum(1 for p in layout.inbox.iterdir())
    assert left + sum(1 for _ in layout.originals.iterdir()) == 5


def test_workers_end_with_a_killed_service(layout: Layout, service: subprocess.Popen[str]) -> None:
    package(layout.inbox / "a.xlsx", "endless")
    pids = layout.root / "pids"
    _await(lambda: any(pids.iterdir()))
    service.kill()
    service.wait()
    # the output pipe is shared with the workers: it ends when the last of them has
    start = time.monotonic()
    service.communicate(timeout=30)
    assert time.monotonic() - start < 5


def _processor_seconds(pid: int) -> float:
    """Processor time of a process so far (Linux)."""
    fields = Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()
    return (int(fields[11]) + int(fields[12])) / os.sysconf("SC_CLK_TCK")


@pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="processor time is read from /proc")
def test_costs_next_to_nothing_while_idle(layout: Layout, service: subprocess.Popen[str]) -> None:
    package(layout.inbox / "a.xlsx")
    _await((layout.answered / "a.answered.json").exists)
    time.sleep(1.0)
    before = _processor_seconds(service.pid)
    time.sleep(5.0)
    # the clock ticks in hundredths: 0.2 % of 5 s is one tick, and a tick may fall either way
    assert _processor_seconds(service.pid) - before <= 0.02
