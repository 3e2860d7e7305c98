"""The periodic look over in/: what lies there, since when unchanged, and what may be taken."""

from __future__ import annotations

import os
from collections.abc import Container, Iterator
from contextlib import AbstractContextManager
from dataclasses import dataclass, field
from pathlib import Path

from sheetqc.folder.completeness import Completeness, completeness
from sheetqc.folder.names import left_alone, lock_names

PATIENCE = 30.0
"""Seconds an unfinished file may lie still before it is taken as it is."""

OTHER_PATIENCE = 1.0
"""Seconds a file that is no package must lie still."""

OPEN = "is open in a spreadsheet program (its lock file lies beside it)"
"""Why a file with a lock file beside it is not taken yet."""

_FIRST_PAUSE, _LONGEST_PAUSE = 0.25, 30.0


@dataclass(frozen=True, slots=True)
class Dropped:
    """A file in in/ as one look found it; `aside` says why it is not to be taken at all."""

    path: Path
    size: int
    changed: int
    aside: str = ""


@dataclass(slots=True)
class Watched:
    """What the looks so far tell about one file; times by the monotonic clock, so that no set clock disturbs."""

    dropped: Dropped
    since: float
    until: float
    """Times of the first and the last look that found it as it is."""

    state: Completeness | None = None
    hindrance: str = ""
    pause: float = 0.0
    not_before: float = 0.0


def dropped_files(inbox: Path) -> list[Dropped]:
    """Every file below in/. Links are not followed.

    Raises
    ------
    OSError : when in/ itself cannot be listed; a subfolder that cannot be is passed over until the next look
    """
    found = list(_below(inbox, os.scandir(inbox)))
    return sorted(found, key=lambda d: (d.changed, str(d.path)))


def _below(folder: Path, entries: AbstractContextManager[Iterator[os.DirEntry[str]]]) -> Iterator[Dropped]:
    files, folders = {}, []
    with entries as listing:
        for entry in listing:
            if entry.is_dir(follow_symlinks=False) and not _is_link(entry):
                folders.append(Path(entry.path))
            else:
                files[entry.name] = entry
    for entry in files.values():
        try:
            yield _dropped(Path(entry.path), entry, files.keys())
        except OSError:
            continue  # gone since, or not to be seen now
    for sub in folders:
        if not sub.name.startswith("."):
            try:
                yield from _below(sub, os.scandir(sub))
            except OSError:
                continue


def _dropped(path: Path, entry: os.DirEntry[str], names: Container[str]) -> Dropped:
    status = path.lstat()  # scandir's own figures are stale on some systems while a file is being written
    if _is_link(entry) or not entry.is_file(follow_symlinks=False):
        aside = "is a link or no ordinary file; links are not followed"
    else:
        aside = left_alone(entry.name)
    if not aside and any(lock in names for lock in lock_names(entry.name)):
        aside = OPEN
    return Dropped(path, status.st_size, status.st_mtime_ns, aside)


def _is_link(entry: os.DirEntry[str]) -> bool:
    junction = getattr(entry, "is_junction", None)
    return entry.is_symlink() or bool(junction and junction())


@dataclass(slots=True)
class Sweep:
    """Looks at in/ again and again.

    Parameters
    ----------
    inbox : the folder dropped into
    settle : seconds a file must lie unchanged over two looks
    patience : seconds for one that is unfinished
    """

    inbox: Path
    settle: float
    patience: float = PATIENCE
    excluded: set[Path] = field(default_factory=set)
    """Files given back for good: not looked at again."""

    watched: dict[Path, Watched] = field(default_factory=dict)

    def look(self, now: float) -> None:
        """Take note of what lies in in/ now."""
        seen = {}
        for dropped in dropped_files(self.inbox):
            if dropped.path in self.excluded:
                continue
            known = self.watched.get(dropped.path)
            if known is None or known.dropped != dropped:
                known = Watched(dropped, now, now)
            known.until = now
            seen[dropped.path] = known
        self.watched = seen

    def ready(self, now: float, most: int) -> list[Path]:
        """Files to be taken, those longest unchanged first; at most `most`."""
        found: list[Path] = []
        for path, watched in self.watched.items():
            if len(found) >= most:
                break
            if self._is_ready(path, watched, now):
                found.append(path)
        return found

    def gone(self, path: Path) -> None:
        """Forget a file that was taken."""
        self.watched.pop(path, None)

    def hindered(self, path: Path, why: str, now: float) -> bool:
        """Note that a file could not be taken; it is left alone for a while that grows. True when that is news."""
        watched = self.watched[path]
        news = watched.hindrance != why
        watched.hindrance = why
        watched.pause = min(max(2 * watched.pause, _FIRST_PAUSE), _LONGEST_PAUSE)
        watched.not_before = now + watched.pause
        return news

    def next_look(self, now: float) -> float | None:
        """Seconds until a look could make a file ready; None when no file waits for one."""
        due = [self._due(w) for w in self.watched.values() if not w.dropped.aside and not self._has_settled(w)]
        return max(0.0, min(due) - now) if due else None

    def waiting(self) -> list[Watched]:
        """Files that are to be taken some time, hindered ones among them."""
        return [w for w in self.watched.values() if not w.dropped.aside]

    def aside(self) -> list[Dropped]:
        """Files that are not taken as they are."""
        return [w.dropped for w in self.watched.values() if w.dropped.aside]

    def _settles(self, watched: Watched) -> float:
        wait = {None: self.settle, "whole": self.settle, "other": max(self.settle, OTHER_PATIENCE)}
        return watched.since + wait.get(watched.state, self.patience)

    def _due(self, watched: Watched) -> float:
        return max(self._settles(watched), watched.not_before)

    def _has_settled(self, watched: Watched) -> bool:
        return watched.until >= self._due(watched)

    def _is_ready(self, path: Path, watched: Watched, now: float) -> bool:
        if watched.dropped.aside or not self._has_settled(watched):
            return False
        try:
            watched.state = completeness(path)
        except FileNotFoundError:
            return False
        except OSError as error:
            self.hindered(path, f"cannot be read now: {error.strerror or error}", now)
            return False
        return self._has_settled(watched)
