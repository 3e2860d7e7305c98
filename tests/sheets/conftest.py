"""Workbooks of result sheets that several tests look at."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import openpyxl
import pytest
from openpyxl.workbook import Workbook

from sheetqc import package, sheets
from sheetqc.assessment import Answer
from tests.sheets.made import made_answer, sender_workbook
from tests.sheets.samples import every_sample


@dataclass(frozen=True)
class Written:
    """An answer with its workbooks: the new sheets alone, and a copy of the sender's workbook with them."""

    answer: Answer
    names: tuple[str, ...]
    additions: Path
    copy: Path

    stored: Workbook
    formed: Workbook

    def values(self) -> Workbook:
        """The copy with its stored values."""
        return self.stored

    def formulas(self) -> Workbook:
        """The copy with its formulas."""
        return self.formed


@pytest.fixture(scope="session")
def written(tmp_path_factory: pytest.TempPathFactory) -> Written:
    """Every sample answered in one workbook."""
    folder = tmp_path_factory.mktemp("sheets")
    answer, study = made_answer(*every_sample())
    names = sheets.wanted_names(answer)
    sheets.write(answer, study, names, folder / "additions.xlsx")
    sender_workbook(folder / "sent.xlsx", answer)
    package.graft(folder / "sent.xlsx", folder / "additions.xlsx", folder / "copy.xlsx")
    copy = folder / "copy.xlsx"
    return Written(
        answer=answer,
        names=names,
        additions=folder / "additions.xlsx",
        copy=copy,
        stored=openpyxl.load_workbook(copy, data_only=True),
        formed=openpyxl.load_workbook(copy),
    )
