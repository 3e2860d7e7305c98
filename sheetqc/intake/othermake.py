"""Workbooks of another make (.xls, .xlsb, .ods): their values, without formulas, formats or hidden rows."""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Self

from sheetqc.errors import DamagedWorkbook, EncryptedWorkbook
from sheetqc.intake.content import Content, Held
from sheetqc.intake.sheet import Area, Sheet

_ERROR = re.compile(r"#[A-Z/0!?]+[0-9A-Z/!?]*")


class OtherBook:
    """A workbook read through its values alone."""

    def __init__(self, path: Path) -> None:
        import python_calamine

        try:
            self._book = python_calamine.CalamineWorkbook.from_path(str(path))
        except python_calamine.PasswordError:
            raise EncryptedWorkbook(
                "the workbook is protected by a password", advice="Remove the password and send it again.", file=path
            ) from None
        except python_calamine.CalamineError as error:
            raise DamagedWorkbook(
                "the workbook cannot be read", advice="Save it as .xlsx and send it again.", file=path
            ) from error

    def __enter__(self) -> Self:
        return self

    def __exit__(self, *exception: object) -> None:
        self._book.close()

    @property
    def values_only(self) -> bool:
        """Nothing but stored values can be read."""
        return True

    @property
    def names(self) -> dict[str, str]:
        """Defined names are not known in these makes."""
        return {}

    def candidates(self) -> Iterator[Sheet]:
        """All worksheets."""
        for meta in self._book.sheets_metadata:
            if str(meta.typ).endswith("WorkSheet"):
                yield self._read(meta.name, str(meta.visible).endswith("Visible"))

    def sheet(self, name: str) -> Sheet | None:
        """A sheet by name, without regard to case; None when there is none."""
        wanted = name.strip().casefold()
        found = next((n for n in self._book.sheet_names if n.strip().casefold() == wanted), None)
        return None if found is None else self._read(found, True)

    def table_column(self, table: str, column: str) -> tuple[str, Area] | None:
        """Tables are not known in these makes."""
        return None

    def _read(self, name: str, visible: bool) -> Sheet:
        source = self._book.get_sheet_by_name(name)
        rows: dict[int, dict[int, Held]] = {}
        for number, row in enumerate(source.to_python(skip_empty_area=False), start=1):
            held = {column: content for column, value in enumerate(row, 1) if (content := _held(value)) is not None}
            if held:
                rows[number] = held
        merged = tuple(
            Area(top=top + 1, left=left + 1, bottom=bottom + 1, right=right + 1)
            for (top, left), (bottom, right) in source.merged_cell_ranges or ()
        )
        return Sheet(name=name, visible=visible, rows=rows, merged=merged)


def _held(value: object) -> Held | None:
    if isinstance(value, bool):
        return Content(nature="boolean", number=float(value), text="TRUE" if value else "FALSE")
    if isinstance(value, int | float):
        return float(value)
    if isinstance(value, datetime.date | datetime.time | datetime.timedelta):
        return Content(nature="date", text=str(value))
    text = str(value)
    if not text.strip():
        return None
    return Content(nature="error", text=text) if _ERROR.fullmatch(text) else text
