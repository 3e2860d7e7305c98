"""LibreOffice as an outside judge: files converted by it, formulas computed again whatever is stored beside them."""

from __future__ import annotations

import shutil
import subprocess
import warnings
from pathlib import Path
from typing import Any

import openpyxl
import pytest

COMPUTE_ALWAYS = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load">
<prop oor:name="OOXMLRecalcMode" oor:op="fuse"><value>0</value></prop></item>
</oor:items>
"""

TOLERANCE = 1e-9
"""Relative difference between a stored and a computed value above which they differ: far above the last digits of a
double, in which two programs' functions may differ, and far below anything shown."""


def office(test: Any) -> Any:
    """Marks a test that needs LibreOffice; it is shown as skipped where there is none."""
    missing = shutil.which("soffice") is None
    return pytest.mark.office(pytest.mark.skipif(missing, reason="LibreOffice (soffice) is not installed")(test))


def converted(books: list[Path], ending: str, folder: Path) -> list[Path]:
    """Workbooks as LibreOffice saves them after computing every formula, in one run of it."""
    settings = folder / "profile" / "user"
    settings.mkdir(parents=True, exist_ok=True)
    (settings / "registrymodifications.xcu").write_text(COMPUTE_ALWAYS, encoding="utf-8")
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    into = folder / "converted"
    names = [str(book) for book in books]
    command = ["soffice", profile, "--headless", "--convert-to", ending, "--outdir", str(into), *names]
    subprocess.run(command, check=True, capture_output=True, timeout=500)
    return [into / f"{book.stem}.{ending}" for book in books]


def differences(stored: Path, computed: Path) -> tuple[int, list[str]]:
    """How many formulas a workbook holds, and those whose stored value is not the computed one."""
    formulas, values, fresh = opened(stored), opened(stored, data_only=True), opened(computed, data_only=True)
    count, wrong = 0, list[str]()
    for sheet in formulas.worksheets:
        for row in sheet.iter_rows():
            for cell in row:
                if cell.data_type != "f":
                    continue
                count += 1
                was = values[sheet.title][cell.coordinate].value
                now = fresh[sheet.title][cell.coordinate].value
                if not same(was, now):
                    wrong.append(f"{sheet.title}!{cell.coordinate}: stored {was!r}, computed {now!r}: {cell.value!r}")
    return count, wrong


def same(stored: object, fresh: object) -> bool:
    """Whether a stored value is the computed one; an empty text is an empty cell."""
    if isinstance(stored, bool) or isinstance(fresh, bool):
        return stored is fresh
    if not isinstance(stored, (int, float)):
        return (stored if stored is not None else "") == (fresh if fresh is not None else "")
    if not isinstance(fresh, (int, float)):
        return False
    return abs(stored - fresh) <= TOLERANCE * max(abs(stored), abs(fresh), 1e-12)


def opened(path: Path, **options: Any) -> Any:
    """A workbook opened by openpyxl, which warns of extensions that it does not keep."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)
        return openpyxl.load_workbook(path, **options)
