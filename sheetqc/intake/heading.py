"""The heading row of a block, one or two rows high."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Callable
from dataclasses import dataclass

from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.content import is_text
from sheetqc.intake.units import is_unit, unit_key

_WITH_UNITS = ("measurements", "gauge")
_LOOKED_AT = 8
"""Rows below a tag in which its headings are looked for."""


@dataclass(frozen=True, slots=True, kw_only=True)
class HeadingRow:
    """The headings of a block.

    `first` and `last` row, the text of each column, the lower text of two rows, and
    the units that a row below them gives.
    """

    block: Block
    first: int
    last: int
    texts: dict[int, str]
    lower: dict[int, str]
    units: dict[int, str]

    def cell(self, column: int) -> Cell:
        """The cell a column's heading stands in."""
        row = self.last - bool(self.units)
        own = self.block.sheet.text(row, column)
        return self.block.sheet.cell(row if own else self.first, column)

    def upper(self, column: int) -> str:
        """The text of a column in the first heading row, or of the merged area it belongs to."""
        return self.block.sheet.spread_text(self.first, column)

    def data_rows(self) -> list[int]:
        """Numbers of the filled rows below the headings."""
        return list(self.block.filled[bisect_right(self.block.filled, self.last) :])


def heading_row(block: Block, known: Callable[[str], bool]) -> HeadingRow | None:
    """The heading row of a block: the first row below the tag with a known heading; None when there is none.

    Parameters
    ----------
    block : the block
    known : whether a text is a heading that the block may have
    """
    rows = block.filled
    for place, row in enumerate(rows[:_LOOKED_AT]):
        texts = _texts(block, row)
        if not any(known(text) for text in texts.values()):
            continue
        following = rows[place + 1] if place + 1 < len(rows) else None
        lower = _texts(block, following) if following is not None and following == row + 1 else {}
        if following is not None and _completes(block, row, following, texts, lower, known):
            joined = {c: _joined(texts.get(c, ""), lower.get(c, ""), known) for c in {*texts, *lower}}
            return _found(block, row, following, joined, lower)
        return _found(block, row, row, texts, {})
    return None


def _found(block: Block, first: int, last: int, texts: dict[int, str], lower: dict[int, str]) -> HeadingRow:
    """The headings, with a row of nothing but units directly below them taken in."""
    units: dict[int, str] = {}
    below = block.columns(last + 1) if last < block.bottom else []
    if block.name in _WITH_UNITS and below and all(_is_unit_cell(block, last + 1, c) for c in below):
        units = {c: unit_key(block.sheet.text(last + 1, c)) for c in below}
        last += 1
    return HeadingRow(block=block, first=first, last=last, texts=texts, lower=lower, units=units)


def _is_unit_cell(block: Block, row: int, column: int) -> bool:
    return is_text(block.sheet.at(row, column)) and is_unit(block.sheet.text(row, column))


def _texts(block: Block, row: int) -> dict[int, str]:
    """The texts of a row by column, spread over merged areas."""
    texts = {column: block.sheet.text(row, column) for column in block.columns(row)}
    for area in block.sheet.merged:
        if area.top <= row <= area.bottom and area.left <= block.right and area.right >= block.left:
            text = block.sheet.text(area.top, area.left)
            if text and area.top >= block.top:
                for column in range(max(area.left, block.left), min(area.right, block.right) + 1):
                    texts.setdefault(column, text)
    return texts


def _completes(
    block: Block, row: int, below: int, texts: dict[int, str], lower: dict[int, str], known: Callable[[str], bool]
) -> bool:
    """Whether the row below is a second row of headings: words only, and some stand for what the first leaves open."""
    if not lower or not all(is_text(block.sheet.at(below, c)) for c in block.columns(below)):
        return False
    for column, text in lower.items():
        above = texts.get(column, "")
        spans = block.sheet.merge_at(row, column)
        if known(text) and not known(above) and text != above:
            return True
        if above and spans is not None and spans.right > spans.left and spans.bottom < below:
            return True
    return False


def _joined(upper: str, lower: str, known: Callable[[str], bool]) -> str:
    if known(lower) or not upper:
        return lower
    return upper if known(upper) or not lower or upper == lower else f"{upper} {lower}"
