"""The list of content types of a package: what kind of thing each part is."""

from __future__ import annotations

from collections.abc import Iterable

from lxml import etree

from sheetqc.package.dialect import CONTENT_TYPES
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import damaged
from sheetqc.package.xml import Element, parsed, serialised

LIST = PartName("[Content_Types].xml")
_SPREADSHEET = "application/vnd.openxmlformats-officedocument.spreadsheetml."
WORKBOOK_KINDS = {
    f"{_SPREADSHEET}sheet.main+xml": "xlsx",
    f"{_SPREADSHEET}template.main+xml": "xltx",
    "application/vnd.ms-excel.sheet.macroenabled.main+xml": "xlsm",
    "application/vnd.ms-excel.template.macroenabled.main+xml": "xltm",
    "application/vnd.ms-excel.addin.macroenabled.main+xml": "xlam",
    "application/vnd.ms-excel.sheet.binary.macroenabled.main": "xlsb",
}
STYLES = f"{_SPREADSHEET}styles+xml"
STRINGS = f"{_SPREADSHEET}sharedStrings+xml"
METADATA = f"{_SPREADSHEET}sheetMetadata+xml"
WORKSHEET = f"{_SPREADSHEET}worksheet+xml"
RELATIONSHIP_LIST = "application/vnd.openxmlformats-package.relationships+xml"


class ContentTypes:
    """Content types by part, and the list itself, to which overrides are added."""

    def __init__(self, content: bytes) -> None:
        self._content = content
        self._root = parsed(content, LIST.text)
        if etree.QName(self._root).localname != "Types":
            raise damaged("the list of content types is something else")
        self._defaults: dict[str, str] = {}
        self._overrides: dict[str, str] = {}
        for element in self._root.iter(f"{{{CONTENT_TYPES}}}Default"):
            self._defaults.setdefault(element.get("Extension", "").lower(), element.get("ContentType", ""))
        for element in self._overriding():
            self._overrides.setdefault(_key(element), element.get("ContentType", ""))

    def of(self, name: PartName) -> str:
        """The content type of a part, "" when nothing is said."""
        extension = name.key.rpartition(".")[2]
        return self._overrides.get(name.key) or self._defaults.get(extension, "")

    @property
    def named(self) -> frozenset[str]:
        """Keys of all parts that are named, whether they exist or not."""
        return frozenset(self._overrides)

    def add(self, name: PartName, content_type: str) -> None:
        """Says what kind of thing a new part is."""
        element = etree.SubElement(self._root, f"{{{CONTENT_TYPES}}}Override")
        element.set("PartName", "/" + name.text)
        element.set("ContentType", content_type)
        self._overrides[name.key] = content_type

    def add_default(self, extension: str, content_type: str) -> None:
        """Says what parts of an extension are, where nothing is said yet."""
        if extension.lower() not in self._defaults:
            element = etree.Element(f"{{{CONTENT_TYPES}}}Default")
            element.set("Extension", extension)
            element.set("ContentType", content_type)
            self._root.insert(0, element)
            self._defaults[extension.lower()] = content_type

    def forget(self, names: Iterable[PartName]) -> None:
        """Takes out what is said about parts that are left out of the copy."""
        keys = {name.key for name in names}
        for element in list(self._overriding()):
            if _key(element) in keys:
                self._root.remove(element)
                self._overrides.pop(_key(element), None)

    def content(self) -> bytes:
        """The list as it stands now."""
        return serialised(self._root, self._content)

    def _overriding(self) -> Iterable[Element]:
        return self._root.iter(f"{{{CONTENT_TYPES}}}Override")


def _key(override: Element) -> str:
    return PartName(override.get("PartName", "")).key
