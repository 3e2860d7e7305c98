"""Defined names of a workbook: those of the additions merged in, those of an earlier answer taken out."""

from __future__ import annotations

import copy
from collections.abc import Iterable, Mapping

from lxml import etree

from sheetqc.package.references import quoted, renamed, sheet_of
from sheetqc.package.refusals import cannot_graft
from sheetqc.package.workbook import Workbook
from sheetqc.package.xml import Element, child, ensured, whole

OWN = "qc."  # what names that belong to an answer begin with
MARK = (
    "qc.sheet."  # hidden names, one for each sheet of an answer; a program that renames or moves the sheet keeps them
)
ORDER = (
    *("fileVersion", "fileSharing", "workbookPr", "workbookProtection", "bookViews", "sheets", "functionGroups"),
    *("externalReferences", "definedNames", "calcPr", "oleSize", "customWorkbookViews", "pivotCaches"),
    *("smartTagPr", "smartTagTypes", "webPublishing", "fileRecoveryPr", "webPublishObjects", "extLst"),
)


def is_own(name: Element) -> bool:
    """Whether a name belongs to an answer (whole workbook, beginning with the own prefix)."""
    return name.get("localSheetId") is None and name.get("name", "").casefold().startswith(OWN)


def marked_sheets(book: Workbook) -> tuple[str, ...]:
    """Names of the sheets that an earlier answer added, in the order of the workbook."""
    marked = {
        (sheet_of(name.text or "") or "").casefold()
        for name in book.defined_names
        if is_own(name) and name.get("name", "").casefold().startswith(MARK)
    }
    return tuple(sheet.name for sheet in book.sheets if sheet.name.casefold() in marked)


def merge_names(book: Workbook, names: Iterable[Element], places: Mapping[int, int], sheets: Mapping[str, str]) -> None:
    """Adds defined names; one of an answer replaces its namesake.

    Parameters
    ----------
    book : the workbook that is added to
    names : elements of the additions, in the transitional dialect
    places : index of a sheet in the copy by its index in the additions
    sheets : new names of the additions' sheets by old ones, case-folded

    Raises
    ------
    CannotGraft : a name that is not of an answer is taken
    """
    there = {_scoped(name): name for name in book.defined_names}
    for name in names:
        made = copy.deepcopy(name)
        place = made.get("localSheetId")
        if place is not None:
            made.set("localSheetId", str(places[whole(place, -1)]))
        made.text = renamed(made.text or "", sheets)
        taken = there.get(_scoped(made))
        if taken is not None:
            if not is_own(taken):
                raise cannot_graft(f"it already uses the name {made.get('name')}")
            _list(book).remove(taken)
        _append(book, made)


def mark_sheets(book: Workbook, sheets: Iterable[str]) -> None:
    """Marks sheets as those of an answer, in place of marks whose sheets are gone."""
    for name in book.defined_names:
        if is_own(name) and name.get("name", "").casefold().startswith(MARK):
            _list(book).remove(name)
    for number, sheet in enumerate(sheets, start=1):
        made = etree.Element(f"{{{book.main}}}definedName")
        made.set("name", f"{MARK}{number}")
        made.set("hidden", "1")
        made.text = f"{quoted(sheet)}!$A$1"
        _append(book, made)


def _append(book: Workbook, name: Element) -> None:
    made = etree.SubElement(
        _list(book), f"{{{book.main}}}definedName", {str(k): str(v) for k, v in name.attrib.items()}
    )
    made.text = name.text


def _list(book: Workbook) -> Element:
    found = child(book.root, "definedNames")
    return ensured(book.root, "definedNames", ORDER) if found is None else found


def _scoped(name: Element) -> tuple[str, str]:
    return name.get("name", "").casefold(), name.get("localSheetId", "")
