"""Formulas without stored results, computed where they are simple."""

from __future__ import annotations

from dataclasses import replace

from sheetqc.intake.book import Book
from sheetqc.intake.content import Content, Held, nature
from sheetqc.intake.formula import NotSimple, Value, computed
from sheetqc.intake.sheet import Area, Sheet

_DEEPEST = 50
_MOST_CELLS = 100_000


class Calculation:
    """Computes simple formulas of one workbook; what is not simple stays as it is."""

    def __init__(self, book: Book) -> None:
        self._book = book
        self._sheets: dict[str, Sheet | None] = {}
        self._known: dict[tuple[str, int, int], Value] = {}
        self._depth = 0
        self._budget = _MOST_CELLS

    def calculated(self, sheet: Sheet) -> Sheet:
        """The sheet with its simple formulas computed."""
        self._sheets[_folded(sheet.name)] = sheet
        rows = dict(sheet.rows)
        for row, column in sheet.uncalculated:
            held = sheet.rows[row][column]
            new = self._content(sheet, row, column, held) if isinstance(held, Content) else held
            if rows[row] is sheet.rows[row]:
                rows[row] = dict(rows[row])
            if new is None:
                del rows[row][column]
            else:
                rows[row][column] = new
        return replace(sheet, rows={n: cells for n, cells in rows.items() if cells}) if sheet.uncalculated else sheet

    def _content(self, sheet: Sheet, row: int, column: int, held: Content) -> Held | None:
        try:
            value = self._value(sheet, row, column)
        except NotSimple:
            return held
        if value is None or (isinstance(value, str) and not value.strip()):
            return None
        if isinstance(value, bool):
            return Content(nature="boolean", number=float(value), text=str(value).upper(), formula=held.formula)
        if isinstance(value, str):
            return Content(nature="text", text=value, formula=held.formula, computed=True)
        return Content(nature="number", number=value, formula=held.formula, computed=True)

    def _value(self, sheet: Sheet, row: int, column: int) -> Value:
        place = (_folded(sheet.name), row, column)
        if place in self._known:
            return self._known[place]
        held = sheet.at(row, column)
        value = _stored(held)
        if isinstance(held, Content) and held.nature == "uncalculated":
            value = self._computed(sheet, held.formula)
        self._known[place] = value
        return value

    def _computed(self, sheet: Sheet, formula: str) -> Value:
        if self._depth >= _DEEPEST or self._budget <= 0 or len(formula) < 2:
            raise NotSimple
        self._depth += 1
        try:
            return computed(formula, lambda name, area: self._looked_up(name, area, sheet))
        finally:
            self._depth -= 1

    def _looked_up(self, name: str, area: Area, own: Sheet) -> list[Value]:
        sheet = self._sheet(name) if name else own
        cells = (area.bottom - area.top + 1) * (area.right - area.left + 1)
        self._budget -= cells
        if sheet is None or self._budget < 0:
            raise NotSimple
        return [
            self._value(sheet, row, column)
            for row in range(area.top, area.bottom + 1)
            for column in range(area.left, area.right + 1)
        ]

    def _sheet(self, name: str) -> Sheet | None:
        key = _folded(name)
        if key not in self._sheets:
            self._sheets[key] = self._book.sheet(name)
        return self._sheets[key]


def _folded(name: str) -> str:
    return name.strip().casefold()


def _stored(held: Held | None) -> Value:
    """The value of a cell that needs no computing."""
    if held is None or isinstance(held, float | str):
        return held
    if nature(held) == "error":
        raise NotSimple
    if held.nature == "boolean":
        return bool(held.number)
    return held.number if held.number is not None else held.text
