"""The sheet Kinds and models of the blank intake workbook, which its lists point to."""

from __future__ import annotations

from typing import Any

from sheetqc import vocabulary
from sheetqc.sheets.blank.look import Look, page

_FIRST = 3
_MODELS = tuple(model for model in vocabulary.MODELS if model)
_NAME = "'Kinds and models'"

KINDS_RANGE = f"={_NAME}!$A${_FIRST + 1}:$A${_FIRST + len(vocabulary.KINDS)}"
MODELS_RANGE = f"={_NAME}!$E${_FIRST + 1}:$E${_FIRST + len(_MODELS)}"


def fill(sheet: Any, look: Look) -> None:
    """Fills the sheet with the words of both lists and what each kind stands for."""
    page(sheet, "Kinds and models")
    sheet.fit_to_pages(1, 1)
    sheet.set_row(0, 26)
    sheet.write(0, 0, "Kinds and models", look.title)
    sheet.set_column(0, 0, 22)
    sheet.set_column(1, 1, 74)
    sheet.set_column(2, 2, 44)
    sheet.set_column(3, 3, 3)
    sheet.set_column(4, 4, 22)
    for column, heading in enumerate(("Kind", "What is known beforehand", "Models considered, first choice first")):
        sheet.write(_FIRST - 1, column, heading, look.optional)
    sheet.write(_FIRST - 1, 4, "Model", look.optional)
    for row, kind in enumerate(vocabulary.KINDS, start=_FIRST):
        sheet.set_row(row, 27)
        sheet.write(row, 0, kind.name, look.row_needed)
        sheet.write(row, 1, kind.reason, look.wrapped)
        sheet.write(row, 2, ", ".join(kind.families), look.wrapped)
    for row, model in enumerate(_MODELS, start=_FIRST):
        sheet.write(row, 4, model, look.label)
    sheet.repeat_rows(0, _FIRST - 1)
