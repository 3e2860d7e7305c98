from __future__ import annotations

import json
import os
from pathlib import Path

import pytest

from sheetqc.register import Aside, Judged, collect
from tests.register.answers import characteristic, document, put


def test_all_answers_below_a_folder(tmp_path: Path) -> None:
    put(tmp_path / "x/y", "b", document(characteristic("A"), characteristic("B"), sha256="1"))
    put(tmp_path, "a", document(characteristic("C"), sha256="2"), book=False)
    rows = collect(tmp_path)
    assert [r.id for r in rows if isinstance(r, Judged)] == ["C", "A", "B"]
    assert [r.workbook.copy for r in rows if isinstance(r, Judged)] == [
        None,
        tmp_path / "x/y/b.answered.xlsx",
        tmp_path / "x/y/b.answered.xlsx",
    ]


def test_nothing(tmp_path: Path) -> None:
    assert collect(tmp_path) == ()


@pytest.mark.parametrize("content", ["", "{", "[1, 2]", "null", "\x00\x01", "[" * 100_000, '{"characteristics": 5}'])
def test_broken_ones_are_listed(tmp_path: Path, content: str) -> None:
    put(tmp_path, "bad", content)
    put(tmp_path, "good", document(characteristic()))
    bad, good = collect(tmp_path)
    assert isinstance(bad, Aside)
    assert isinstance(good, Judged)
    assert (bad.state, bad.name) == ("unreadable", "bad")
    assert "bad.answered.json cannot be read" in bad.reason


def test_no_text_at_all(tmp_path: Path) -> None:
    put(tmp_path, "bad", "").write_bytes(b"\xff\xfe\x00{")
    (row,) = collect(tmp_path)
    assert isinstance(row, Aside)


def test_returned_files_with_their_reason(tmp_path: Path) -> None:
    report = {"source": {"name": "scan.pdf"}, "reason": "the file is a\n picture.", "findings": []}
    (tmp_path / "scan.returned.json").write_text(json.dumps(report))
    (tmp_path / "scan.pdf").touch()
    (tmp_path / "odd.returned.json").write_text("[]")
    odd, scan = collect(tmp_path)
    assert isinstance(scan, Aside)
    assert isinstance(odd, Aside)
    assert (scan.state, scan.name, scan.file) == ("returned", "scan.pdf", tmp_path / "scan.pdf")
    assert scan.reason == "the file is a picture."
    assert (odd.state, odd.name, odd.file, odd.reason) == ("returned", "odd", None, "no reason is given")


def test_same_content_counts_once(tmp_path: Path) -> None:
    put(tmp_path, "b first", document(characteristic("A"), characteristic("B"), sha256="1"))
    again = document(characteristic("A"), characteristic("B"), sha256="1") | {"same_content_as": "x"}
    put(tmp_path, "a again", again)
    repeated, *rows = collect(tmp_path)
    assert [r.id for r in rows if isinstance(r, Judged)] == ["A", "B"]
    assert isinstance(repeated, Aside)
    assert repeated.state == "repeated"
    assert repeated.file == tmp_path / "a again.answered.xlsx"
    assert "study.xlsx" in repeated.reason


def test_the_latest_answer_to_a_content_stands(tmp_path: Path) -> None:
    for name, when in (("new", 2e9), ("old", 1e9)):
        os.utime(put(tmp_path, name, document(characteristic(name), sha256="1")), (when, when))
    assert [r.id for r in collect(tmp_path) if isinstance(r, Judged)] == ["new"]


def test_files_still_in_work_do_not_count(tmp_path: Path) -> None:
    for place in ("in", "working/x/answer-1", "answered", ".sheetqc"):
        put(tmp_path / place, "a", document(characteristic(place), sha256=place))
    assert [r.id for r in collect(tmp_path) if isinstance(r, Judged)] == ["answered"]


def test_any_folder_may_be_called_working(tmp_path: Path) -> None:
    put(tmp_path / "working", "a", document(characteristic()))
    assert len(collect(tmp_path)) == 1
