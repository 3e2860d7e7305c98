from __future__ import annotations

from pathlib import Path

import pytest

from sheetqc.folder.completeness import completeness
from tests.folder.standin import package


def test_a_package_is_whole(tmp_path: Path) -> None:
    assert completeness(package(tmp_path / "a.xlsx")) == "whole"


def test_no_beginning_of_a_package_is_whole(tmp_path: Path) -> None:
    content = package(tmp_path / "a.xlsx").read_bytes()
    part = tmp_path / "part.xlsx"
    for length in range(0, len(content), 7):
        part.write_bytes(content[:length])
        assert completeness(part) == ("unfinished" if content[:length][:2] in (b"", b"PK") else "other")


def test_a_size_given_in_advance_is_no_content(tmp_path: Path) -> None:
    content = package(tmp_path / "a.xlsx", size=5000).read_bytes()
    part = tmp_path / "part.xlsx"
    for length in (0, 100, 2000, len(content) - 10):
        part.write_bytes(content[:length] + b"\0" * (len(content) - length))
        assert completeness(part) == "unfinished"


@pytest.mark.parametrize("content", [b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\0" * 600, b"%PDF-1.7", b"a;b\n1;2\n"])
def test_other_kinds_of_file(tmp_path: Path, content: bytes) -> None:
    (tmp_path / "a").write_bytes(content)
    assert completeness(tmp_path / "a") == "other"


def test_what_cannot_be_read_is_said(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        completeness(tmp_path / "none")
