"""Harmful and broken files: refused with the reason and what to do, and nothing is left behind."""

from __future__ import annotations

import time
import tracemalloc
from collections.abc import Callable
from pathlib import Path

import pytest

from sheetqc.errors import CannotGraft, MissingWorkbook, UnsafeWorkbook, WorkbookError
from sheetqc.package import Limits, check, graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import plain
from tests.package.hostile import HOSTILE, bomb, document_type, lying_bomb
from tests.package.packages import contents, packed


@pytest.fixture(scope="module")
def additions(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_additions(tmp_path_factory.mktemp("additions") / "additions.xlsx")


@pytest.mark.parametrize(("maker", "kind", "words"), HOSTILE, ids=[maker.__name__ for maker, _, _ in HOSTILE])
def test_refused_with_the_reason(
    maker: Callable[[Path], Path], kind: type[WorkbookError], words: str, additions: Path, tmp_path: Path
) -> None:
    path = maker(tmp_path / "hostile.xlsx")
    with pytest.raises(WorkbookError) as caught:
        graft(path, additions, tmp_path / "copy.xlsx")
    assert type(caught.value) is kind
    assert words in caught.value.met
    assert caught.value.advice or kind is CannotGraft
    assert [p.name for p in tmp_path.iterdir()] == ["hostile.xlsx"]


@pytest.mark.parametrize("maker", [bomb, lying_bomb, document_type])
def test_refusing_takes_little_memory_and_time(maker: Callable[[Path], Path], additions: Path, tmp_path: Path) -> None:
    path = maker(tmp_path / "hostile.xlsx")
    tracemalloc.start()
    start = time.perf_counter()
    with pytest.raises(WorkbookError):
        graft(path, additions, tmp_path / "copy.xlsx")
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert peak < 20_000_000
    assert time.perf_counter() - start < 2


def test_a_missing_file_is_said_to_be_missing(additions: Path, tmp_path: Path) -> None:
    for served in (check, sheet_names, lambda path: graft(path, additions, tmp_path / "copy.xlsx")):
        with pytest.raises(MissingWorkbook, match=r"there is no file nowhere\.xlsx"):
            served(tmp_path / "nowhere.xlsx")


@pytest.mark.parametrize(
    "limits", [Limits(total=10_000), Limits(part=500), Limits(members=5), Limits(ratio=1.01, ratio_from=0)]
)
def test_limits_can_be_set(limits: Limits, additions: Path, tmp_path: Path) -> None:
    path = plain(tmp_path / "original.xlsx")
    with pytest.raises(UnsafeWorkbook):
        graft(path, additions, tmp_path / "copy.xlsx", limits=limits)
    graft(path, additions, tmp_path / "copy.xlsx")


def test_additions_that_cannot_be_read_leave_nothing_behind(tmp_path: Path) -> None:
    path = plain(tmp_path / "original.xlsx")
    broken = tmp_path / "additions.xlsx"
    broken.write_bytes(b"PK")
    with pytest.raises(WorkbookError):
        graft(path, broken, tmp_path / "copy.xlsx")
    assert not (tmp_path / "copy.xlsx").exists()


def test_an_existing_copy_survives_a_graft_that_fails(additions: Path, tmp_path: Path) -> None:
    path = document_type(tmp_path / "hostile.xlsx")
    copy = tmp_path / "copy.xlsx"
    copy.write_bytes(b"what was there before")
    with pytest.raises(UnsafeWorkbook):
        graft(path, additions, copy)
    assert copy.read_bytes() == b"what was there before"


def test_a_broken_part_that_is_only_copied_does_no_harm(additions: Path, tmp_path: Path) -> None:
    members = contents(plain(tmp_path / "original.xlsx"))
    members["xl/worksheets/sheet1.xml"] = b"<!DOCTYPE a><not well-formed"
    members["xl/theme/theme1.xml"] = b""
    path = packed(tmp_path / "original.xlsx", members)
    graft(path, additions, tmp_path / "copy.xlsx")
    assert contents(tmp_path / "copy.xlsx")["xl/worksheets/sheet1.xml"] == b"<!DOCTYPE a><not well-formed"
