"""Shared strings told in the cell itself."""

from __future__ import annotations

import copy

from sheetqc.package.refusals import damaged
from sheetqc.package.xml import Element, child, children, namespace, whole


class SharedStrings:
    """The strings that the sheets of a workbook share."""

    def __init__(self, root: Element | None) -> None:
        self._items = [] if root is None else children(root, "si")

    def tell_inline(self, cell: Element) -> None:
        """Turns a cell that refers to a shared string into one that holds it."""
        value = child(cell, "v")
        index = whole(value.text if value is not None else None, -1)
        if value is None or not 0 <= index < len(self._items):
            raise damaged("a cell of the additions refers to a string that is not there")
        cell.remove(value)
        holder = cell.makeelement(f"{{{namespace(cell)}}}is", None, None)
        holder.extend(copy.deepcopy(part) for part in self._items[index])
        cell.append(holder)
        cell.set("t", "inlineStr")
