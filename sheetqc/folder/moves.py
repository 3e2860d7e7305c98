"""Moves and writes that are either done or not done, never half."""

from __future__ import annotations

import contextlib
import errno
import hashlib
import os
import secrets
import shutil
import stat
import time
from collections.abc import Callable
from pathlib import Path
from typing import TypeVar

_T = TypeVar("_T")

_PAUSES = (0.02, 0.05, 0.1, 0.2, 0.4)
"""Seconds between tries while a virus scanner or an indexer holds a file."""


def patiently(action: Callable[[], _T]) -> _T:
    """The result of `action`, tried again for a moment when access is denied."""
    for pause in _PAUSES:
        try:
            return action()
        except PermissionError:
            time.sleep(pause)
    return action()


def sha256(path: Path) -> str:
    """SHA-256 of a file, in hexadecimal."""
    with path.open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()


def flush(path: Path) -> None:
    """Have the system put a file's content on the disk."""
    with path.open("r+b") as stream:
        os.fsync(stream.fileno())


def write_whole(path: Path, content: bytes) -> None:
    """Write a file so that a reader sees all of it or none of it, even after a power cut."""
    temporary = path.with_name(f".{secrets.token_hex(6)}.tmp")
    try:
        with temporary.open("wb") as stream:
            stream.write(content)
            stream.flush()
            os.fsync(stream.fileno())
        patiently(lambda: temporary.replace(path))
    except BaseException:
        with contextlib.suppress(OSError):
            temporary.unlink()
        raise


def move(source: Path, target: Path) -> None:
    """Move a file in one step; across volumes by a copy that is compared before it gets its name."""
    target.parent.mkdir(parents=True, exist_ok=True)
    try:
        patiently(lambda: source.replace(target))
    except OSError as error:
        if error.errno != errno.EXDEV:
            raise
        _move_across(source, target)


def _move_across(source: Path, target: Path) -> None:
    temporary = target.with_name(f".{secrets.token_hex(6)}.tmp")
    try:
        shutil.copyfile(source, temporary)
        flush(temporary)
        if sha256(temporary) != sha256(source):
            raise OSError(errno.EIO, "the copy differs from its source", str(source))
        shutil.copystat(source, temporary)
        patiently(lambda: temporary.replace(target))
    except BaseException:
        with contextlib.suppress(OSError):
            temporary.unlink()
        raise
    remove(source)


def remove(path: Path) -> None:
    """Remove a file, also one that is marked read-only; no error when it is gone."""
    try:
        patiently(lambda: path.unlink(missing_ok=True))
    except PermissionError:
        path.chmod(stat.S_IWRITE | stat.S_IREAD)
        path.unlink(missing_ok=True)


def is_there(path: Path) -> bool:
    """Whether a file exists; unlike `Path.exists` never False only because it could not be found out.

    Raises
    ------
    OSError : when it cannot be told
    """
    try:
        path.lstat()
    except FileNotFoundError:
        return False
    return True


def remove_tree(folder: Path) -> None:
    """Remove a folder with all it holds, as far as that can be done now."""
    shutil.rmtree(folder, ignore_errors=True)


def put_back(source: Path, target: Path) -> bool:
    """Move a file to a name that must be free; False, with nothing changed, when it is not.

    A hard link never replaces a file. Where the file system has none, a look and a rename must do.
    """
    target.parent.mkdir(parents=True, exist_ok=True)
    try:
        os.link(source, target)
    except FileExistsError:
        return False
    except (OSError, NotImplementedError):
        if target.exists():
            return False
        move(source, target)
        return True
    remove(source)
    return True
