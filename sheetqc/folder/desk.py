"""What happens to the files a service has claimed, from the claim to its results in their places."""

from __future__ import annotations

import contextlib
import time
from collections import deque
from collections.abc import Callable
from concurrent.futures import BrokenExecutor, CancelledError, Future
from pathlib import Path
from typing import Any

from sheetqc.folder import claims, publish
from sheetqc.folder.answering import OVERTIME, Answerer, Reply, ready, tried
from sheetqc.folder.case import MOST_CRASHES, MOST_TRIES, MOST_TROUBLES, Case, Limits, Tally
from sheetqc.folder.claims import Claim
from sheetqc.folder.journal import Entry, Journal
from sheetqc.folder.layout import Layout
from sheetqc.folder.log import Log
from sheetqc.folder.moves import is_there, sha256, write_whole
from sheetqc.folder.publish import Decision, Done
from sheetqc.folder.reports import repeated_answer, returned_report
from sheetqc.folder.workers import Workers

PROBE = "probe"
"""Under which the workers report that a fresh one could be started."""


class Desk:
    """Takes claims in, has them answered by the workers, and carries the decisions out."""

    def __init__(
        self, layout: Layout, answer: Answerer, workers: Workers, journal: Journal, log: Log, limits: Limits
    ) -> None:
        self._layout = layout
        self._answer = answer
        self._workers = workers
        self._journal = journal
        self._log = log
        self._limits = limits
        self._queue: deque[Case] = deque()
        self._suspects: deque[Case] = deque()
        self._probed_for: Case | None = None
        self._running: dict[str, Case] = {}
        self._closing: list[Case] = []
        self._twins: dict[str, list[Case]] = {}
        self.tally = Tally()

    @property
    def held(self) -> int:
        """Claims held."""
        return self.waiting + len(self._running) + len(self._closing) + (self._probed_for is not None)

    @property
    def running(self) -> int:
        """Claims with a worker."""
        return len(self._running)

    @property
    def waiting(self) -> int:
        """Claims not yet with a worker."""
        return len(self._queue) + len(self._suspects) + sum(map(len, self._twins.values()))

    def next_time(self) -> float | None:
        """When (monotonic) something that was put off is due."""
        now = time.monotonic()
        put_off = [c.not_before for c in (*self._queue, *self._suspects, *self._closing) if c.not_before > now]
        return min(put_off, default=None)

    def accept(self, claim: Claim) -> None:
        """Take a claim in: carry out what is decided already, repeat what was answered before, queue the rest."""
        case = Case(claim=claim)
        case.done = publish.decision_of(self._layout, claim)
        if case.done is not None:
            self._close(case)
        elif not is_there(claim.file):
            claims.drop(claim)  # all was in place; only the decision could not be read any more
            publish.forget(self._layout, claim.ticket)
        else:
            self._identify(case)

    def feed(self, most: int) -> None:
        """Give queued cases to the workers, at most `most` at a time; suspects one by one."""
        if self._probed_for is not None or any(case.alone for case in self._running.values()):
            return
        if self._suspects:
            if not self._running and self._suspects[0].not_before <= time.monotonic():
                self._probed_for = self._suspects.popleft()
                self._workers.submit(PROBE, ready, self._answer)
            return
        while len(self._running) < most and (case := self._next()) is not None:
            self._start(case)

    def finished(self, key: str, future: Future[Any]) -> None:
        """Take in what a worker has finished."""
        if key == PROBE:
            self._probed(future)
            return
        case = self._running.pop(key)
        alone, case.alone = case.alone, False
        try:
            self._take_in(case, future, alone)
        except Exception:
            if not any(case in places for places in (self._queue, self._suspects, self._closing)):
                self._queue.append(case)  # whatever went wrong, it must not be forgotten
            raise

    def _take_in(self, case: Case, future: Future[Any], alone: bool) -> None:
        try:
            reply = future.result()
        except CancelledError:
            self._queue.appendleft(case)
        except BrokenExecutor:
            self._crashed(case, alone)
        except Exception as error:
            self._trouble(case, Reply(state="trouble", text=f"the workers failed: {error}"))
        else:
            self._settle(case, reply)

    def _probed(self, future: Future[Any]) -> None:
        """Start a suspect by itself, but only with a worker that is known to live: else it is not the file's fault."""
        case, self._probed_for = self._probed_for, None
        if case is None:
            return
        if future.cancelled():
            self._suspects.append(case)
        elif error := future.exception():
            self._put_off(case, f"no worker can be started ({error})", self._suspects.append)
        else:
            case.alone = True
            self._start(case)

    def carry_on(self) -> None:
        """Carry out the decisions that were put off and are due."""
        now = time.monotonic()
        for case in [c for c in self._closing if c.not_before <= now]:
            self._closing.remove(case)
            self._close(case)

    def give_back(self) -> None:
        """Give every file no worker has begun back to in/."""
        twins = [case for waiting in self._twins.values() for case in waiting]
        probed, self._probed_for = self._probed_for, None
        for case in (*self._queue, *self._suspects, *twins, *([probed] if probed else [])):
            self._released(case)
        self._queue.clear()
        self._suspects.clear()
        self._twins.clear()

    def _released(self, case: Case) -> None:
        try:
            claims.release(self._layout, case.claim)
        except OSError as error:
            self._log.say(f"{case.claim.shown}: stays in working/ until the next start ({error})")

    def _identify(self, case: Case) -> None:
        try:
            case.state = _state(case.claim.file)
            case.sha256 = sha256(case.claim.file)
            self._route(case)
        except OSError as error:
            self._trouble(case, Reply(state="trouble", text=f"cannot be read: {error}"))

    def _route(self, case: Case) -> None:
        if case.sha256 in self._twins:
            self._twins[case.sha256].append(case)
            return
        entry = self._journal.answer_of(case.sha256, self._limits.edition)
        if entry is None or not self._repeat(case, entry):
            self._twins[case.sha256] = []
            self._queue.append(case)

    def _repeat(self, case: Case, entry: Entry) -> bool:
        into = case.claim.next_try()
        try:
            results = repeated_answer(case.claim, into, self._layout.root, entry)
        except OSError:
            return False  # the earlier answer is out of reach; answering anew does as well
        text = f"same content as before, answered from the journal ({entry.report})"
        self._decide(case, answered=True, results=results, text=text)
        return True

    def _next(self) -> Case | None:
        now = time.monotonic()
        for case in self._queue:
            if case.not_before <= now:
                self._queue.remove(case)
                return case
        return None

    def _start(self, case: Case) -> None:
        claim = case.claim
        try:
            if not case.sha256:
                self._identify(case)
                return
            if claim.tries >= MOST_TRIES:
                self._give_up(case, "too-many-tries", f"was not answered in {MOST_TRIES} tries")
                return
            case.into = claim.next_try()
        except OSError as error:
            self._lost_or_later(case, error, self._queue.append)
            return
        self._running[claim.ticket] = case
        self._workers.submit(claim.ticket, tried, self._answer, claim.file, case.into, self._limits.seconds)

    def _crashed(self, case: Case, alone: bool) -> None:
        claim = case.claim
        if case.into is not None and (case.into / OVERTIME).exists():
            self._give_up(case, "overtime", f"could not be answered within {self._limits.seconds:g} seconds")
            return
        self._log.say(f"{claim.shown}: the process answering it ended; it is tried again by itself")
        if alone:
            with contextlib.suppress(OSError):
                case.claim = claim = claims.noted(claim, crashes=1)
        if claim.crashes >= MOST_CRASHES:
            self._give_up(case, "crash", f"ended the process that answers it {claim.crashes} times")
        else:
            self._suspects.append(case)

    def _settle(self, case: Case, reply: Reply) -> None:
        if reply.state in ("trouble", "full"):
            self._trouble(case, reply)
            return
        try:
            if _state(case.claim.file) != case.state:
                self._log.say(f"{case.claim.shown}: was still being written; back to in/")
                self._gone(case)
                self._released(case)
            elif reply.state in ("answered", "returned"):
                answered = reply.state == "answered"
                self._decide(case, answered=answered, results=reply.results, text=reply.text)
            elif reply.state == "refused":
                self._refuse(case, reply.details.get("code", "workbook"), reply.text, reply.details)
            else:
                self._unexpected(case, reply)
        except OSError as error:
            self._trouble(case, Reply(state="full", text=str(error)))

    def _trouble(self, case: Case, reply: Reply) -> None:
        """Something outside the file failed: again later, but not for ever where it may be the file after all."""
        if not case.claim.folder.exists():
            self._lost_or_later(case, FileNotFoundError(), self._queue.append)
            return
        if reply.state == "trouble":
            with contextlib.suppress(OSError):
                case.claim = claims.noted(case.claim, troubles=1)
            if case.claim.troubles >= MOST_TROUBLES:
                self._unexpected(case, reply)
                return
        self._put_off(case, reply.text, self._queue.append)

    def _put_off(self, case: Case, why: str, put: Callable[[Case], object]) -> None:
        """Keep for later; give back to in/ where this service is to come to an end."""
        self._log.say_rarely(f"{case.claim.shown}: {why}; tried again later")
        case.later()
        if not self._limits.bounded or case.failures < MOST_TROUBLES:
            put(case)
            return
        self.tally.left.append(f"{case.claim.shown}: {why}")
        self.tally.given_up.add(self._layout.inbox / case.claim.place / case.claim.name)
        self._gone(case)
        self._released(case)

    def _unexpected(self, case: Case, reply: Reply) -> None:
        log = self._layout.errors / f"{case.claim.ticket}.txt"
        details = f"{case.claim.shown}\n\n{reply.traceback or reply.text}\n"
        with contextlib.suppress(OSError):
            write_whole(log, details.encode("utf-8", "backslashreplace"))
        place = log.relative_to(self._layout.root).as_posix()
        self._refuse(case, "unexpected", f"unexpected error: {reply.text}", {"log": place})

    def _give_up(self, case: Case, code: str, why: str) -> None:
        self._refuse(case, code, f"The workbook {why}. Please check it, save it anew and send it again.", {})

    def _refuse(self, case: Case, code: str, reason: str, details: dict[str, str]) -> None:
        more = {name: text for name, text in details.items() if name in ("expected", "advice", "cell", "log")}
        try:
            report = returned_report(case.claim, case.claim.next_try(), case.sha256, code, reason, **more)
        except OSError as error:
            self._lost_or_later(case, error, self._queue.append)
            return
        self._decide(case, answered=False, results=(report,), text=reason)

    def _decide(self, case: Case, *, answered: bool, results: tuple[Path, ...], text: str) -> None:
        case.decision = Decision(
            answered=answered, results=results, sha256=case.sha256, edition=self._limits.edition, text=text
        )
        self._close(case)

    def _close(self, case: Case) -> None:
        """Write the decision down, carry it out, note it; what fails is put off and done again."""
        try:
            if case.done is None:
                assert case.decision is not None
                self._layout.create_own()
                case.done = publish.decided(self._layout, case.claim, case.decision)
            _touch(self._layout.due)
            publish.carry_out(self._layout, case.claim, case.done)
            self._record(case.claim, case.done)
            publish.closed(self._layout, case.claim, case.done)
        except OSError as error:
            self._lost_or_later(case, error, self._closing.append)
            return
        self._count(case.claim, case.done)
        self._gone(case)

    def _record(self, claim: Claim, done: Done) -> None:
        books = done.targets(".answered.xlsx", ".answered.xlsm")
        if done.answered and books:
            self._journal.record(
                Entry(
                    ticket=claim.ticket,
                    sha256=done.sha256,
                    edition=done.edition,
                    report=next(iter(done.targets(".answered.json")), ""),
                    workbook=books[0],
                    finished=time.time(),
                )
            )

    def _count(self, claim: Claim, done: Done) -> None:
        if done.answered:
            self.tally.answered += 1
        else:
            self.tally.returned += 1
        renamed = "" if done.stem == Path(claim.name).stem else f", as {done.stem}"
        self._log.say(f"{claim.shown}: {'answered' if done.answered else 'returned'}{renamed}. {done.text}".rstrip())

    def _gone(self, case: Case) -> None:
        """Let the files of the same content go on."""
        for twin in self._twins.pop(case.sha256, []):
            self._route(twin)

    def _lost_or_later(self, case: Case, error: OSError, put: Callable[[Case], object]) -> None:
        if self._layout.reachable() and not case.claim.folder.exists():
            self._log.say(f"{case.claim.shown}: another service has taken it over")
            self._gone(case)
            return
        self._log.say_rarely(f"{case.claim.shown}: {error}; tried again later")
        case.later()
        if self._limits.bounded and case.failures >= MOST_TROUBLES:
            self.tally.left.append(f"{case.claim.shown}: {error}")
            self._gone(case)
            return
        put(case)


def _state(path: Path) -> tuple[int, int]:
    status = path.stat()
    return status.st_size, status.st_mtime_ns


def _touch(path: Path) -> None:
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(str(time.time_ns()), encoding="ascii")
