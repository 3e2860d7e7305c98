"""Names of files: which are left alone, how a second one of the same name is called, how they are printed."""

from __future__ import annotations

import re
import sys
from collections.abc import Iterator
from pathlib import PurePath

_OWN_RESULT = re.compile(r"\.(answered\.(xlsx|xlsm|json)|returned\.json)( \(\d+\))?$", re.IGNORECASE)
_TEMPORARY = re.compile(
    r"^[~.]"  # owner files, hidden files, most unfinished downloads
    r"|(\.te?mp|\.part|\.partial|\.crdownload|\.download|\.filepart|\.swp|\.lock|~)$"
    r"|^[0-9a-f]{7,8}$"  # what a spreadsheet writes before it renames
    r"|^(thumbs\.db|desktop\.ini|icon\r)$",
    re.IGNORECASE,
)
_CONFLICT = re.compile(r"conflict(ed)?[ _-]?(copy|\d|of)|[_-]conflict", re.IGNORECASE)

_LONGEST_NAME = 200
"""Bytes of a name that leave room for ' (999).answered.xlsx' within the 255 of common file systems."""


def left_alone(name: str) -> str:
    """Why a file of this name is not taken; "" when it is."""
    if _OWN_RESULT.search(name):
        return "is named like an answer; rename it to have it answered"
    if _TEMPORARY.search(name):
        return "is a temporary file"
    return ""


def is_conflict_copy(name: str) -> bool:
    """Whether a synchronising client seems to have made this second version of a file."""
    return _CONFLICT.search(name) is not None


def lock_names(name: str) -> tuple[str, str]:
    """Names of the lock files that spreadsheet programs keep beside an open file."""
    return f"~${name}", f".~lock.{name}#"


def split(name: str) -> tuple[str, str]:
    """Stem and last suffix of a file name."""
    path = PurePath(name)
    return path.stem, path.suffix


def workable(name: str) -> str:
    """The name, shortened in its stem where results named after it would be too long for the file system."""
    stem, suffix = split(name)
    room = _LONGEST_NAME - len(suffix.encode("utf-8", "surrogateescape"))
    if len(stem.encode("utf-8", "surrogateescape")) <= room:
        return name
    if room < 1:
        stem, suffix, room = name, "", _LONGEST_NAME
    return stem.encode("utf-8", "surrogateescape")[:room].decode("utf-8", "ignore") + suffix


def numbered(stem: str) -> Iterator[str]:
    """The stem, then the stem with (2), (3), ..."""
    yield stem
    for number in range(2, sys.maxsize):
        yield f"{stem} ({number})"


def printable(text: str) -> str:
    """The text on one line and free of control characters, whatever a file is called."""
    plain = text.encode("utf-8", "backslashreplace").decode("utf-8")
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in plain)
