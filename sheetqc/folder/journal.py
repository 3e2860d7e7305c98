"""What was answered, by content. The files in answered/ are the truth: the journal can be deleted and is rebuilt."""

from __future__ import annotations

import contextlib
import json
import sqlite3
import time
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from sheetqc.folder.layout import Layout

_TABLE = """
CREATE TABLE IF NOT EXISTS answered (
    ticket TEXT PRIMARY KEY,
    sha256 TEXT NOT NULL,
    edition TEXT NOT NULL,
    report TEXT NOT NULL,
    workbook TEXT NOT NULL,
    finished REAL NOT NULL
);
CREATE INDEX IF NOT EXISTS answered_content ON answered (sha256, edition);
PRAGMA synchronous = OFF;
PRAGMA journal_mode = TRUNCATE;
"""
"""A kill does no harm with these settings; after a power cut the journal may be damaged, and is then rebuilt."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """An answer given: `report` and `workbook` relative to the folder, with forward slashes."""

    ticket: str
    sha256: str
    edition: str
    report: str
    workbook: str
    finished: float


class Journal:
    """The journal of a folder. A journal that cannot be used is done without: files are then answered again."""

    def __init__(self, layout: Layout) -> None:
        self._layout = layout
        self._base = self._opened()

    def answer_of(self, sha256: str, edition: str) -> Entry | None:
        """The answer given to this content by this edition, if its files are still there."""
        rows = self._rows("SELECT * FROM answered WHERE sha256 = ? AND edition = ? ORDER BY finished", sha256, edition)
        for row in rows:
            entry = Entry(**dict(row))
            if all((self._layout.root / p).is_file() for p in (entry.report, entry.workbook)):
                return entry
        return None

    def record(self, entry: Entry) -> None:
        """Note an answer; a second time is no harm."""
        self._rows(
            "INSERT OR REPLACE INTO answered VALUES (?, ?, ?, ?, ?, ?)",
            entry.ticket, entry.sha256, entry.edition, entry.report, entry.workbook, entry.finished,
        )  # fmt: skip

    def close(self) -> None:
        """Let go of the file."""
        self._base.close()

    def _rows(self, statement: str, *values: object) -> list[Any]:
        try:
            with self._base:
                return self._base.execute(statement, values).fetchall()
        except (sqlite3.OperationalError, UnicodeEncodeError):  # held for long, or the share is gone
            return []
        except sqlite3.DatabaseError:  # damaged, by a power cut for example
            self._base.close()
            self._base = self._opened(fresh=True)
            return []

    def _opened(self, *, fresh: bool = False) -> sqlite3.Connection:
        path = self._layout.journal
        if fresh:
            _remove(path)
        fresh = not path.exists()
        try:
            base = _connected(path)
        except sqlite3.Error:
            fresh = True
            _remove(path)
            try:
                base = _connected(path)
            except sqlite3.Error:  # a share without locks
                base = _connected(None)
        if fresh:
            with base:
                base.executemany("INSERT OR REPLACE INTO answered VALUES (?, ?, ?, ?, ?, ?)", _found(self._layout))
        return base


def _remove(path: Path) -> None:
    for part in path.parent.glob(path.name + "*"):
        with contextlib.suppress(OSError):
            part.unlink()


def _connected(path: Path | None) -> sqlite3.Connection:
    base = sqlite3.connect(":memory:" if path is None else path, timeout=10)
    try:
        base.row_factory = sqlite3.Row
        base.executescript(_TABLE)
    except BaseException:
        base.close()
        raise
    return base


def _found(layout: Layout) -> list[tuple[str, str, str, str, str, float]]:
    """Rows for the answers that lie in answered/, from the content hash that each report states."""
    rows = []
    for report in sorted(layout.answered.rglob("*.answered.json")):
        stem = report.name.removesuffix(".json")
        workbook = next((p for s in (".xlsx", ".xlsm") if (p := report.with_name(stem + s)).is_file()), None)
        said = _said(report)
        if workbook is None or said is None:
            continue
        report_name = report.relative_to(layout.root).as_posix()
        workbook_name = workbook.relative_to(layout.root).as_posix()
        if report_name.isprintable() and workbook_name.isprintable():
            rows.append(("found:" + report_name, *said, report_name, workbook_name, _changed(report)))
    return rows


def _said(report: Path) -> tuple[str, str] | None:
    try:
        content = json.loads(report.read_text("utf-8"))
        sha256, edition = content["source"]["sha256"], content.get("tool", {}).get("version", "")
    except (OSError, ValueError, LookupError, TypeError, AttributeError):
        return None
    return (sha256, edition) if isinstance(sha256, str) and isinstance(edition, str) else None


def _changed(path: Path) -> float:
    try:
        return path.stat().st_mtime
    except OSError:
        return time.time()
