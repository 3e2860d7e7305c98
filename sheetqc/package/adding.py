"""The plan of a graft: which parts of the original have to list the new sheets, and with what."""

from __future__ import annotations

from collections.abc import Iterator

from lxml import etree

from sheetqc.package.additions import NewPart, Transfer, new_table_names, renaming
from sheetqc.package.contenttypes import LIST, METADATA, RELATIONSHIP_LIST, STRINGS, STYLES
from sheetqc.package.dialect import relationship, strict_namespaces
from sheetqc.package.earlier import Removed, take_out_earlier_answer
from sheetqc.package.mentions import mentions_own_names
from sheetqc.package.names import ORDER, mark_sheets, merge_names
from sheetqc.package.partname import PartName
from sheetqc.package.plan import AddedSheet, Plan
from sheetqc.package.refusals import damaged
from sheetqc.package.sheetnames import free_sheet_names
from sheetqc.package.sheetxml import BETWEEN_DATE_SYSTEMS, Fitting
from sheetqc.package.strings import SharedStrings
from sheetqc.package.styles import StyleMap, Styles
from sheetqc.package.workbook import Sheet, Workbook
from sheetqc.package.xml import Element, child, children, ensured, parsed, serialised, whole

EMPTY_STYLES = '<styleSheet xmlns="{0}"/>'
HIGHEST_SHEET_ID = 65_534


class Adding:
    """Gathers what changes while the sheets of one workbook are added to another.

    Parameters
    ----------
    book : the original; its lists are changed in memory only
    extra : the additions
    """

    def __init__(self, book: Workbook, extra: Workbook) -> None:
        self._book = book
        self._extra = extra
        self._new: list[NewPart] = []
        self._styles: tuple[PartName, bytes] | None = None

    def plan(self) -> Plan:
        """What the copy changes against the original."""
        removed = take_out_earlier_answer(self._book)
        recalculated = mentions_own_names(self._book, frozenset(removed.sheets))
        folder = self._free_folder(removed)
        styles = self._add_styles()
        sheets = self._add_sheets(folder, styles)
        if recalculated:
            ensured(self._book.root, "calcPr", ORDER).set("fullCalcOnLoad", "1")
        return Plan(
            replaced=self._replaced(removed),
            left_out=removed.parts,
            added=tuple(self._new),
            sheets=sheets,
            removed_sheets=removed.sheets,
            removed_links=removed.links,
        )

    def _free_folder(self, removed: Removed) -> str:
        taken = self._taken() - removed.parts
        base = f"{self._book.name.folder}/added".lstrip("/")
        number = 1
        while any(key.startswith(f"{_numbered(base, number)}/".lower()) for key in taken):
            number += 1
        return _numbered(base, number)

    def _taken(self) -> set[str]:
        """Keys of parts that are there, or that something says or assumes are there."""
        package = self._book.package
        taken = {m.name.key for m in package.archive.members} | package.types.named
        return taken | {link.target.key for link in self._book.links if link.target}

    def _add_styles(self) -> StyleMap:
        book, extra = self._book, self._extra
        theirs = extra.part("styles")
        if theirs is None:
            raise damaged("the additions have no styles")
        mine = book.part("styles")
        content = book.package.content(mine) if mine else b""
        root = parsed(content, mine.text) if mine else parsed(EMPTY_STYLES.format(book.main).encode(), "styles")
        theme = extra.part("theme")
        found = Styles(root).add(extra.package.root(theirs), extra.package.root(theme) if theme else None)
        written = serialised(root, content) if mine else _document(root)
        if mine:
            self._styles = (mine, written)
        else:
            self._link("styles.xml", "styles", written, STYLES)
        return found

    def _add_sheets(self, folder: str, styles: StyleMap) -> tuple[AddedSheet, ...]:
        book, extra = self._book, self._extra
        kept = len(book.sheet_elements)
        names = free_sheet_names([s.name for s in extra.sheets], [s.name for s in book.sheets])
        new_names = {s.name.casefold(): n for s, n in zip(extra.sheets, names, strict=True) if s.name != n}
        fitting = Fitting(
            styles=styles,
            strings=self._strings(),
            sheet_names=new_names,
            table_names=self._table_names(),
            days=BETWEEN_DATE_SYSTEMS * (extra.date_1904 - book.date_1904),
            cell_metadata=self._cell_metadata(),
        )
        moved = renaming(extra.name.folder, folder)
        transfer = Transfer(extra.package, moved, fitting, strict=book.strict, table_id=self._table_ids().__next__)
        self._new.extend(transfer.parts(tuple(_part(sheet) for sheet in extra.sheets)))
        added = tuple(
            self._list_sheet(sheet, name, moved(_part(sheet))) for sheet, name in zip(extra.sheets, names, strict=True)
        )
        places = {index: kept + index for index in range(len(added))}
        merge_names(book, extra.defined_names, places, new_names)
        mark_sheets(book, names)
        return added

    def _list_sheet(self, sheet: Sheet, name: str, part: PartName) -> AddedSheet:
        book = self._book
        kind = "chartsheet" if "chartsheet" in self._extra.package.types.of(_part(sheet)) else "worksheet"
        sheets = child(book.root, "sheets")
        assert sheets is not None
        element = etree.SubElement(sheets, f"{{{book.main}}}sheet")
        element.set("name", name)
        element.set("sheetId", str(self._free_sheet_id()))
        if sheet.state != "visible":
            element.set("state", sheet.state)
        element.set(book.relation_attribute, book.links.add(relationship(kind, strict=book.strict), part))
        return AddedSheet(name=name, part=part)

    def _free_sheet_id(self) -> int:
        taken = {whole(element.get("sheetId"), 0) for element in self._book.sheet_elements}
        free = max(taken, default=0) + 1
        return free if free <= HIGHEST_SHEET_ID else next(i for i in range(1, HIGHEST_SHEET_ID) if i not in taken)

    def _link(self, leaf: str, kind: str, content: bytes, content_type: str) -> None:
        """Adds a part that the workbook itself refers to, beside it."""
        name = PartName(f"{self._book.name.folder}/{leaf}".lstrip("/"))
        while name.key in self._taken():
            name = PartName(f"{name.text.removesuffix('.xml')}_.xml")
        self._new.append(NewPart(name=name, content=content, content_type=content_type))
        self._book.links.add(relationship(kind, strict=self._book.strict), name)

    def _strings(self) -> SharedStrings | None:
        """The strings that cells have to hold themselves; None where the copy can share them as the additions do."""
        theirs = self._extra.part("sharedStrings")
        if theirs is None:
            return None
        if self._book.links.by_kind("sharedStrings") is not None:
            return SharedStrings(self._extra.package.root(theirs))
        self._link("sharedStrings.xml", "sharedStrings", self._dialect(self._extra.package.content(theirs)), STRINGS)
        return None

    def _dialect(self, content: bytes) -> bytes:
        return strict_namespaces(content) if self._book.strict else content

    def _cell_metadata(self) -> int | None:
        """Index in the copy of the metadata that formulas that spill refer to; None when they go without it."""
        theirs = self._extra.part("sheetMetadata")
        if theirs is None:
            return None
        mine = self._book.part("sheetMetadata")
        if mine is not None:
            return _spilling(self._book.package.root(mine))
        self._link("metadata.xml", "sheetMetadata", self._dialect(self._extra.package.content(theirs)), METADATA)
        return 1

    def _table_roots(self, book: Workbook) -> list[Element]:
        found = []
        for sheet in book.sheets:
            for link in book.package.relationships(sheet.part) if sheet.part else ():
                part = book.package.stored(link.target) if link.kind == "table" and link.target else None
                if part is not None:
                    found.append(book.package.root(part))
        return found

    def _table_names(self) -> dict[str, str]:
        theirs = self._table_roots(self._extra)
        if not theirs:
            return {}
        mine = {root.get("displayName", "").casefold() for root in self._table_roots(self._book)}
        names = {name.get("name", "").casefold() for name in self._book.defined_names}
        return dict(new_table_names(theirs, frozenset(mine | names)))

    def _table_ids(self) -> Iterator[int]:
        highest = max((whole(root.get("id"), 0) for root in self._table_roots(self._book)), default=0)
        while True:
            highest += 1
            yield highest

    def _replaced(self, removed: Removed) -> dict[str, bytes]:
        book, types = self._book, self._book.package.types
        types.forget(PartName(key) for key in removed.parts)
        for part in self._new:
            if part.content_type:
                types.add(part.name, part.content_type)
            elif not types.of(part.name):
                types.add(part.name, RELATIONSHIP_LIST)
        replaced = {LIST.key: types.content(), book.name.key: serialised(book.root, book.content)}
        replaced[book.name.relationships.key] = book.links.content()
        if self._styles is not None:
            replaced[self._styles[0].key] = self._styles[1]
        return replaced


def _numbered(base: str, number: int) -> str:
    return base if number == 1 else f"{base}{number}"


def _part(sheet: Sheet) -> PartName:
    if sheet.part is None:
        raise damaged(f"the additions list the sheet {sheet.name} but do not hold it")
    return sheet.part


def _document(root: Element) -> bytes:
    return etree.tostring(root, xml_declaration=True, encoding="UTF-8", standalone=True)


def _spilling(metadata: Element) -> int | None:
    """Index of the metadata that says that a formula spills, in a workbook that has some already."""
    types = children(child(metadata, "metadataTypes"), "metadataType")
    spilling = next((i for i, t in enumerate(types, start=1) if t.get("name") == "XLDAPR"), None)
    for index, block in enumerate(children(child(metadata, "cellMetadata"), "bk"), start=1):
        if any(whole(record.get("t"), 0) == spilling for record in children(block, "rc")):
            return index
    return None
