"""Blocks of a sheet: where each tag stands and which cells belong to it."""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import islice

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.content import is_text, shown
from sheetqc.intake.sheet import Sheet

LAST_ROW = 1 << 20
LAST_COLUMN = 1 << 14


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """The cells below a tag: rows `top` to `bottom`, columns `left` to `right`, all inclusive.

    `first` is the first filled row, 0 when there is none; `filled` numbers the rows that hold something in the block's
    columns, in order.
    """

    tag: str
    sheet: Sheet
    at: Cell
    top: int
    bottom: int
    left: int
    right: int
    first: int = 0
    filled: tuple[int, ...] = ()

    @property
    def name(self) -> str:
        """The tag without its prefix, by which the vocabulary knows it."""
        return self.tag.partition(":")[2]

    def columns(self, row: int) -> list[int]:
        """Columns of the block that hold something in a row, in order."""
        return sorted(c for c in self.sheet.rows.get(row, ()) if self.left <= c <= self.right)


Tag = tuple[int, int, str]


def blocks_of(sheet: Sheet) -> list[Block]:
    """The blocks of a sheet, in reading order."""
    tags = tags_of(sheet)
    numbers = sheet.row_numbers() if tags else []
    open_ended = [_with_columns(sheet, numbers, tags, tag) for tag in tags]
    ended = [replace(block, bottom=_bottom(block, open_ended)) for block in open_ended]
    return [replace(block, filled=_filled(block, numbers)) for block in ended]


def tags_of(sheet: Sheet) -> list[Tag]:
    """Row, column and tag of every cell that holds one, in reading order."""
    return sorted(
        (row, column, tag)
        for row, held in sheet.rows.items()
        for column, content in held.items()
        if content.__class__ is not float
        and is_text(content)
        and (tag := vocabulary.tag_of(shown(content))) is not None
    )


def _filled(block: Block, numbers: Sequence[int]) -> tuple[int, ...]:
    inside = numbers[bisect_left(numbers, block.top) : bisect_right(numbers, block.bottom)]
    columns = range(block.left, block.right + 1)
    return tuple(n for n in inside if any(c in columns for c in block.sheet.rows[n]))


def _with_columns(sheet: Sheet, numbers: Sequence[int], tags: Sequence[Tag], tag: Tag) -> Block:
    """The block of a tag with its columns: to the right, the next tag's column ends it."""
    row, column, name = tag
    below = (n for n in numbers[bisect_right(numbers, row) :] if any(c >= column for c in sheet.rows[n]))
    filled = list(islice(below, 3))
    first = filled[0] if filled else row + 1
    reach = _text_run(sheet, first, column)
    right_of_it = [(r, c) for r, c, _ in tags if c > column and r <= first and (r >= row or c > reach)]
    right = min((c for _, c in right_of_it), default=LAST_COLUMN + 1) - 1
    width = _width(sheet, tags, filled, column, right)
    later = [c for r, c, _ in tags if r > first and width < c <= right]
    return Block(
        tag=name,
        sheet=sheet,
        at=sheet.cell(row, column),
        top=row + 1,
        bottom=LAST_ROW,
        left=column,
        first=filled[0] if filled else 0,
        right=min(later, default=right + 1) - 1,
    )


def _width(sheet: Sheet, tags: Sequence[Tag], rows: Sequence[int], left: int, right: int) -> int:
    """The last filled column of the first rows, as far as no other tag stands in them."""
    width = left
    for row in rows:
        if any(r == row and left <= c <= right for r, c, _ in tags):
            break
        width = max([width, *(c for c in sheet.rows[row] if left <= c <= right)])
    return width


def _text_run(sheet: Sheet, row: int, column: int) -> int:
    """The last column of the unbroken run of texts in a row that begins at a column."""
    while is_text(sheet.at(row, column + 1)):
        column += 1
    return column


def _bottom(block: Block, blocks: Sequence[Block]) -> int:
    """The row before the next block below: one that begins in the block's columns, or reaches into them."""
    below = [
        other.at.row
        for other in blocks
        if other.at.row > block.at.row and other.at.column <= block.right and _reach(other) >= block.left
    ]
    return min(below, default=LAST_ROW + 1) - 1


def _reach(block: Block) -> int:
    """The last column of the unbroken run of texts in the block's first row."""
    first = block.first
    return min(_text_run(block.sheet, first, block.left), block.right) if first else block.left
