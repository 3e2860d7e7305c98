"""The workbook inside a package: its sheets, defined names and dialect, found through relationships."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from lxml import etree

from sheetqc.package.archive import opened
from sheetqc.package.contenttypes import WORKBOOK_KINDS
from sheetqc.package.dialect import MAIN, RELATION, STRICT_MAIN, STRICT_RELATION
from sheetqc.package.filekind import archive_kind, container
from sheetqc.package.limits import DEFAULT_LIMITS, Limits
from sheetqc.package.package import ROOT, Package
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import cannot_graft, damaged, not_a_workbook
from sheetqc.package.xml import Element, child, children, namespace, parsed, truth

FOREIGN_KINDS = {
    "xls": "it is a workbook of the old binary kind (.xls)",
    "xlsb": "it is a workbook of the binary kind (.xlsb)",
    "ods": "it is a workbook of another make (.ods)",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """A sheet as the workbook lists it; `part` is None when it leads nowhere."""

    name: str
    id: str
    relation: str  # id of the relationship of the workbook part
    state: str  # visible, hidden or veryHidden
    part: PartName | None


class Workbook:
    """The workbook part with its lists; what is changed here is only in memory."""

    def __init__(self, package: Package) -> None:
        self.package = package
        self.name = main_part(package)
        self.kind = _kind(package.types.of(self.name))
        _refuse_foreign(self.kind)
        self.content = package.content(self.name)
        self.root = parsed(self.content, self.name.text)
        if namespace(self.root) not in (MAIN, STRICT_MAIN):
            raise cannot_graft("it is written in a dialect of the format that was never finished")
        if etree.QName(self.root).localname != "workbook" or child(self.root, "sheets") is None:
            raise damaged("the workbook part lists no sheets")
        self.strict = namespace(self.root) == STRICT_MAIN
        if package.relationships_content(self.name) is None:
            raise damaged("the workbook part refers to no sheets")
        self.links = package.relationships(self.name)
        self.links.reserve(_used_ids(self.root))
        if all(sheet.part is None for sheet in self.sheets):
            raise damaged("the workbook part refers to no sheets")

    @property
    def main(self) -> str:
        """Namespace of the workbook's own elements."""
        return STRICT_MAIN if self.strict else MAIN

    @property
    def relation_attribute(self) -> str:
        """Name of the attribute that holds a relationship's id."""
        return f"{{{STRICT_RELATION if self.strict else RELATION}}}id"

    @property
    def sheet_elements(self) -> list[Element]:
        """The elements that list the sheets, in order."""
        return children(child(self.root, "sheets"), "sheet")

    @property
    def sheets(self) -> tuple[Sheet, ...]:
        """All sheets in order, hidden ones and chart sheets too."""
        links = {link.id: link for link in self.links}
        return tuple(
            self._sheet(element, links.get(element.get(self.relation_attribute, ""))) for element in self.sheet_elements
        )

    def _sheet(self, element: Element, link: object) -> Sheet:
        target = getattr(link, "target", None)
        return Sheet(
            name=element.get("name", ""),
            id=element.get("sheetId", ""),
            relation=element.get(self.relation_attribute, ""),
            state=element.get("state", "visible"),
            part=self.package.stored(target) if target else None,
        )

    @property
    def defined_names(self) -> list[Element]:
        """The elements of all defined names."""
        return children(child(self.root, "definedNames"), "definedName")

    @property
    def date_1904(self) -> bool:
        """Whether days are counted from 1904."""
        settings = child(self.root, "workbookPr")
        return settings is not None and truth(settings.get("date1904"))

    def part(self, kind: str) -> PartName | None:
        """The part that the workbook refers to by a kind such as "styles", as the archive spells it."""
        link = self.links.by_kind(kind)
        return self.package.stored(link.target) if link and link.target else None


def _used_ids(root: Element) -> list[str]:
    """Values of all attributes that refer to relationships, in either dialect."""
    spaces = (f"{{{RELATION}}}", f"{{{STRICT_RELATION}}}")
    return [str(v) for e in root.iter() for k, v in e.attrib.items() if str(k).startswith(spaces)]


def main_part(package: Package) -> PartName:
    """The part that the package names as its main document."""
    link = package.relationships(ROOT).by_kind("officeDocument")
    if link is None or link.target is None:
        raise not_a_workbook("the file is a package that names no main document")
    found = package.stored(link.target)
    if found is None:
        raise damaged(f"the main document {link.target.text} is missing")
    return found


def _kind(content_type: str) -> str:
    kind = WORKBOOK_KINDS.get(content_type.strip().lower())
    if kind is None:
        raise not_a_workbook("the file is a document of another program")
    return kind


def _refuse_foreign(kind: str) -> None:
    if kind in FOREIGN_KINDS:
        raise cannot_graft(FOREIGN_KINDS[kind])


@contextmanager
def opened_workbook(path: Path, limits: Limits = DEFAULT_LIMITS) -> Iterator[Workbook]:
    """The workbook of a file, open for reading.

    Raises
    ------
    CannotGraft : a workbook that is not a package of this format
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : what is met
    """
    _refuse_foreign(container(path))
    with opened(path, limits) as archive:
        _refuse_foreign(archive_kind(archive))
        yield Workbook(Package(archive))
