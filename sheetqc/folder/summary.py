"""The summary of a folder, kept up to date by a function that was handed in; the folder does not know what is in it."""

from __future__ import annotations

import contextlib
import time
from collections.abc import Callable
from concurrent.futures import Future
from pathlib import Path

from sheetqc.folder.layout import Layout
from sheetqc.folder.log import Log
from sheetqc.folder.workers import Workers

KEY = "summary"
"""Under which the workers report the summary's end."""

_APART = 20.0
"""Seconds between two summaries while files keep coming."""

_SHARE = 9
"""At least so many times as long as the last summary took is left until the next."""

_FIRST_PAUSE, _LONGEST_PAUSE = 1.0, 60.0


class Summary:
    """Runs `renew` in a worker whenever results were moved into place since it last ran through.

    The mark for that is a file, so that a kill at any moment does not lose it.
    """

    def __init__(self, layout: Layout, renew: Callable[[Path], None] | None, workers: Workers, log: Log) -> None:
        self._layout = layout
        self._renew = renew
        self._workers = workers
        self._log = log
        self._mark = ""
        self._running = False
        self._began = self._last = -_APART
        self._apart = _APART
        self._not_before = 0.0
        self.failures = 0

    @property
    def running(self) -> bool:
        """Whether it is being made."""
        return self._running

    def is_due(self) -> bool:
        """Whether results are in place that it does not hold."""
        return self._renew is not None and self._layout.due.exists()

    def next_time(self) -> float | None:
        """When (monotonic) it should be made; None when not, or when it is being made."""
        return None if self._running or not self.is_due() else max(self._not_before, self._last + self._apart)

    def start(self, *, quiet: bool) -> None:
        """Have it made if it is due: at once when the folder is quiet, else when some time has passed."""
        now = time.monotonic()
        if self._renew is None or self._running or now < self._not_before:
            return
        if not quiet and now - self._last < self._apart:
            return
        try:
            self._mark = self._layout.due.read_text("ascii")
        except OSError:
            return
        self._running = True
        self._began = now
        self._workers.submit(KEY, self._renew, self._layout.root)

    def finished(self, future: Future[object]) -> None:
        """Take in how it went."""
        self._running = False
        self._last = time.monotonic()
        self._apart = max(_APART, _SHARE * (self._last - self._began))
        error = None if future.cancelled() else future.exception()
        if future.cancelled():
            return
        if error is None:
            self.failures = 0
            with contextlib.suppress(OSError):
                if self._layout.due.read_text("ascii") == self._mark:
                    self._layout.due.unlink()
            return
        self.failures += 1
        pause = min(_FIRST_PAUSE * 2.0 ** (self.failures - 1), _LONGEST_PAUSE)
        self._not_before = self._last + pause
        self._log.say_rarely(f"the summary could not be renewed ({type(error).__name__}: {error}); tried again later")
