"""The JSON files that the folder itself writes: why a file is returned, and an answer given before."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

from sheetqc import __version__
from sheetqc.assessment import SCHEMA
from sheetqc.folder.claims import Claim
from sheetqc.folder.journal import Entry
from sheetqc.folder.moves import write_whole
from sheetqc.folder.names import printable, split


def returned_report(claim: Claim, into: Path, sha256: str, code: str, reason: str, **more: str) -> Path:
    """Write NAME.returned.json with the reason; `more` are further texts, left out where empty."""
    finding = {"code": code, "level": "stop", "text": reason, "cells": [more["cell"]] if more.get("cell") else []}
    document: dict[str, Any] = {
        "schema": SCHEMA,
        "tool": {"name": "sheetqc", "version": __version__},
        "source": {"name": printable(claim.name), "sha256": sha256, "bytes": claim.file.stat().st_size},
        "reason": reason,
        **{name: text for name, text in more.items() if text and name != "cell"},
        "findings": [finding],
    }
    path = into / f"{split(claim.file.name)[0]}.returned.json"
    write_whole(path, json.dumps(document, ensure_ascii=False, indent=1).encode("utf-8", "backslashreplace"))
    return path


def repeated_answer(claim: Claim, into: Path, root: Path, entry: Entry) -> tuple[Path, Path]:
    """Copies of the workbook and the JSON of an answer given before, named for this file; the JSON says so.

    Raises
    ------
    OSError : when the earlier answer cannot be read or copied now
    """
    stem = split(claim.file.name)[0]
    earlier, report = root / entry.workbook, into / f"{stem}.answered.json"
    workbook = into / f"{stem}.answered{earlier.suffix}"
    shutil.copyfile(earlier, workbook)
    content = (root / entry.report).read_bytes()
    write_whole(report, _retold(content, claim, entry))
    return workbook, report


def _retold(content: bytes, claim: Claim, entry: Entry) -> bytes:
    try:
        document = json.loads(content)
        document["source"]["name"] = printable(claim.name)
        document["same_content_as"] = entry.report
    except (ValueError, LookupError, TypeError):
        return content
    return json.dumps(document, ensure_ascii=False, indent=1).encode("utf-8", "backslashreplace")
