"""Records for places in a workbook and for what is to be said about them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Level = Literal["note", "caution", "stop"]


def column_letters(column: int) -> str:
    """Letters of a 1-based column number: 1 -> A, 28 -> AB."""
    letters = ""
    while column > 0:
        column, rest = divmod(column - 1, 26)
        letters = chr(65 + rest) + letters
    return letters


@dataclass(frozen=True, slots=True, order=True)
class Cell:
    """A cell of a workbook; row and column count from 1."""

    sheet: str
    row: int
    column: int

    @property
    def address(self) -> str:
        """Such as C12."""
        return f"{column_letters(self.column)}{self.row}"

    @property
    def reference(self) -> str:
        """Absolute and quoted, for use in a formula: 'Run 1'!$C$12."""
        return f"{quoted(self.sheet)}!${column_letters(self.column)}${self.row}"

    def __str__(self) -> str:
        return f"{quoted(self.sheet)}!{self.address}"


def quoted(sheet: str) -> str:
    """A sheet name as formulas need it; always quoted, since a name may look like an address."""
    return "'" + sheet.replace("'", "''") + "'"


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """Something to be told to the reader, with the cells it is about.

    `code` is a stable word for programs, `level` says how much it weighs (note, caution, stop),
    `text` is a full sentence for people: what was met, what it means, what to do.
    """

    code: str
    level: Level
    text: str
    cells: tuple[Cell, ...] = ()

    def to_dict(self) -> dict[str, object]:
        """The finding as it stands in the JSON answer."""
        return {"code": self.code, "level": self.level, "text": self.text, "cells": [str(c) for c in self.cells]}
