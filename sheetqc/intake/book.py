"""A workbook opened for reading: the sheets that hold a tag, and any other on request."""

from __future__ import annotations

import re
import zipfile
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Protocol

from sheetqc import vocabulary
from sheetqc.intake.container import make_of
from sheetqc.intake.ooxml import Format, Package, SheetPart, formats, local, parsed, shared_strings
from sheetqc.intake.othermake import OtherBook
from sheetqc.intake.sheet import Area, Sheet
from sheetqc.intake.sheetxml import SheetReader
from sheetqc.intake.tables import column_of

_OTHER_TEXT = re.compile(rb"inlineStr|t=[\"']str[\"']")


class Book(Protocol):
    """A workbook of any make."""

    @property
    def names(self) -> dict[str, str]:
        """Defined names of the workbook and what they refer to."""

    @property
    def values_only(self) -> bool:
        """Whether nothing but stored values can be read."""

    def candidates(self) -> Iterator[Sheet]:
        """The sheets that may hold a tag, hidden ones too."""

    def sheet(self, name: str) -> Sheet | None:
        """A sheet by name, without regard to case; None when there is none."""

    def table_column(self, table: str, column: str) -> tuple[str, Area] | None:
        """Sheet name and cells of a table's column, without heading and totals; None when there is none."""


@dataclass(slots=True)
class OoxmlBook:
    """A workbook package (.xlsx, .xlsm, .xltx, .xltm)."""

    package: Package
    parts: tuple[SheetPart, ...]
    names: dict[str, str]
    _strings: list[str]
    _formats: list[Format]
    _epoch_1904: bool
    values_only: bool = False

    def candidates(self) -> Iterator[Sheet]:
        """The sheets that may hold a tag, hidden ones too."""
        marks = [i for i, text in enumerate(self._strings) if vocabulary.tag_of(text)]
        pattern = re.compile(rb"<v>\s*(?:%b)\s*</v>" % b"|".join(b"%d" % i for i in marks)) if marks else None
        for part in self.parts:
            if self._may_hold_tag(part, pattern):
                yield self._read(part)

    def sheet(self, name: str) -> Sheet | None:
        """A sheet by name, without regard to case; None when there is none."""
        wanted = name.strip().casefold()
        part = next((p for p in self.parts if p.name.strip().casefold() == wanted), None)
        return None if part is None else self._read(part)

    def table_column(self, table: str, column: str) -> tuple[str, Area] | None:
        """Sheet name and cells of a table's column, without heading and totals; None when there is none."""
        return column_of(self.package, self.parts, table, column)

    def _may_hold_tag(self, part: SheetPart, pattern: re.Pattern[bytes] | None) -> bool:
        """A quick look at the bytes, so that a large sheet without a tag costs no parsing."""
        info = self.package.member(part.part)
        if info is None:
            return False
        rest = b""
        with self.package.archive.open(info) as file:
            while piece := file.read(1 << 20):
                data = rest + piece
                if b"<\0" in data[:8] or b"\0<" in data[:8] or b":v>" in data or _OTHER_TEXT.search(data):
                    return True
                if pattern is not None and pattern.search(data):
                    return True
                rest = data[-64:]
        return False

    def _read(self, part: SheetPart) -> Sheet:
        info = self.package.member(part.part)
        if info is None:
            return Sheet(name=part.name, visible=part.visible)
        reader = SheetReader(self._strings, self._formats, self._epoch_1904)
        with self.package.archive.open(info) as file:
            return reader.sheet(part.name, part.visible, file)


@contextmanager
def open_book(path: Path) -> Iterator[Book]:
    """A workbook opened for reading; closed at the end of the with block.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : what is met
    """
    if make_of(path) != "package":
        with OtherBook(path) as other:
            yield other
        return
    with zipfile.ZipFile(path) as archive:
        yield _ooxml_book(Package(archive))


def _ooxml_book(package: Package) -> OoxmlBook:
    main = package.workbook_part()
    root = parsed(package.read(main) or b"")
    relations = list(package.relations(main))
    targets = {identity: target for identity, kind, target in relations if kind == "worksheet"}
    by_kind = {kind: target for _, kind, target in relations}
    sections = {local(child.tag): child for child in root}
    properties = sections.get("workbookPr")
    return OoxmlBook(
        package=package,
        parts=tuple(_sheet_parts(sections, targets)),
        names=_names(sections),
        _strings=shared_strings(package, by_kind.get("sharedStrings")),
        _formats=formats(package, by_kind.get("styles")),
        _epoch_1904=properties is not None and properties.get("date1904") in ("1", "true"),
    )


def _names(sections: dict[str, Any]) -> dict[str, str]:
    """Defined names of the whole workbook; those of one sheet may repeat a name and are left out."""
    named = (n for n in sections.get("definedNames", ()) if n.get("localSheetId") is None)
    return {n.get("name", ""): (n.text or "") for n in named}


def _sheet_parts(sections: dict[str, Any], targets: dict[str, str]) -> Iterator[SheetPart]:
    for sheet in sections.get("sheets", ()):
        identity = next((value for name, value in sheet.attrib.items() if local(name) == "id"), "")
        if identity in targets:
            visible = sheet.get("state", "visible") == "visible"
            yield SheetPart(name=sheet.get("name", ""), visible=visible, part=targets[identity])
