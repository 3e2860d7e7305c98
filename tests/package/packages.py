"""Looking into packages by the standard library alone, so that the product's own reader is not its own judge."""

from __future__ import annotations

import zipfile
from pathlib import Path


def contents(path: Path) -> dict[str, bytes]:
    """Content of every member of an archive."""
    with zipfile.ZipFile(path) as archive:
        assert archive.testzip() is None
        return {info.filename: archive.read(info) for info in archive.infolist()}


def changed(original: Path, copy: Path) -> set[str]:
    """Names of the original's members that are missing or different in a copy."""
    before, after = contents(original), contents(copy)
    return {name for name, content in before.items() if after.get(name) != content}


def rewritten(source: Path, target: Path, changes: dict[str, bytes | None] | None = None) -> Path:
    """A copy of an archive with some members replaced, added or (None) left out."""
    members = contents(source)
    for name, content in (changes or {}).items():
        if content is None:
            members.pop(name)
        else:
            members[name] = content
    return packed(target, members)


def packed(target: Path, members: dict[str, bytes]) -> Path:
    """An archive of some members, in order."""
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in members.items():
            archive.writestr(name, content)
    return target
