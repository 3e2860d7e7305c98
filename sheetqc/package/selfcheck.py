"""The check of a copy before it is published: nothing lost, only added to, and the new sheets can be reached."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from itertools import zip_longest

from sheetqc.errors import CannotGraft
from sheetqc.package.archive import Archive
from sheetqc.package.contenttypes import LIST
from sheetqc.package.limits import Limits
from sheetqc.package.names import is_own
from sheetqc.package.package import Package
from sheetqc.package.partname import PartName
from sheetqc.package.plan import Plan
from sheetqc.package.refusals import cannot_graft
from sheetqc.package.styles import ORDER as STYLE_LISTS
from sheetqc.package.workbook import Workbook
from sheetqc.package.xml import Element, canonical, child, children, local, parsed, whole

STYLE_PARTS = frozenset(STYLE_LISTS)


def refuse_unfaithful(original: Archive, copy: Archive, plan: Plan) -> None:
    """Compares a copy with its original.

    Raises
    ------
    CannotGraft : the copy has lost or changed something, or a new sheet cannot be reached in it
    """
    _same_members(original, copy, plan)
    before, after = Workbook(Package(original)), Workbook(Package(copy))
    _only_added_to(before, after, plan)
    _old_sheets_where_they_were(before, after, plan)
    _new_sheets_reachable(after, plan)


def _fail(what: str) -> CannotGraft:
    return cannot_graft(f"the copy did not pass its own check ({what})", "Keep the original and report this.")


def _same_members(original: Archive, copy: Archive, plan: Plan) -> None:
    expected = [m for m in original.members if m.name.key not in plan.left_out]
    if [m.raw_name for m in copy.members[: len(expected)]] != [m.raw_name for m in expected]:
        raise _fail("its parts are not those of the original")
    if {m.name.key for m in copy.members[len(expected) :]} != {part.name.key for part in plan.added}:
        raise _fail("its new parts are not those that were added")
    for mine, theirs in zip(expected, copy.members, strict=False):
        if mine.name.key in plan.replaced and not mine.is_folder:
            continue
        if (mine.crc, mine.packed, mine.unpacked, mine.method) != (
            theirs.crc,
            theirs.packed,
            theirs.unpacked,
            theirs.method,
        ):
            raise _fail(f"{mine.name.text} is listed differently")
        if any(a != b for a, b in zip_longest(original.raw(mine), copy.raw(theirs))):
            raise _fail(f"{mine.name.text} differs")


def _only_added_to(before: Workbook, after: Workbook, plan: Plan) -> None:
    """Each rewritten part, with what was added (or taken out) set aside, is what it was."""
    gone = frozenset(plan.removed_sheets)
    new = frozenset(sheet.name for sheet in plan.sheets)
    views = not gone  # the sheet in view may be one that was taken out
    _same(_bare_workbook(before, gone, views=views), _bare_workbook(after, new, views=views), before.name)
    old_parts = {m.name.key for m in before.package.archive.members} - plan.left_out
    _same_entries(
        before.package, after.package, LIST, lambda e: PartName(e.get("PartName", "")).key not in plan.left_out
    )
    lists = before.name.relationships
    _same_entries(before.package, after.package, lists, lambda e: e.get("Id", "") not in plan.removed_links)
    for key in plan.replaced:
        if key not in old_parts:
            raise _fail(f"{key} is not a part of the original")
    styles = before.part("styles")
    if styles is not None:
        _styles_only_longer(before.package.root(styles), after.package.root(styles))


def _same(before: Element, after: Element, name: PartName) -> None:
    if canonical(before) != canonical(after):
        raise _fail(f"{name.text} was not only added to")


def _same_entries(before: Package, after: Package, name: PartName, kept: Callable[[Element], bool]) -> None:
    """The entries of a list that were there before, less those left out, begin the list in the copy."""
    old = [_entry(e) for e in before.root(name) if isinstance(e.tag, str) and kept(e)]
    new = [_entry(e) for e in after.root(name) if isinstance(e.tag, str)]
    if new[: len(old)] != old:
        raise _fail(f"{name.text} was not only added to")


def _entry(element: Element) -> tuple[str, tuple[tuple[str, str], ...]]:
    return local(element), tuple(sorted((str(k), str(v)) for k, v in element.attrib.items()))


def _bare_workbook(book: Workbook, apart_from: frozenset[str], *, views: bool) -> Element:
    """The workbook part without some sheets and what belongs to an answer; places of sheets told by their names."""
    root = parsed(book.content, book.name.text)
    sheets = children(child(root, "sheets"), "sheet")
    names = [sheet.get("name", "") for sheet in sheets]

    def named(text: str | None) -> str:
        place = whole(text, -1)
        return names[place] if 0 <= place < len(names) else str(text)

    for sheet in sheets:
        if sheet.get("name", "") in apart_from:
            _drop(sheet)
    for defined in children(child(root, "definedNames"), "definedName"):
        if defined.get("localSheetId") is not None:
            defined.set("localSheetId", named(defined.get("localSheetId")))
        if is_own(defined) or defined.get("localSheetId", "\0") in apart_from:
            _drop(defined)
    if not views:
        for view in children(child(root, "bookViews"), "workbookView"):
            view.attrib.pop("activeTab", "")
            view.attrib.pop("firstSheet", "")
    _drop_made(root)
    return root


def _drop_made(root: Element) -> None:
    """Takes out what a graft may have made or set beside the sheets and names themselves."""
    calculation = child(root, "calcPr")
    if calculation is not None:
        calculation.attrib.pop("fullCalcOnLoad", "")
    for name in ("definedNames", "calcPr"):
        found = child(root, name)
        if found is not None and not len(found) and not found.attrib:
            _drop(found)
    for element in root.iter():
        if not (element.text or "").strip() or len(element):
            element.text = None
        element.tail = None


def _styles_only_longer(before: Element, after: Element) -> None:
    """Every list of formats begins with what it held before."""
    for old in before:
        name = local(old)
        if not name:
            continue
        new = child(after, name)
        if new is None:
            raise _fail(f"the styles have lost their {name}")
        length = len(old)
        if name in STYLE_PARTS:
            for extra in list(new)[length:]:
                new.remove(extra)
            for each in (old, new):
                each.attrib.pop("count", "")
                each.tail = None
                if not (each.text or "").strip():
                    each.text = None
        if canonical(old) != canonical(new):
            raise _fail(f"the {name} of the styles have changed")


def _old_sheets_where_they_were(before: Workbook, after: Workbook, plan: Plan) -> None:
    old = [(s.name, s.id, s.state, s.part) for s in before.sheets if s.name not in plan.removed_sheets]
    if old != [(s.name, s.id, s.state, s.part) for s in after.sheets][: len(old)]:
        raise _fail("its own sheets are not where they were")


def _new_sheets_reachable(after: Workbook, plan: Plan) -> None:
    listed = {sheet.name: sheet for sheet in after.sheets}
    for sheet in plan.sheets:
        found = listed.get(sheet.name)
        if found is None or found.part is None or found.part.key != sheet.part.key:
            raise _fail(f"the new sheet {sheet.name} cannot be reached")
        if not after.package.types.of(found.part):
            raise _fail(f"nothing says what the new sheet {sheet.name} is")
        for link in after.package.relationships(found.part):
            if (
                link.target is not None
                and not link.reference.startswith("#")
                and after.package.stored(link.target) is None
            ):
                raise _fail(f"the new sheet {sheet.name} refers to a part that is not there")


def _drop(element: Element) -> None:
    parent = element.getparent()
    if parent is not None:
        parent.remove(element)


def limits_for_copy(limits: Limits) -> Limits:
    """The limits under which the copy is read back: those of the original, with room for what was added."""
    return replace(limits, total=2 * limits.total, members=2 * limits.members + 1000, part=2 * limits.part)
