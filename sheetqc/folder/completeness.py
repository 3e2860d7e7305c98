"""Whether a file has arrived whole."""

from __future__ import annotations

import zipfile
from pathlib import Path
from typing import Literal

Completeness = Literal["whole", "other", "unfinished"]
"""whole: a zip package with a readable directory; other: no zip package; unfinished: a part of one, or nothing yet."""

_HEAD = 512
_ZIP = b"PK"


def completeness(path: Path) -> Completeness:
    """How far a file has arrived, judged by its content alone.

    A package has its directory at the end, so that a readable directory tells that the end is there. Programs that
    copy may give a file its size first and leave it blank until the bytes come: a blank head is no content.

    Raises
    ------
    OSError : when it cannot be read now
    """
    with path.open("rb") as stream:
        head = stream.read(_HEAD)
    if not head.strip(b"\0"):
        return "unfinished"
    if not head.startswith(_ZIP):
        return "other"
    try:
        with zipfile.ZipFile(path) as package:
            return "whole" if package.infolist() else "unfinished"
    except OSError:
        raise
    except Exception:
        return "unfinished"
