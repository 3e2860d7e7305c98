"""Findings gathered while a workbook is read, and the words for places in them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from sheetqc.finding import Cell, Finding, Level, column_letters

MOST_PLACES = 12
"""Places named in a sentence; the finding itself carries them all."""


class Doubts:
    """Gathers findings of the study and of single characteristics."""

    def __init__(self) -> None:
        self._study: list[Finding] = []
        self._of: list[tuple[str, Finding]] = []

    def add(self, code: str, level: Level, text: str, cells: Iterable[Cell] = (), *, of: str | None = None) -> None:
        """Adds a finding, about the characteristic `of` when one is named."""
        finding = Finding(code=code, level=level, text=text, cells=tuple(cells))
        if of is None:
            self._study.append(finding)
        else:
            self._of.append((of, finding))

    @property
    def study(self) -> tuple[Finding, ...]:
        """Findings of the study as a whole, the weightiest first."""
        return tuple(sorted(self._study, key=lambda f: _WEIGHT[f.level]))

    @property
    def of_characteristics(self) -> tuple[tuple[str, Finding], ...]:
        """Findings of single characteristics, each with its Id, in the order they came up."""
        return tuple(self._of)


_WEIGHT: dict[Level, int] = {"stop": 0, "caution": 1, "note": 2}


def places(cells: Sequence[Cell]) -> str:
    """Cells in words, runs of a column joined: "'Run 1'!C12:C14, C20 and 3 more"."""
    pieces = list(_runs(cells))
    named = pieces[:MOST_PLACES]
    sheet = ""
    words: list[str] = []
    for first, last in named:
        address = first.address if first == last else f"{first.address}:{last.address}"
        words.append(address if first.sheet == sheet else f"{str(first).rpartition('!')[0]}!{address}")
        sheet = first.sheet
    left = len(pieces) - len(named)
    return ", ".join(words) + (f" and {left} more places" if left else "")


def _runs(cells: Sequence[Cell]) -> Iterator[tuple[Cell, Cell]]:
    ordered = sorted(set(cells), key=lambda c: (c.sheet, c.column, c.row))
    start: Cell | None = None
    end: Cell | None = None
    for cell in ordered:
        if end is not None and (cell.sheet, cell.column, cell.row) == (end.sheet, end.column, end.row + 1):
            end = cell
            continue
        if start is not None and end is not None:
            yield start, end
        start = end = cell
    if start is not None and end is not None:
        yield start, end


def column_name(sheet: str, column: int) -> str:
    """A column in words: "column C of sheet 'Run 1'"."""
    return f"column {column_letters(column)} of sheet '{sheet}'"


def counted(count: int, noun: str) -> str:
    """A count with its noun: 1 cell, 2 cells."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def listed(words: Sequence[str], most: int = 12) -> str:
    """Words in a row: "a, b and c"; shortened when there are many."""
    shown = list(words[:most])
    if len(words) > most:
        return f"{', '.join(shown)} and {len(words) - most} more"
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} and {shown[-1]}" if shown else ""
