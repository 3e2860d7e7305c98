"""The quick lane through a sheet part: rows of plain cells are read by pattern, all else goes to the parser."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import IO

from sheetqc.intake.ooxml import refuse_document_type

_CELL = (
    rb'<c r="[A-Z]++[0-9]++"(?: s="[0-9]++")?+'
    rb'(?:(?: t="[ns]")?+>(?:<v>[^<&]++</v>)?+</c>|(?: t="[ns]")?+ ?+/>)'
)
_PLAIN_ROW = re.compile(
    rb'<row r="(?P<number>[0-9]++)"(?P<rest>[^<>]*+)>(?:(?<=/>)|(?P<cells>(?:' + _CELL + rb")*+)</row>)"
)
"""A row of which every cell is empty, a number or a shared string; empty formatted rows are such rows too."""

_EMPTY_ROWS = re.compile(
    rb'(?:<row r="[0-9]++"[^<>]*+>(?:(?<=/>)|(?:<c r="[A-Z]++[0-9]++"(?: s="[0-9]++")?+ ?+(?:/>|></c>))*+</row>)\s*+)++'
)
"""Runs of rows that hold formats alone: a sheet may be formatted down to its last row."""

FILLED_CELL = re.compile(rb'<c r="([A-Z]++)[0-9]++"(?: s="([0-9]++)")?+(?: t="([ns])")?+><v>([^<&]++)</v></c>')
"""Column letters, format, type and value of a filled cell in a plain row."""

_CHUNK = 1 << 20
_LONGEST_ROW = 64 << 20

TakeRow = Callable[[int, bytes, bytes], None]
"""Takes a plain row: its number, the rest of its attributes, its cells as bytes."""


class Slimmed:
    """A sheet part as a file for the parser, from which plain rows have been taken."""

    def __init__(self, file: IO[bytes], take: TakeRow) -> None:
        self._file = file
        self._take = take
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
            self._rest = data[cut:]
            slim = self._slimmed(data[:cut])
            if slim:
                return slim
        return b""

    def _slimmed(self, data: bytes) -> bytes:
        if b"<![CDATA[" in data or b"<!--" in data:
            return data
        if b"/></row>" in data or b"></c></row>" in data:
            data = _EMPTY_ROWS.sub(b"", data)
        return _PLAIN_ROW.sub(self._taken, data)

    def _taken(self, match: re.Match[bytes]) -> bytes:
        if match["cells"]:
            self._take(int(match["number"]), match["rest"], match["cells"])
        return b""


def _cut(data: bytes) -> int:
    """Where to end a piece so that no row is torn; a row that never ends is passed on as it is."""
    place = data.rfind(b"<row")
    if place < 0:
        return max(len(data) - 4, 0)
    return place if place > 0 or len(data) < _LONGEST_ROW else len(data)
