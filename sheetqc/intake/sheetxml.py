"""The cells of a sheet part, streamed; empty formatted cells are dropped before they are parsed."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from typing import IO, Any

from lxml import etree

from sheetqc.intake.content import Content, Held
from sheetqc.intake.ooxml import Format, local, refuse_document_type, text_of, unescaped
from sheetqc.intake.serials import moment
from sheetqc.intake.sheet import Area, Sheet

_PLAIN = Format()
_EMPTY_CELLS = re.compile(rb"(?:<c\s[^<>]*\br=\"[^<>]*/>|<c\s[^<>]*\br=\"[^<>/]*></c>)+")
_EMPTY_ROWS = re.compile(rb"(?:<row\s[^<>]*\br=\"(?:[^<>]*/>|[^<>/]*>\s*</row>)\s*)+")
_CHUNK = 1 << 20
_LONGEST_ROW = 64 << 20


class Slimmed:
    """A sheet part as a file, without its empty cells and rows."""

    def __init__(self, file: IO[bytes]) -> None:
        self._file = file
        self._rest = b""
        self._started = False
        self._ended = False

    def read(self, size: int = -1) -> bytes:
        """The next piece; of any length, b"" at the end."""
        while not self._ended:
            piece = self._file.read(_CHUNK)
            if not self._started:
                refuse_document_type(piece[:4096])
                self._started = True
            self._ended = not piece
            data = self._rest + piece
            cut = len(data) if self._ended else _cut(data)
            slim = _EMPTY_ROWS.sub(b"", _EMPTY_CELLS.sub(b"", data[:cut]))
            self._rest = data[cut:]
            if slim:
                return slim
        return b""


def _cut(data: bytes) -> int:
    """Where to end a piece so that no row is torn; a row that never ends is passed on as it is."""
    place = data.rfind(b"<row")
    if place < 0:
        return max(len(data) - 4, 0)
    return place if place > 0 or len(data) < _LONGEST_ROW else len(data)


class SheetReader:
    """Reads the rows of one sheet part into a `Sheet`."""

    def __init__(self, strings: Sequence[str], formats: Sequence[Format], epoch_1904: bool) -> None:
        self._strings = strings
        self._formats = formats
        self._epoch_1904 = epoch_1904
        self._letters: dict[str, int] = {}

    def sheet(self, name: str, visible: bool, file: IO[bytes]) -> Sheet:
        """The sheet of a part."""
        rows: dict[int, dict[int, Held]] = {}
        hidden: set[int] = set()
        columns: list[tuple[int, int]] = []
        merged: list[Area] = []
        last = 0
        events = etree.iterparse(
            Slimmed(file),
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
        )

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
        index = int(cell.get("s") or 0)
        looks = self._formats[index] if index < len(self._formats) else _PLAIN
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
        if not math.isfinite(number):
            return Content(nature="error", text=str(number), formula=formula or "")
        if formula is None and looks is _PLAIN:
            return number
        if looks.date:
            return Content(nature="date", number=number, text=moment(number, self._epoch_1904), formula=formula or "")
        if formula is None and not looks.struck and not looks.percent:
            return number
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
