"""An earlier answer inside a workbook: found by its marks and left out of the copy."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.package.names import MARK, is_own, marked_sheets
from sheetqc.package.package import ROOT
from sheetqc.package.partname import PartName
from sheetqc.package.references import sheet_of
from sheetqc.package.workbook import Sheet, Workbook
from sheetqc.package.xml import Element, child, children, parsed, whole


@dataclass(frozen=True, slots=True, kw_only=True)
class Removed:
    """What was taken out: names of sheets, ids of relationships, and keys of the parts that nothing else refers to."""

    sheets: tuple[str, ...] = ()
    links: frozenset[str] = frozenset()
    parts: frozenset[str] = frozenset()


def take_out_earlier_answer(book: Workbook) -> Removed:
    """Takes the sheets of an earlier answer out of the lists of a workbook."""
    names = marked_sheets(book)
    if not names:
        return Removed()
    gone = tuple(sheet for sheet in book.sheets if sheet.name in names)
    calculation = _outdated_calculation_chain(book, gone)
    ids = {sheet.relation for sheet in gone} - {sheet.relation for sheet in book.sheets if sheet.name not in names}
    ids |= {calculation} if calculation else set()
    parts = _only_reached_by(book, ids)
    _take_out_sheets(book, frozenset(names))
    book.links.forget(ids)
    return Removed(sheets=names, links=frozenset(ids), parts=parts)


def _only_reached_by(book: Workbook, ids: set[str]) -> frozenset[str]:
    """Keys of the parts (and their lists of relationships) that are reached by nothing but some relationships."""
    package = book.package
    without = frozenset((book.name.key, id_) for id_ in ids)
    starts = [t for link in book.links if link.id in ids and link.target and (t := package.stored(link.target))]
    gone = package.reachable(starts, without) - package.reachable([ROOT], without)
    lists = {PartName(key).relationships.key for key in gone}
    return frozenset(gone | {key for key in lists if package.stored(PartName(key))})


def _take_out_sheets(book: Workbook, names: frozenset[str]) -> None:
    before = [element.get("name", "") for element in book.sheet_elements]
    kept = [index for index, name in enumerate(before) if name not in names]
    places = {old: new for new, old in enumerate(kept)}
    for element in book.sheet_elements:
        if element.get("name", "") in names:
            _drop(element)
    gone = {name.casefold() for name in names}
    for defined in book.defined_names:
        _keep_or_drop(defined, places, gone)
    for view in children(child(book.root, "bookViews"), "workbookView"):
        for attribute in ("activeTab", "firstSheet"):
            if view.get(attribute) is not None:
                view.set(attribute, str(places.get(whole(view.get(attribute), 0), 0)))


def _keep_or_drop(defined: Element, places: dict[int, int], gone: set[str]) -> None:
    place = defined.get("localSheetId")
    if place is not None:
        if whole(place, -1) in places:
            defined.set("localSheetId", str(places[whole(place, -1)]))
        else:
            _drop(defined)
    elif is_own(defined):
        sheet = (sheet_of(defined.text or "") or "").casefold()
        if sheet in gone or defined.get("name", "").casefold().startswith(MARK):
            _drop(defined)


def _outdated_calculation_chain(book: Workbook, gone: tuple[Sheet, ...]) -> str | None:
    """Id of the relationship to the calculation chain when it lists cells of sheets that are taken out.

    The chain may be left out: it is only a plan for recalculating and is made anew. It must not list cells that
    are no longer there.
    """
    link = book.links.by_kind("calcChain")
    part = book.part("calcChain")
    if link is None or part is None:
        return None
    root = parsed(book.package.content(part), part.text)
    ids = {sheet.id for sheet in gone}
    return link.id if any(cell.get("i") in ids for cell in root) else None


def _drop(element: Element) -> None:
    parent = element.getparent()
    if parent is not None:
        parent.remove(element)
