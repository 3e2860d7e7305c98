from __future__ import annotations

import errno
import os
from pathlib import Path

import pytest

from sheetqc.folder import moves


def _across(monkeypatch: pytest.MonkeyPatch, *, into: Path) -> None:
    """Make `into` a volume of its own, as far as renames go."""
    rename = Path.replace

    def replace(self: Path, target: Path) -> Path:
        if (into in self.parents) != (into in Path(target).parents):
            raise OSError(errno.EXDEV, "Invalid cross-device link")
        return rename(self, target)

    monkeypatch.setattr(Path, "replace", replace)


def test_move_makes_folders(tmp_path: Path) -> None:
    (tmp_path / "a").write_bytes(b"1")
    moves.move(tmp_path / "a", tmp_path / "x/y/b")
    assert (tmp_path / "x/y/b").read_bytes() == b"1"
    assert not (tmp_path / "a").exists()


def test_move_across_volumes(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "a").write_bytes(b"1" * 100_000)
    os.utime(tmp_path / "a", (1e9, 1e9))
    _across(monkeypatch, into=tmp_path / "other")
    moves.move(tmp_path / "a", tmp_path / "other/b")
    assert (tmp_path / "other/b").read_bytes() == b"1" * 100_000
    assert (tmp_path / "other/b").stat().st_mtime == 1e9
    assert [p.name for p in (tmp_path / "other").iterdir()] == ["b"]
    assert not (tmp_path / "a").exists()


def test_a_bad_copy_across_volumes_is_noticed(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "a").write_bytes(b"right")
    _across(monkeypatch, into=tmp_path / "other")
    monkeypatch.setattr(moves.shutil, "copyfile", lambda _, target: Path(target).write_bytes(b"wrong"))
    with pytest.raises(OSError, match="differs"):
        moves.move(tmp_path / "a", tmp_path / "other/b")
    assert (tmp_path / "a").read_bytes() == b"right"
    assert list((tmp_path / "other").iterdir()) == []


def test_other_errors_are_passed_on(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        moves.move(tmp_path / "none", tmp_path / "b")


def test_write_whole_leaves_the_old_when_the_disk_is_full(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    moves.write_whole(tmp_path / "a", b"old")

    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(moves.os, "fsync", full)
    with pytest.raises(OSError, match="No space"):
        moves.write_whole(tmp_path / "a", b"new")
    assert (tmp_path / "a").read_bytes() == b"old"
    assert [p.name for p in tmp_path.iterdir()] == ["a"]


def test_patience_with_a_short_lock() -> None:
    tries = []

    def action() -> str:
        tries.append(1)
        if len(tries) < 3:
            raise PermissionError
        return "done"

    assert moves.patiently(action) == "done"
    assert len(tries) == 3


def test_patience_ends(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(moves.time, "sleep", lambda _: None)

    def action() -> None:
        raise PermissionError("held")

    with pytest.raises(PermissionError, match="held"):
        moves.patiently(action)


def test_remove_read_only(tmp_path: Path) -> None:
    path = tmp_path / "a"
    path.touch()
    path.chmod(0o400)
    moves.remove(path)
    moves.remove(path)
    assert not path.exists()


@pytest.mark.parametrize("links", [True, False])
def test_put_back_replaces_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, links: bool) -> None:
    if not links:

        def none(*_: object) -> None:
            raise OSError(errno.EPERM, "Operation not permitted")

        monkeypatch.setattr(moves.os, "link", none)
    source, target = tmp_path / "a", tmp_path / "in" / "a"
    source.write_bytes(b"mine")
    assert moves.put_back(source, target)
    assert target.read_bytes() == b"mine"
    assert not source.exists()
    source.write_bytes(b"second")
    assert not moves.put_back(source, target)
    assert target.read_bytes() == b"mine"
    assert source.read_bytes() == b"second"


def test_is_there_never_guesses(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    assert not moves.is_there(tmp_path / "a")
    (tmp_path / "a").touch()
    assert moves.is_there(tmp_path / "a")

    def stale(_: Path) -> None:
        raise OSError(errno.ESTALE if hasattr(errno, "ESTALE") else errno.EIO, "stale")

    monkeypatch.setattr(Path, "lstat", stale)
    with pytest.raises(OSError, match="stale"):
        moves.is_there(tmp_path / "a")
