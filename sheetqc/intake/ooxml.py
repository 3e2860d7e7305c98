"""The parts of a package that a sheet's cells need: which sheets there are, strings, formats."""

from __future__ import annotations

import posixpath
import re
import zipfile
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any
from urllib.parse import unquote

from lxml import etree

from sheetqc.errors import DamagedWorkbook

_ESCAPE = re.compile(r"_x([0-9A-Fa-f]{4})_")
_UNSHOWN = re.compile(r'"[^"]*"|\\.|_.|\*.|\[(?![hmsHMS]+\])[^\]]*\]')
_DATE_LETTERS = re.compile(r"[dmyhs]|\[[hms]+\]", re.IGNORECASE)
_BUILT_IN_DATES = frozenset((*range(14, 23), *range(27, 37), *range(45, 48), *range(50, 59)))
_BUILT_IN_PERCENTS = frozenset((9, 10))


@dataclass(frozen=True, slots=True, kw_only=True)
class Format:
    """What a cell format says of the number in it."""

    date: bool = False
    percent: bool = False
    struck: bool = False

    @property
    def marked(self) -> bool:
        """Whether the format says anything at all."""
        return self.date or self.percent or self.struck


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetPart:
    """A sheet as the workbook part lists it."""

    name: str
    visible: bool
    part: str


def local(tag: Any) -> str:
    """The name of an element without its namespace; "" for comments and the like."""
    return tag.rpartition("}")[2] if isinstance(tag, str) else ""


def parsed(data: bytes) -> Any:
    """The root of a part, read safely."""
    refuse_document_type(data[:4096])
    parser = etree.XMLParser(resolve_entities=False, no_network=True, load_dtd=False, huge_tree=False)
    return etree.fromstring(data, parser)


def refuse_document_type(start: bytes) -> None:
    """Raises where a part declares a document type: no spreadsheet program writes one, and entities can do harm."""
    if b"<!DOCTYPE" in start or b"<\0!\0D\0" in start or b"\0<\0!\0D" in start:
        raise DamagedWorkbook("a part of the workbook declares a document type", expected="plain parts")


def unescaped(text: str) -> str:
    """A text with its escaped characters (_x000D_) put back."""
    return _ESCAPE.sub(lambda m: chr(int(m[1], 16)), text) if "_x" in text else text


def text_of(element: Any) -> str:
    """The text of a string item: its runs joined, without the reading aids of Japanese."""
    parts: list[str] = []
    for child in element:
        name = local(child.tag)
        if name == "t":
            parts.append(child.text or "")
        elif name == "r":
            parts.extend(run.text or "" for run in child if local(run.tag) == "t")
    return unescaped("".join(parts))


class Package:
    """A workbook package opened for reading; parts are found without regard to case."""

    def __init__(self, archive: zipfile.ZipFile) -> None:
        self.archive = archive
        self._names = {info.filename.casefold().replace("\\", "/").lstrip("/"): info for info in archive.infolist()}

    def member(self, part: str) -> zipfile.ZipInfo | None:
        """The archive's member for a part, None when there is none."""
        return self._names.get(part.casefold())

    def read(self, part: str) -> bytes | None:
        """The bytes of a part, None when there is none."""
        info = self.member(part)
        return None if info is None else self.archive.read(info)

    def relations(self, part: str) -> Iterator[tuple[str, str, str]]:
        """The relations of a part: id, last word of the type, part name of the target."""
        folder, name = posixpath.split(part)
        data = self.read(posixpath.join(folder, "_rels", name + ".rels"))
        if data is None:
            return
        for relation in parsed(data):
            if local(relation.tag) != "Relationship" or relation.get("TargetMode") == "External":
                continue
            target = unquote(relation.get("Target", "")).replace("\\", "/")
            full = target.lstrip("/") if target.startswith("/") else posixpath.join(folder, target)
            yield relation.get("Id", ""), relation.get("Type", "").rpartition("/")[2], posixpath.normpath(full)

    def workbook_part(self) -> str:
        """The name of the workbook part.

        Raises
        ------
        DamagedWorkbook : when there is none
        """
        for _, kind, target in self.relations(""):
            if kind == "officeDocument" and self.member(target) is not None:
                return target
        raise DamagedWorkbook("the file holds no workbook part", advice="Save it again and send it again.")


def shared_strings(package: Package, part: str | None) -> list[str]:
    """The strings of the workbook, by their index."""
    info = package.member(part) if part else None
    if info is None:
        return []
    strings: list[str] = []
    with package.archive.open(info) as file:
        refuse_document_type(file.read(4096))
    with package.archive.open(info) as file:
        items = etree.iterparse(
            file, events=("end",), tag="{*}si", resolve_entities=False, no_network=True, load_dtd=False, huge_tree=False
        )
        for _, item in items:
            strings.append(text_of(item))
            item.clear()
            while item.getprevious() is not None:
                del item.getparent()[0]
    return strings


def formats(package: Package, part: str | None) -> list[Format]:
    """The cell formats of the workbook, by their index; a part that cannot be read says nothing."""
    data = package.read(part) if part else None
    if data is None:
        return []
    try:
        return _formats(parsed(data))
    except (etree.XMLSyntaxError, ValueError):
        return []


def _formats(root: Any) -> list[Format]:
    sections = {local(child.tag): child for child in root}
    codes = {n.get("numFmtId", ""): n.get("formatCode", "") for n in sections.get("numFmts", ())}
    struck = [_is_struck(font) for font in sections.get("fonts", ()) if local(font.tag) == "font"]
    return [_format(xf, codes, struck) for xf in sections.get("cellXfs", ()) if local(xf.tag) == "xf"]


def _is_struck(font: Any) -> bool:
    return any(local(child.tag) == "strike" and child.get("val", "1") not in ("0", "false") for child in font)


def _format(xf: Any, codes: dict[str, str], struck: list[bool]) -> Format:
    number_format = xf.get("numFmtId", "0")
    font = int(xf.get("fontId", "0"))
    code = codes.get(number_format)
    if code is None:
        known = int(number_format) if number_format.isdigit() else 0
        date, percent = known in _BUILT_IN_DATES, known in _BUILT_IN_PERCENTS
    else:
        date, percent = is_date_code(code), "%" in _UNSHOWN.sub("", code)
    return Format(date=date, percent=percent, struck=font < len(struck) and struck[font])


def is_date_code(code: str) -> bool:
    """Whether a number format shows a number as a date or time."""
    bare = _UNSHOWN.sub("", code.split(";")[0])
    if re.sub(r"(?i)general|standard", "", bare).strip()[:1] in ("0", "#", "?"):
        return False
    return bool(_DATE_LETTERS.search(re.sub(r"(?i)general|standard", "", bare)))
