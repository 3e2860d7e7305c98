"""A sheet as read: its cells, what is hidden, what is merged."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from sheetqc.finding import Cell
from sheetqc.intake.content import Held, shown


@dataclass(frozen=True, slots=True, kw_only=True)
class Area:
    """A rectangle of cells; rows and columns count from 1, both ends belong to it."""

    top: int
    left: int
    bottom: int
    right: int

    def holds(self, row: int, column: int) -> bool:
        """Whether a cell lies in the rectangle."""
        return self.top <= row <= self.bottom and self.left <= column <= self.right


_TALL = 200
"""Rows above which a merged area is kept in one list instead of at each of its rows."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """A sheet; only cells that hold something are there.

    `uncalculated` lists row and column of the formulas without a stored result.
    """

    name: str
    visible: bool = True
    rows: dict[int, dict[int, Held]] = field(default_factory=dict)
    hidden_rows: frozenset[int] = frozenset()
    hidden_columns: tuple[tuple[int, int], ...] = ()
    merged: tuple[Area, ...] = ()
    uncalculated: tuple[tuple[int, int], ...] = ()
    _merged_on: dict[int, list[Area]] = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        """Sorts merged areas by row, so that thousands of them cost no search; 0 keeps the tall ones."""
        merged_on: dict[int, list[Area]] = {}
        for area in self.merged:
            rows = range(area.top, area.bottom + 1)
            for row in rows if len(rows) <= _TALL else (0,):
                merged_on.setdefault(row, []).append(area)
        object.__setattr__(self, "_merged_on", merged_on)

    def at(self, row: int, column: int) -> Held | None:
        """What a cell holds, None when it is empty."""
        held = self.rows.get(row)
        return None if held is None else held.get(column)

    def text(self, row: int, column: int) -> str:
        """What stands in a cell, in words and without blanks around; "" when it is empty."""
        held = self.at(row, column)
        return "" if held is None else shown(held).strip()

    def cell(self, row: int, column: int) -> Cell:
        """The place of a cell."""
        return Cell(self.name, row, column)

    def row_numbers(self) -> list[int]:
        """Numbers of the rows that hold something, in order."""
        return sorted(self.rows)

    def column_hidden(self, column: int) -> bool:
        """Whether a column is hidden."""
        return any(first <= column <= last for first, last in self.hidden_columns)

    def merge_at(self, row: int, column: int) -> Area | None:
        """The merged area a cell belongs to, None when it stands alone."""
        areas = (*self._merged_on.get(row, ()), *self._merged_on.get(0, ()))
        return next((area for area in areas if area.holds(row, column)), None)

    def spread_text(self, row: int, column: int) -> str:
        """The text of a cell, or of the merged area it belongs to."""
        own = self.text(row, column)
        if own:
            return own
        area = self.merge_at(row, column)
        return "" if area is None else self.text(area.top, area.left)

    def cells(self) -> Iterator[tuple[int, int, Held]]:
        """All cells that hold something, in reading order."""
        for row in self.row_numbers():
            held = self.rows[row]
            for column in sorted(held):
                yield row, column, held[column]
