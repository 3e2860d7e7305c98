"""Tables of a workbook: where the data of each of their columns stand."""

from __future__ import annotations

from typing import Any

from sheetqc.intake.ooxml import Package, SheetPart, local, parsed
from sheetqc.intake.sheet import Area
from sheetqc.intake.sheetxml import area_of


def column_of(package: Package, parts: tuple[SheetPart, ...], table: str, column: str) -> tuple[str, Area] | None:
    """Sheet name and cells of a table's column, without its heading and totals; None when there is none."""
    for sheet in parts:
        for _, kind, target in package.relations(sheet.part):
            data = package.read(target) if kind == "table" else None
            if data is None:
                continue
            area = _column_area(parsed(data), table.casefold(), column.casefold())
            if area is not None:
                return sheet.name, area
    return None


def _column_area(root: Any, table: str, column: str) -> Area | None:
    names = {root.get("name", "").casefold(), root.get("displayName", "").casefold()}
    area = area_of(root.get("ref", ""))
    if table not in names or area is None:
        return None
    columns = [c for child in root if local(child.tag) == "tableColumns" for c in child]
    for place, found in enumerate(columns):
        if found.get("name", "").casefold() == column:
            heading = 0 if root.get("headerRowCount") == "0" else 1
            totals = 1 if root.get("totalsRowCount", "0") == "1" else 0
            left = area.left + place
            return Area(top=area.top + heading, left=left, bottom=area.bottom - totals, right=left)
    return None
