"""Notice of changes in in/ from the operating system. It only wakes the sweep earlier; nothing rests on it."""

from __future__ import annotations

import contextlib
import logging
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from watchdog.events import FileSystemEvent

_CHANGES = {"created", "modified", "moved", "deleted", "closed"}
"""Kinds of event that tell of a change; others are caused by reading, the service's own among it."""


class Events:
    """Calls `changed` after any change below a folder, from another thread. Silent where events do not work."""

    def __init__(self, inbox: Path, changed: Callable[[], None]) -> None:
        self._inbox = inbox
        self._changed = changed
        self._observer: Any = None

    def supervise(self) -> None:
        """Start the observer, or start it again when it has died."""
        if self._observer is not None and self._observer.is_alive() and self._observer.emitters_alive():
            return
        self.close()
        with contextlib.suppress(OSError):
            self._observer = _observer(self._inbox, self._notice)

    def close(self) -> None:
        """End the observer."""
        if self._observer is not None:
            with contextlib.suppress(Exception):
                self._observer.stop()
                self._observer.join(5)
            self._observer = None

    def _notice(self, event: FileSystemEvent) -> None:
        if event.event_type in _CHANGES:
            self._changed()


def _observer(inbox: Path, notice: Callable[[FileSystemEvent], None]) -> Any:
    from watchdog.events import FileSystemEventHandler
    from watchdog.observers import Observer

    # it reports its own end as an error; whether it lives is looked after here
    logging.getLogger("watchdog").setLevel(logging.CRITICAL)

    class Handler(FileSystemEventHandler):
        def on_any_event(self, event: FileSystemEvent) -> None:
            notice(event)

    class Supervised(Observer):  # type: ignore[misc, valid-type]
        def emitters_alive(self) -> bool:
            return all(emitter.is_alive() for emitter in self.emitters)

    observer = Supervised()
    observer.schedule(Handler(), str(inbox), recursive=True)
    observer.start()
    return observer
