from __future__ import annotations

from itertools import islice

import pytest

from sheetqc.folder.names import is_conflict_copy, left_alone, lock_names, numbered, printable, split, workable


@pytest.mark.parametrize(
    "name",
    [
        "study.xlsx",
        "Study (2).xlsm",
        "a.xls",
        "scan.pdf",
        "no suffix",
        "12345678.xlsx",
        "answered.xlsx",
        "x.json",
        "Ü名.xlsx",
    ],
)
def test_taken(name: str) -> None:
    assert left_alone(name) == ""


@pytest.mark.parametrize(
    "name",
    [
        "~$study.xlsx", ".~lock.study.xlsx#", ".hidden.xlsx", "~WRL0001.tmp", "study.xlsx.part", "x.crdownload",
        "x.tmp", "A1B2C3D0", "study.xlsx~", "Thumbs.db", "desktop.ini",
    ],
)  # fmt: skip
def test_temporary(name: str) -> None:
    assert "temporary" in left_alone(name)


@pytest.mark.parametrize("name", ["a.answered.xlsx", "A.ANSWERED.XLSM", "a.answered.json", "a.returned.json"])
def test_own_results_are_no_input(name: str) -> None:
    assert "rename" in left_alone(name)


@pytest.mark.parametrize(
    ("name", "conflict"),
    [
        ("study (conflicted copy 2024-03-01).xlsx", True),
        ("study_conflict-20240301-120000.xlsx", True),
        ("study (conflict of 3 March).xlsx", True),
        ("study.xlsx", False),
        ("conflicting results.xlsx", False),
    ],
)
def test_conflict_copies(name: str, conflict: bool) -> None:
    assert is_conflict_copy(name) is conflict
    assert left_alone(name) == ""  # nothing dropped is passed over in silence


def test_lock_names() -> None:
    assert lock_names("a.xlsx") == ("~$a.xlsx", ".~lock.a.xlsx#")


def test_split_and_numbered() -> None:
    assert split("a.b.xlsx") == ("a.b", ".xlsx")
    assert split("plain") == ("plain", "")
    assert list(islice(numbered("a"), 3)) == ["a", "a (2)", "a (3)"]


@pytest.mark.parametrize("name", ["a" * 250 + ".xlsx", "名" * 80 + ".xlsx", "x." + "y" * 250, "é" * 120])
def test_long_names_leave_room_for_results(name: str) -> None:
    short = workable(name)
    assert len((split(short)[0] + " (999).answered.xlsx").encode()) <= 255
    assert len(short.encode()) <= 255
    if name.endswith(".xlsx"):
        assert short.endswith(".xlsx")


def test_ordinary_names_stay() -> None:
    assert workable("Ünï 名.xlsx") == "Ünï 名.xlsx"


def test_printable_is_one_plain_line() -> None:
    assert printable("a\nb\x1b[31m\u202e") == "a\\nb\\x1b[31m\\u202e"
    assert printable("bad \udc80 byte") == "bad \\udc80 byte"
    assert printable("Ünï 名 ●") == "Ünï 名 ●"
