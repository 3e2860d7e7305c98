"""Formulas evaluated by LibreOffice."""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path

import openpyxl
import xlsxwriter

NEW_NAMES = re.compile(r"\b(NORM\.S\.DIST|NORM\.S\.INV|GAMMA\.DIST|GAMMA\.INV|BETA\.DIST|BETA\.INV)\(")
ALWAYS_RECALCULATE = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load">
<prop oor:name="OOXMLRecalcMode" oor:op="fuse"><value>0</value></prop></item>
</oor:items>
"""


def missing_office() -> bool:
    """Whether LibreOffice is not installed."""
    return shutil.which("soffice") is None


def evaluated(formulas: list[str], folder: Path) -> list[object]:
    """The values of the formulas as LibreOffice computes them, whatever is stored beside them."""
    book = folder / "formulas.xlsx"
    with xlsxwriter.Workbook(book) as workbook:
        sheet = workbook.add_worksheet()
        for row, formula in enumerate(formulas):
            sheet.write_formula(row, 0, "=" + NEW_NAMES.sub(r"_xlfn.\1(", formula), None, -999)
    settings = folder / "profile" / "user"
    settings.mkdir(parents=True)
    (settings / "registrymodifications.xcu").write_text(ALWAYS_RECALCULATE, encoding="utf-8")
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    into = folder / "out"
    command = ["soffice", profile, "--headless", "--convert-to", "xlsx", "--outdir", str(into), str(book)]
    subprocess.run(command, check=True, capture_output=True, timeout=300)
    sheet = openpyxl.load_workbook(into / book.name, data_only=True).active
    assert sheet is not None
    return [sheet.cell(row=i + 1, column=1).value for i in range(len(formulas))]
