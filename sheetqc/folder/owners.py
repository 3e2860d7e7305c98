"""Who holds a claim, and whether that service is still alive.

Every service on a folder holds two files in .sheetqc/owners/: NAME.lock, a database with an exclusive transaction
open, which the system releases the moment the process is gone, however it went; and NAME.beat, touched every few
seconds. On the same machine the lock alone decides, so that the claims of a killed service are free at once and a
reused process number deceives nobody. Between machines a held lock proves life, but a free one proves nothing (not
every share passes locks on), so there the beat must have stood still too: by the clock of the share itself, and
while this service was looking on.
"""

from __future__ import annotations

import contextlib
import os
import re
import secrets
import socket
import sqlite3
import threading
import time
from dataclasses import dataclass, field
from pathlib import Path

from sheetqc.folder.layout import Layout

BEAT = 5.0
"""Seconds between two beats."""

PATIENCE = 60.0
"""Seconds by which the beat of a service on another machine may lag before it counts as dead."""

_WATCHED = 3 * BEAT
"""Seconds this service must itself have seen another's beat stand still."""


def this_host() -> str:
    """Name of this machine, fit for a file name."""
    return re.sub(r"[^A-Za-z0-9-]+", "-", socket.gethostname()) or "host"


def host_of(owner: str) -> str:
    """Machine of an owner."""
    return owner.split(".")[0]


def pid_of(owner: str) -> str:
    """Process number of an owner, as text."""
    return owner.split(".")[1] if owner.count(".") >= 1 else ""


class Owner:
    """This service's name and signs of life; use as a context manager."""

    def __init__(self, layout: Layout) -> None:
        self.layout = layout
        self.name = f"{this_host()}.{os.getpid()}.{secrets.token_hex(4)}"
        self._lock_file = layout.owners / f"{self.name}.lock"
        self._beat_file = layout.owners / f"{self.name}.beat"
        self._lock: sqlite3.Connection | None = None
        self._ended = threading.Event()
        self._beating = threading.Thread(target=self._beat_on, name="sheetqc-beat", daemon=True)

    def __enter__(self) -> Owner:
        self.beat()
        self._beating.start()
        return self

    def __exit__(self, *_: object) -> None:
        self._ended.set()
        self._beating.join()
        if self._lock is not None:
            self._lock.close()
        for path in (self._lock_file, self._beat_file):
            with contextlib.suppress(OSError):
                path.unlink(missing_ok=True)

    def beat(self) -> None:
        """Show that this service is alive, with new files where they were deleted."""
        with contextlib.suppress(OSError, sqlite3.Error):
            self._beat_file.parent.mkdir(exist_ok=True)
            self._beat_file.write_text(str(time.monotonic_ns()), encoding="ascii")
            if self._lock is None or not self._lock_file.exists():
                self._hold()

    def _hold(self) -> None:
        if self._lock is not None:
            self._lock.close()
        self._lock = sqlite3.connect(self._lock_file, isolation_level=None, check_same_thread=False)
        with contextlib.suppress(sqlite3.Error):  # a share without locks: the beat must do
            self._lock.execute("BEGIN EXCLUSIVE")

    def share_clock(self) -> float | None:
        """Time of the last own beat by the clock of the file system."""
        return _touched(self._beat_file)

    def _beat_on(self) -> None:
        while not self._ended.wait(BEAT):
            self.beat()


@dataclass(slots=True)
class Neighbours:
    """What is known of the other services on the folder."""

    owner: Owner
    _seen: dict[str, tuple[float, float]] = field(default_factory=dict)
    """By owner: time of its last beat, and since when (monotonic) this service has seen that."""

    def is_dead(self, owner: str) -> bool:
        """Whether a service is certainly gone."""
        if owner == self.owner.name:
            return False
        owners = self.owner.layout.owners
        lock = lock_state(owners / f"{owner}.lock")
        if lock == "held":
            return False
        if host_of(owner) == this_host() and lock in ("free", "missing"):
            return True
        return self._stands_still(owner, owners / f"{owner}.beat")

    def forget(self) -> None:
        """Remove the signs of dead services."""
        for path in self.owner.layout.owners.glob("*.lock"):
            if self.is_dead(path.stem):
                for gone in (path, path.with_suffix(".beat")):
                    with contextlib.suppress(OSError):
                        gone.unlink(missing_ok=True)

    def _stands_still(self, owner: str, beat_file: Path) -> bool:
        beat, now, clock = _touched(beat_file), self.owner.share_clock(), time.monotonic()
        beat = 0.0 if beat is None else beat
        known = self._seen.get(owner)
        if known is None or known[0] != beat:
            self._seen[owner] = (beat, clock)
            return False
        return now is not None and now - beat > PATIENCE and clock - known[1] > _WATCHED


def lock_state(path: Path) -> str:
    """State of a service's lock: "held", "free", "missing" or "unknown" (the share knows no locks)."""
    if not path.exists():
        return "missing"
    try:
        connection = sqlite3.connect(path, timeout=0, isolation_level=None)
    except sqlite3.Error:
        return "unknown"
    try:
        connection.execute("BEGIN EXCLUSIVE")
        connection.execute("ROLLBACK")
    except sqlite3.OperationalError as error:
        return "held" if "locked" in str(error) else "unknown"
    except sqlite3.Error:
        return "unknown"
    finally:
        connection.close()
    return "free"


def _touched(path: Path) -> float | None:
    try:
        return path.stat().st_mtime
    except OSError:
        return None
