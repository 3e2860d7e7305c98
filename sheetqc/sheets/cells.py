"""Cells that are written with their values, and how later formulas refer to them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from xlsxwriter.format import Format
from xlsxwriter.worksheet import CellFormulaTuple, Worksheet

from sheetqc.finding import Cell, column_letters, quoted
from sheetqc.sheets.formats import Formats

Value = float | int | str

NA = "#N/A"
"""Stored value of NA(): a point that a chart does not draw."""

NONE = "–"
"""What stands in a cell where there is no number to give."""


class FastWorksheet(Worksheet):  # type: ignore[misc]
    """A worksheet that takes formulas as they are.

    The writer looks through every formula for functions to prefix; here templates carry their prefixes already.
    """

    def stored_formula(self, row: int, column: int, formula: str, cell_format: Format | None, value: Value) -> None:
        """Writes a formula with the value it gives; without a leading "="."""
        if self._check_dimensions(row, column):
            raise ValueError(f"there is no cell in row {row + 1}, column {column + 1}")
        self.table[row][column] = CellFormulaTuple(formula, cell_format, shortened(value))


@dataclass(frozen=True, slots=True)
class Placed:
    """A written cell; row and column count from 0."""

    row: int
    column: int
    value: Value | None

    @property
    def ref(self) -> str:
        """Absolute reference on its own sheet."""
        return f"${column_letters(self.column + 1)}${self.row + 1}"

    @property
    def number(self) -> float:
        """The value, known to be a number."""
        if isinstance(self.value, (int, float)):
            return self.value
        raise TypeError(f"{self.ref} holds {self.value!r}, no number")

    @property
    def is_number(self) -> bool:
        """Whether a formula finds a number here."""
        return isinstance(self.value, (int, float))


@dataclass(frozen=True, slots=True)
class Column:
    """Written cells below one another; row and column count from 0."""

    row: int
    column: int
    values: tuple[Value, ...]

    @property
    def ref(self) -> str:
        """Absolute reference of all of them on their own sheet."""
        letters = column_letters(self.column + 1)
        return f"${letters}${self.row + 1}:${letters}${self.row + len(self.values)}"

    @property
    def span(self) -> tuple[int, int, int, int]:
        """First row, first column, last row, last column."""
        return self.row, self.column, self.row + len(self.values) - 1, self.column

    def at(self, index: int) -> Placed:
        """One of them, counted from 0."""
        return Placed(self.row + index, self.column, self.values[index])

    def part(self, first: int, count: int) -> Column:
        """Some of them, counted from 0."""
        return Column(self.row + first, self.column, self.values[first : first + count])


class Pen:
    """Writes cells of one sheet and says where they stand.

    Parameters
    ----------
    sheet : the sheet
    name : its name
    formats : formats of the workbook
    """

    def __init__(self, sheet: FastWorksheet, name: str, formats: Formats) -> None:
        self.sheet = sheet
        self.name = name
        self.formats = formats

    def text(self, row: int, column: int, text: str, style: str = "plain") -> Placed:
        """A text, never taken for a formula, number or link."""
        self.sheet.write_string(row, column, text, self.formats(style))
        return Placed(row, column, text)

    def number(self, row: int, column: int, value: float, style: str = "plain", number_format: str = "") -> Placed:
        """A number."""
        self.sheet.write_number(row, column, value, self.formats(style, number_format))
        return Placed(row, column, value)

    def formula(
        self, row: int, column: int, formula: str, value: Value, style: str = "plain", number_format: str = ""
    ) -> Placed:
        """A formula with the value it gives."""
        self.sheet.stored_formula(row, column, formula, self.formats(style, number_format), plain(value))
        return Placed(row, column, plain(value))

    def link(self, row: int, column: int, cell: Cell, text: str, style: str = "link") -> None:
        """A link to a cell of the workbook."""
        self.sheet.write_url(row, column, f"internal:{quoted(cell.sheet)}!{cell.address}", self.formats(style), text)

    def blank(self, row: int, column: int, style: str) -> None:
        """An empty cell with a look."""
        self.sheet.write_blank(row, column, None, self.formats(style))

    def numbers(self, row: int, column: int, values: Sequence[float], number_format: str = "") -> Column:
        """Numbers below one another."""
        look = self.formats("small", number_format)
        for index, value in enumerate(values):
            self.sheet.write_number(row + index, column, value, look)
        return Column(row, column, tuple(values))

    def formulas(
        self, row: int, column: int, formulas: Sequence[str], values: Sequence[Value], number_format: str = ""
    ) -> Column:
        """Formulas below one another."""
        look = self.formats("small", number_format)
        given = tuple(plain(value) for value in values)
        for index, (formula, value) in enumerate(zip(formulas, given, strict=True)):
            self.sheet.stored_formula(row + index, column, formula, look, value)
        return Column(row, column, given)


def plain(value: Value) -> Value:
    """A value of a plain type: what numpy gives is no plain float."""
    if isinstance(value, str) or type(value) is int:
        return value
    return float(value)


def shortened(value: Value) -> Value:
    """A stored value with eleven digits: enough to compare, and a third of the bytes of a long one less."""
    return float(f"{value:.11g}") if type(value) is float else value


def cut(value: float) -> float:
    """A number cut off after two decimals, as `expressions.cut_off` gives it."""
    return math.floor(value * 100 + 1e-9) / 100
