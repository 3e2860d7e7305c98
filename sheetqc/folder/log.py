"""Lines that a person can read, on the terminal and in a rotating file."""

from __future__ import annotations

import contextlib
import logging
import time
from collections.abc import Callable
from logging.handlers import RotatingFileHandler
from pathlib import Path

from sheetqc.folder.names import printable

_BYTES, _FILES = 1_000_000, 5


class Log:
    """Says each line to `say`, and writes it with the time into a file; a log that cannot be written stops nothing."""

    def __init__(self, path: Path, say: Callable[[str], None]) -> None:
        self._say = say
        self._logger = logging.Logger(f"sheetqc.folder.{path.stem}")
        self._handler = _Handler(path, maxBytes=_BYTES, backupCount=_FILES, encoding="utf-8", delay=True)
        self._handler.setFormatter(logging.Formatter("%(asctime)s  %(message)s", "%Y-%m-%d %H:%M:%S"))
        self._logger.addHandler(self._handler)
        self._said_last: dict[str, float] = {}

    def say(self, text: str) -> None:
        """One line."""
        line = printable(text)
        self._say(line)
        self._logger.info(line)

    def note(self, text: str) -> None:
        """Lines for the file alone."""
        for line in text.splitlines():
            self._logger.info(printable(line))

    def say_rarely(self, text: str, seconds: float = 60.0) -> None:
        """One line, unless the same was said a moment ago."""
        now = time.monotonic()
        if now - self._said_last.get(text, -seconds) >= seconds:
            if len(self._said_last) > 1000:
                self._said_last.clear()
            self._said_last[text] = now
            self.say(text)

    def close(self) -> None:
        """Close the file."""
        self._logger.removeHandler(self._handler)
        self._handler.close()


class _Handler(RotatingFileHandler):
    def emit(self, record: logging.LogRecord) -> None:
        with contextlib.suppress(OSError):
            super().emit(record)

    def handleError(self, record: logging.LogRecord) -> None:  # noqa: N802
        """Nothing: where the log cannot be written, a trace on the terminal helps nobody."""
