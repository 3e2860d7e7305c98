"""The ground right of the page on which the workings stand, block beside block."""

from __future__ import annotations

from sheetqc.sheets import layout
from sheetqc.sheets.cells import Pen

TITLES, HEADS, FIRST = 0, 1, 2
"""Rows of a block: its title, its column heads, its first row of content."""

WIDTH = 74
SPACE = 20


class Ground:
    """Gives out columns from left to right.

    Parameters
    ----------
    pen : writes the sheet
    """

    def __init__(self, pen: Pen) -> None:
        self._pen = pen
        self._next = layout.WORKINGS

    def block(self, title: str, heads: tuple[str, ...], widths: tuple[int, ...] = ()) -> int:
        """First column of a new block with a title and column heads; a narrow empty column follows it.

        Parameters
        ----------
        title, heads : texts
        widths : in pixels, the usual one where none is given
        """
        first = self._next
        self._pen.text(TITLES, first, title, "strong")
        for index, head in enumerate(heads):
            self._pen.text(HEADS, first + index, head, "head_wrapped")
            width = widths[index] if index < len(widths) else WIDTH
            self._pen.sheet.set_column_pixels(first + index, first + index, width)
        self._next = first + len(heads) + 1
        self._pen.sheet.set_column_pixels(self._next - 1, self._next - 1, SPACE)
        return first
