from __future__ import annotations

import json
import sqlite3
from pathlib import Path

import pytest

from sheetqc.folder import journal as module
from sheetqc.folder.journal import Entry, Journal
from sheetqc.folder.layout import Layout


def _answered(layout: Layout, name: str = "sup/a", sha256: str = "ab", version: str = "1") -> Entry:
    report = layout.answered / f"{name}.answered.json"
    report.parent.mkdir(parents=True, exist_ok=True)
    report.write_text(json.dumps({"source": {"name": "a.xlsx", "sha256": sha256}, "tool": {"version": version}}))
    report.with_suffix(".xlsx").touch()
    return Entry(
        ticket="t",
        sha256=sha256,
        edition=version,
        report=f"answered/{name}.answered.json",
        workbook=f"answered/{name}.answered.xlsx",
        finished=1.0,
    )


def test_finds_what_it_recorded(layout: Layout) -> None:
    book = Journal(layout)
    entry = _answered(layout)
    assert book.answer_of("ab", "1") is None
    book.record(entry)
    book.record(entry)
    assert book.answer_of("ab", "1") == entry
    assert book.answer_of("ab", "2") is None
    assert book.answer_of("cd", "1") is None
    book.close()
    again = Journal(layout)
    assert again.answer_of("ab", "1") == entry
    again.close()


def test_an_answer_without_its_files_is_none(layout: Layout) -> None:
    book = Journal(layout)
    entry = _answered(layout)
    book.record(entry)
    (layout.root / entry.workbook).unlink()
    assert book.answer_of("ab", "1") is None
    book.close()


@pytest.mark.parametrize("damage", ["deleted", "no database", "truncated"])
def test_is_rebuilt_from_the_answers(layout: Layout, damage: str) -> None:
    entry = _answered(layout)
    (layout.answered / "broken.answered.json").write_text("{")
    (layout.answered / "odd.answered.json").write_text("[1]")
    (layout.answered / "alone.answered.json").write_text('{"source": {"sha256": "cd"}}')
    book = Journal(layout)
    book.close()
    if damage == "deleted":
        layout.journal.unlink()
    elif damage == "no database":
        layout.journal.write_bytes(b"no database " * 1000)
    else:
        layout.journal.write_bytes(layout.journal.read_bytes()[:3000])
    book = Journal(layout)
    found = book.answer_of("ab", "1")
    assert found is not None
    assert (found.report, found.workbook) == (entry.report, entry.workbook)
    assert book.answer_of("cd", "") is None
    book.close()


def test_is_rebuilt_when_damaged_in_use(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    _answered(layout)
    book = Journal(layout)
    base, book._base = book._base, _Damaged()  # type: ignore[assignment]
    base.close()
    assert book.answer_of("ab", "1") is None
    found = book.answer_of("ab", "1")
    assert found is not None
    book.close()


class _Damaged:
    """A connection to a database whose pages make no sense."""

    def __enter__(self) -> _Damaged:
        return self

    def __exit__(self, *_: object) -> None: ...

    def close(self) -> None: ...

    def execute(self, *_: object) -> None:
        raise sqlite3.DatabaseError("database disk image is malformed")


def test_does_without_a_file(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    connect = sqlite3.connect

    def no_locks(path: object, **options: object) -> sqlite3.Connection:
        if path != ":memory:":
            raise sqlite3.OperationalError("disk I/O error")
        return connect(":memory:")

    monkeypatch.setattr(module.sqlite3, "connect", no_locks)
    entry = _answered(layout)
    book = Journal(layout)
    found = book.answer_of("ab", "1")
    assert found is not None
    assert found.report == entry.report
    book.close()


def test_names_that_are_no_text_stop_nothing(layout: Layout) -> None:
    book = Journal(layout)
    book.record(Entry(ticket="t", sha256="ab", edition="1", report="answered/\udc80.json", workbook="x", finished=1.0))
    assert book.answer_of("ab", "1") is None
    book.close()


def test_no_answer_is_no_journal_matter(layout: Layout) -> None:
    book = Journal(layout)
    assert book.answer_of("", "") is None
    assert isinstance(layout.journal, Path)
    book.close()
