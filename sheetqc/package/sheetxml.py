"""A sheet of the additions made fit for the workbook it goes into."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from sheetqc.package.dialect import MAIN
from sheetqc.package.references import renamed
from sheetqc.package.refusals import cannot_graft
from sheetqc.package.strings import SharedStrings
from sheetqc.package.styles import StyleMap
from sheetqc.package.xml import Element, child, local, whole

BETWEEN_DATE_SYSTEMS = 1462  # days from 1899-12-31 to 1904-01-01 as spreadsheets count them
_CELL, _ROW, _COLUMN = f"{{{MAIN}}}c", f"{{{MAIN}}}row", f"{{{MAIN}}}col"
# Elements of sheets, tables, charts and drawings whose text is a formula or a reference.
FORMULAS = frozenset(["f", "formula", "formula1", "formula2", "calculatedColumnFormula", "totalsRowFormula"])
# Attributes that hold one: a link, a text box that shows a cell, a point of a colour scale.
REFERRING = {"hyperlink": "location", "sp": "textlink", "cfvo": "val"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Fitting:
    """What changes on the way from the additions into the copy."""

    styles: StyleMap
    strings: SharedStrings | None  # None: cells go on sharing them
    sheet_names: Mapping[str, str] = field(default_factory=dict)  # new by old, case-folded
    table_names: Mapping[str, str] = field(default_factory=dict)  # new by old, case-folded
    days: int = 0  # added to every number that shows a date
    cell_metadata: int | None = None  # index in the copy, None: cells go without

    def format(self, index: int) -> int:
        """Index in the copy of a cell format of the additions."""
        return self.styles.formats[index] if index < len(self.styles.formats) else 0

    def differential(self, index: int) -> int:
        """Index in the copy of a differential format of the additions."""
        return self.styles.differential[index] if index < len(self.styles.differential) else 0


def fit_sheet(root: Element, fitting: Fitting) -> None:
    """Rewrites a worksheet or chart sheet in place."""
    for view in root.iter(f"{{{MAIN}}}sheetView"):
        view.attrib.pop("tabSelected", "")
    for cell in root.iter(_CELL):
        _fit_cell(cell, fitting)
    for row in root.iter(_ROW):
        _map(row, "s", fitting.format)
    for column in root.iter(_COLUMN):
        column.set("style", str(fitting.format(whole(column.get("style"), 0))))
    fit_differential(root, fitting)
    fit_names(root, fitting)


def fit_differential(root: Element, fitting: Fitting) -> None:
    """Maps the differential formats of conditional formats, filters and tables."""
    for element in root.iter(f"{{{MAIN}}}cfRule", f"{{{MAIN}}}colorFilter", f"{{{MAIN}}}sortCondition"):
        _map(element, "dxfId", fitting.differential)
    for element in root.iter(f"{{{MAIN}}}table", f"{{{MAIN}}}tableColumn"):
        for attribute in element.attrib:
            if str(attribute).endswith("DxfId"):
                _map(element, str(attribute), fitting.differential)


def fit_names(root: Element, fitting: Fitting) -> None:
    """Puts the new names of sheets and tables into every formula and reference of a part."""
    if not fitting.sheet_names and not fitting.table_names:
        return
    for element in root.iter():
        if local(element) in FORMULAS and element.text:
            element.text = renamed(element.text, fitting.sheet_names, fitting.table_names)
        attribute = REFERRING.get(local(element), "")
        if attribute and element.get(attribute):
            element.set(attribute, renamed(element.get(attribute, ""), fitting.sheet_names, fitting.table_names))


def _fit_cell(cell: Element, fitting: Fitting) -> None:
    old = whole(cell.get("s"), 0)
    cell.set("s", str(fitting.format(old)))
    if cell.get("t") == "s" and fitting.strings is not None:
        fitting.strings.tell_inline(cell)
    elif fitting.days and old in fitting.styles.dates:
        _shift(cell, fitting.days)
    if cell.get("cm") is not None:
        if fitting.cell_metadata is None:
            del cell.attrib["cm"]
        else:
            cell.set("cm", str(fitting.cell_metadata))

    if cell.get("vm") is not None:
        raise cannot_graft("pictures inside cells cannot be added", "Place them over the cells.")


def _shift(cell: Element, days: int) -> None:
    value = child(cell, "v")
    if cell.get("t", "n") == "n" and value is not None and value.text:
        value.text = repr(float(value.text) + days).removesuffix(".0")


def _map(element: Element, attribute: str, place: Callable[[int], int]) -> None:
    text = element.get(attribute)
    if text is not None:
        element.set(attribute, str(place(whole(text, 0))))


def uses_cell_metadata(root: Element) -> bool:
    """Whether any cell refers to metadata (formulas that spill do)."""
    return any(cell.get("cm") is not None for cell in root.iter(_CELL))
