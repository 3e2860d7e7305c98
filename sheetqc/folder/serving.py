"""The service: one loop that looks, claims, has answered, and puts results into their places."""

from __future__ import annotations

import contextlib
import signal
import threading
import time
import traceback
from collections.abc import Callable, Iterator
from concurrent.futures import Executor
from dataclasses import dataclass
from pathlib import Path
from types import FrameType

from sheetqc.folder import claims
from sheetqc.folder.answering import Answerer
from sheetqc.folder.case import Limits
from sheetqc.folder.desk import Desk
from sheetqc.folder.events import Events
from sheetqc.folder.journal import Journal
from sheetqc.folder.layout import Layout
from sheetqc.folder.log import Log
from sheetqc.folder.names import is_conflict_copy
from sheetqc.folder.owners import Neighbours, Owner, this_host
from sheetqc.folder.publish import forget_all
from sheetqc.folder.summary import KEY, Summary
from sheetqc.folder.sweep import PATIENCE, Sweep
from sheetqc.folder.workers import Workers, process_pool

SETTLE = 0.25
"""Seconds a package must lie unchanged before it is taken."""

_SWEEP, _POLL = 2.0, 0.5
"""Seconds between two looks, with and without notice of changes."""

_RETAKE = 5.0
"""Seconds between two looks for claims of dead services."""

_ONCE_PATIENCE = 2.0
"""Seconds an unfinished file must lie still when the service is to end."""

_MOST_FAILURES, _MOST_FAILURES_ONCE = 100_000, 10
"""Turns of the loop that may fail in a row: days, for a share that is gone; less when the service is to end."""

_MOST_SUMMARIES = 3
"""Tries at a summary when the service is to end."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ServeResult:
    """What a service has done: files answered and returned, and those it left, each with why."""

    answered: int
    returned: int
    left: tuple[str, ...] = ()


def say_line(text: str) -> None:
    """Print a line at once."""
    print(text, flush=True)


def serve(
    folder: Path,
    answer: Answerer,
    *,
    once: bool = False,
    workers: int = 1,
    settle: float = SETTLE,
    stop: threading.Event | None = None,
    say: Callable[[str], None] = say_line,
    after: Callable[[Path], None] | None = None,
    polling: bool = False,
    edition: str = "",
    seconds: float = 1800.0,
    warm: Callable[[], object] | None = None,
    executor: Callable[[], Executor] | None = None,
) -> ServeResult:
    """Serve a folder until stopped, or answer what is there.

    Parameters
    ----------
    folder : the folder; missing places in it are made
    answer : answers a workbook into a folder; a function that can be pickled
    once : end when nothing is left that can be answered now
    workers : processes that answer
    settle : seconds a file must lie unchanged before it is taken
    stop : ends the service when set, after the files that are being answered; so do SIGINT and SIGTERM
    say : is given each line for people
    after : renews a summary of the folder after results were put into place; a function that can be pickled
    polling : do without notice of changes from the operating system
    edition : version of the answerer; an answer is repeated for the same content only within one edition
    seconds : time one workbook may take
    warm : is called once in each worker before there is work
    executor : makes the executor to be used in place of processes on this machine; without limit of time then

    Returns
    -------
    ServeResult : what was done

    Raises
    ------
    OSError : when the folder cannot be set up
    """
    layout = Layout(folder.resolve())
    layout.create()
    log = Log(layout.logs / f"{this_host()}.log", say)
    wake = _Wake(stop)
    make = executor or process_pool(workers, warm)
    limits = Limits(seconds=0.0 if executor else seconds, bounded=once, edition=edition)
    with (
        contextlib.closing(log),
        Owner(layout) as owner,
        contextlib.closing(Journal(layout)) as journal,
        contextlib.closing(Workers(make, workers, wake.set)) as pool,
        _signals(wake.end),
    ):
        desk = Desk(layout, answer, pool, journal, log, limits)
        patience = _ONCE_PATIENCE if once else PATIENCE
        sweep = Sweep(layout.inbox, settle, patience, excluded=desk.tally.given_up)
        summary = Summary(layout, after, pool, log)
        if not once:
            pool.start(answer)
        service = _Service(layout, owner, desk, sweep, summary, pool, wake, log, workers, once=once)
        service.run(polling=polling or once)
    return ServeResult(answered=desk.tally.answered, returned=desk.tally.returned, left=tuple(desk.tally.left))


class _Wake:
    """Wakes the loop; tells whether a file system event did, and whether the service is to end."""

    def __init__(self, stop: threading.Event | None) -> None:
        self._stop = stop
        self._ended = False
        self._event = threading.Event()
        self._changed = False

    @property
    def ended(self) -> bool:
        return self._ended or (self._stop is not None and self._stop.is_set())

    def set(self) -> None:
        self._event.set()

    def changed(self) -> None:
        self._changed = True
        self._event.set()

    def end(self) -> None:
        self._ended = True
        self._event.set()

    def wait(self, seconds: float) -> None:
        self._event.wait(seconds if self._stop is None else min(seconds, 0.25))
        self._event.clear()

    def take_changed(self) -> bool:
        changed, self._changed = self._changed, False
        return changed


class _Service:
    def __init__(
        self,
        layout: Layout,
        owner: Owner,
        desk: Desk,
        sweep: Sweep,
        summary: Summary,
        pool: Workers,
        wake: _Wake,
        log: Log,
        workers: int,
        *,
        once: bool,
    ) -> None:
        self._layout = layout
        self._owner = owner
        self._neighbours = Neighbours(owner)
        self._desk = desk
        self._sweep = sweep
        self._summary = summary
        self._pool = pool
        self._wake = wake
        self._log = log
        self._most = workers + 1  # one is ready when a worker becomes free
        self._once = once
        self._next_look = 0.0
        self._next_retake = 0.0
        self._every = _SWEEP
        self._failures = 0

    def run(self, *, polling: bool) -> None:
        """Loop until ended."""
        events = None if polling else Events(self._layout.inbox, self._wake.changed)
        self._every = _POLL if polling else _SWEEP
        self._begin()
        try:
            while not self._wake.ended:
                if events is not None and self._failures:
                    events.close()  # what it watches may be gone; it starts anew when the folder is back
                elif events is not None:
                    events.supervise()
                self._turn()
                if self._once and self._is_through():
                    break
                self._wake.wait(self._pause())
        finally:
            if events is not None:
                events.close()
            self._end()

    def _begin(self) -> None:
        self._neighbours.forget()
        others = [p for p in self._layout.owners.glob("*.lock") if p.stem != self._owner.name]
        if not others:
            forget_all(self._layout)
        if not self._once:
            self._log.say(f"serving {self._layout.root}; drop workbooks into {self._layout.inbox}")

    def _turn(self) -> None:
        try:
            self._steps()
            self._failures = 0
        except Exception as error:
            self._failures += 1
            if self._failures >= (_MOST_FAILURES_ONCE if self._once else _MOST_FAILURES):
                raise
            if isinstance(error, OSError):
                self._log.say_rarely(f"the folder cannot be used now: {error}; tried again every few seconds")
            else:
                self._log.say_rarely(f"an error in the service itself: {error!r}; it goes on")
                self._log.note(traceback.format_exc())
            self._next_look = time.monotonic() + _SWEEP

    def _steps(self) -> None:
        for key, future in self._pool.finished():
            if key == KEY:
                self._summary.finished(future)
            else:
                self._desk.finished(key, future)
        if not self._layout.reachable():
            raise FileNotFoundError(f"{self._layout.inbox} is not there")
        self._retake()
        self._look()
        self._claim()
        self._desk.carry_on()
        self._desk.feed(self._most)
        self._summary.start(quiet=self._desk.held == 0 and not self._sweep.ready(time.monotonic(), 1))

    def _retake(self) -> None:
        now = time.monotonic()
        if now < self._next_retake:
            return
        self._next_retake = now + _RETAKE
        for folder in sorted(self._layout.working.iterdir()):
            owner = claims.owner_of(folder)
            if not owner or not self._neighbours.is_dead(owner):
                continue
            try:
                claim = claims.take_back(self._layout, self._owner.name, folder)
            except OSError as error:  # a worker of the dead service may still hold a file for a moment
                self._log.say_rarely(f"{folder.name}: cannot be taken over now: {error}")
                continue
            if claim is not None:
                self._log.say(f"{claim.shown}: taken over from a service that has ended")
                self._desk.accept(claim)

    def _look(self) -> None:
        now = time.monotonic()
        if self._wake.take_changed() or now >= self._next_look:
            self._sweep.look(now)
            self._next_look = now + self._every

    def _claim(self) -> None:
        now = time.monotonic()
        room = 2 * self._most - self._desk.waiting
        for path in self._sweep.ready(now, room) if room > 0 else ():
            try:
                claim = claims.take(self._layout, self._owner.name, path)
            except OSError as error:
                if self._sweep.hindered(path, f"cannot be taken now: {error.strerror or error}", now):
                    self._log.say(f"{path.name}: cannot be taken now ({error.strerror or error}); tried again later")
                continue
            self._sweep.gone(path)
            if claim is not None:
                if is_conflict_copy(claim.name):
                    self._log.say(f"{claim.shown}: looks like a second version kept by a synchronising program")
                self._desk.accept(claim)

    def _pause(self) -> float:
        now = time.monotonic()
        times = [self._next_look, self._next_retake, self._desk.next_time(), self._summary.next_time()]
        waits = [t - now for t in times if t is not None]
        settling = self._sweep.next_look(now)
        if settling is not None and self._desk.waiting < 2 * self._most:
            self._next_look = min(self._next_look, now + settling)
            waits.append(settling)
        return max(0.01, min(waits))

    def _is_through(self) -> bool:
        """Whether nothing is left that can be done now."""
        if self._desk.held or self._summary.running:
            return False
        self._sweep.look(time.monotonic())
        if any(not watched.hindrance or watched.pause < 1.0 for watched in self._sweep.waiting()):
            return False
        return not self._summary.is_due() or self._summary.failures >= _MOST_SUMMARIES

    def _end(self) -> None:
        """Give back what was not begun, wait for what was, and put its results into place."""
        self._note_left()
        self._pool.cancel()
        self._desk.give_back()
        while self._desk.running:
            for key, future in self._pool.finished():
                if key != KEY:
                    self._desk.finished(key, future)
            self._desk.give_back()
            self._wake.wait(0.25)
        self._desk.carry_on()
        for folder in self._layout.working.glob(f"{self._owner.name}.*"):
            claim = claims.seen(folder)
            name = claim.shown if claim else folder.name
            self._leave(f"{name}: stays in working/ until the next start")

    def _leave(self, text: str) -> None:
        self._desk.tally.left.append(text)
        self._log.say(f"left: {text}")

    def _note_left(self) -> None:
        for line in self._desk.tally.left:
            self._log.say(f"left: {line}")
        if not self._once:
            return
        inbox = self._layout.inbox
        for watched in self._sweep.waiting():
            name = watched.dropped.path.relative_to(inbox).as_posix()
            self._leave(f"{name}: {watched.hindrance or 'not complete'}")
        for dropped in self._sweep.aside():
            if "temporary" not in dropped.aside:
                self._leave(f"{dropped.path.relative_to(inbox).as_posix()} {dropped.aside}")


@contextlib.contextmanager
def _signals(end: Callable[[], None]) -> Iterator[None]:
    """Ends the service on the first signal; a second one has its usual effect."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    names = [name for name in ("SIGINT", "SIGTERM", "SIGBREAK") if hasattr(signal, name)]
    before = {getattr(signal, name): signal.getsignal(getattr(signal, name)) for name in names}

    def restore() -> None:
        for number, handler in before.items():
            signal.signal(number, handler)

    def ended(_number: int, _frame: FrameType | None) -> None:
        restore()
        end()

    for number in before:
        signal.signal(number, ended)
    try:
        yield
    finally:
        restore()
