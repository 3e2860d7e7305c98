"""The cells of a sheet part, streamed; empty formatted cells are dropped before they are parsed."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from typing import IO, Any

from lxml import etree

from sheetqc.errors import DamagedWorkbook
from sheetqc.intake.content import Content, Held
from sheetqc.intake.ooxml import Format, local, text_of, unescaped
from sheetqc.intake.serials import moment
from sheetqc.intake.sheet import Area, Sheet
from sheetqc.intake.slimming import FILLED_CELL, Slimmed

_PLAIN = Format()


class SheetReader:
    """Reads the rows of one sheet part into a `Sheet`."""

    def __init__(self, strings: Sequence[str], formats: Sequence[Format], epoch_1904: bool) -> None:
        self._strings = strings
        self._formats = formats
        self._epoch_1904 = epoch_1904
        self._letters: dict[str, int] = {}
        self._bytes_letters: dict[bytes, int] = {}
        self._uncalculated: list[tuple[int, int]] = []

    def sheet(self, name: str, visible: bool, file: IO[bytes]) -> Sheet:
        """The sheet of a part."""
        try:
            return self._sheet(name, visible, file)
        except (ValueError, IndexError, TypeError) as error:
            raise DamagedWorkbook(
                f"the sheet '{name}' holds something that cannot be read", advice="Save the workbook again."
            ) from error

    def _sheet(self, name: str, visible: bool, file: IO[bytes]) -> Sheet:
        rows: dict[int, dict[int, Held]] = {}
        hidden: set[int] = set()
        self._uncalculated = []
        columns: list[tuple[int, int]] = []
        merged: list[Area] = []
        last = 0
        events = etree.iterparse(
            Slimmed(file, lambda number, rest, cells: self._plain_row(number, rest, cells, rows, hidden)),
            events=("end",),
            tag=("{*}row", "{*}col", "{*}mergeCell"),
            resolve_entities=False,
            no_network=True,
            load_dtd=False,
            huge_tree=False,
            remove_comments=True,
            remove_pis=True,
        )
        for _, element in events:
            kind = local(element.tag)
            if kind == "row":
                last = self._row(element, last, rows, hidden)
                _forget(element)
            elif kind == "col" and _true(element.get("hidden")):
                columns.append((int(element.get("min", "0")), int(element.get("max", "0"))))
            elif kind == "mergeCell" and (area := area_of(element.get("ref", ""))) is not None:
                merged.append(area)
        return Sheet(
            name=name,
            visible=visible,
            rows=rows,
            hidden_rows=frozenset(hidden),
            hidden_columns=tuple(columns),
            merged=tuple(merged),
            uncalculated=tuple(self._uncalculated),
        )

    def _plain_row(
        self, number: int, rest: bytes, cells: bytes, rows: dict[int, dict[int, Held]], hidden: set[int]
    ) -> None:
        held: dict[int, Held] = {}
        for letters, look, kind, value in FILLED_CELL.findall(cells):
            column = self._bytes_letters.get(letters) or self._new_letters(letters)
            looks = self._looks(look)
            if kind == b"s":
                content = self._text(self._strings[int(value)], None, looks)
                if content is not None:
                    held[column] = content
            else:
                held[column] = self._number(float(value), None, looks)
        if held:
            rows[number] = held
            if b'hidden="1"' in rest or b'hidden="true"' in rest:
                hidden.add(number)

    def _new_letters(self, letters: bytes) -> int:
        column = self._bytes_letters[letters] = column_number(letters.decode())
        return column

    def _looks(self, index: bytes | str | None) -> Format:
        number = int(index) if index else 0
        return self._formats[number] if number < len(self._formats) else _PLAIN

    def _row(self, element: Any, last: int, rows: dict[int, dict[int, Held]], hidden: set[int]) -> int:
        number = int(element.get("r") or last + 1)
        held: dict[int, Held] = {}
        column = 0
        for cell in element:
            reference = cell.get("r")
            column = self._column(reference) if reference else column + 1
            content = self._content(cell)
            if content is not None:
                held[column] = content
                if isinstance(content, Content) and content.nature == "uncalculated":
                    self._uncalculated.append((number, column))
        if held:
            rows[number] = held
            if _true(element.get("hidden")):
                hidden.add(number)
        return number

    def _column(self, reference: str) -> int:
        letters = reference.rstrip("0123456789")
        column = self._letters.get(letters)
        if column is None:
            column = self._letters[letters] = column_number(letters)
        return column

    def _content(self, cell: Any) -> Held | None:
        value: str | None = None
        stored = False
        formula: str | None = None
        inline = ""
        for child in cell:
            name = child.tag[-1]
            if name == "v":
                value, stored = child.text, True
            elif name == "f":
                formula = "=" + (child.text or "")
            elif name == "s" and local(child.tag) == "is":
                inline = text_of(child)
        kind = cell.get("t", "n")
        looks = self._looks(cell.get("s"))
        if kind == "inlineStr" or (value is None and inline):
            return self._text(inline, formula, looks)
        if value is None:
            nothing = formula is None or (stored and kind == "str")
            return None if nothing else Content(nature="uncalculated", text=formula or "", formula=formula or "")
        return self._valued(kind, value, formula, looks)

    def _valued(self, kind: str, value: str, formula: str | None, looks: Format) -> Held | None:
        if kind == "n":
            return self._number(float(value), formula, looks)
        if kind == "s":
            return self._text(self._strings[int(value)], formula, looks)
        if kind == "str":
            return self._text(unescaped(value), formula, looks)
        if kind == "b":
            true = value.strip() in ("1", "true")
            return Content(
                nature="boolean", number=float(true), text="TRUE" if true else "FALSE", formula=formula or ""
            )
        if kind == "e":
            return Content(nature="error", text=value, formula=formula or "")
        return Content(nature="date", text=value, formula=formula or "")

    def _text(self, text: str, formula: str | None, looks: Format) -> Held | None:
        if not text.strip():
            return None
        if formula is None and not looks.struck:
            return text
        return Content(nature="text", text=text, formula=formula or "", struck=looks.struck)

    def _number(self, number: float, formula: str | None, looks: Format) -> Held:
        if formula is None and not looks.marked:
            if math.isfinite(number):
                return number
            return Content(nature="error", text=str(number))
        if looks.date:
            return Content(nature="date", number=number, text=moment(number, self._epoch_1904), formula=formula or "")
        return Content(
            nature="number", number=number, formula=formula or "", struck=looks.struck, percent=looks.percent
        )


def _forget(element: Any) -> None:
    element.clear()
    parent = element.getparent()
    while element.getprevious() is not None:
        del parent[0]


def _true(text: str | None) -> bool:
    return text in ("1", "true")


def column_number(letters: str) -> int:
    """The number of a column from its letters: A -> 1, AB -> 28."""
    number = 0
    for letter in letters.upper():
        number = number * 26 + ord(letter) - 64
    return number


_REFERENCE = re.compile(r"\$?([A-Za-z]{1,3})\$?([0-9]{1,7})(?::\$?([A-Za-z]{1,3})\$?([0-9]{1,7}))?")


def area_of(reference: str) -> Area | None:
    """The rectangle of a reference such as B2:D5 or B2; None when it is not one."""
    match = _REFERENCE.fullmatch(reference.strip())
    if match is None:
        return None
    left, top = column_number(match[1]), int(match[2])
    right, bottom = (column_number(match[3]), int(match[4])) if match[3] else (left, top)
    return Area(top=min(top, bottom), left=min(left, right), bottom=max(top, bottom), right=max(left, right))
