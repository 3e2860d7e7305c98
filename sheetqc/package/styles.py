"""The styles of a workbook, to which the formats of another one are added."""

from __future__ import annotations

import copy
from collections.abc import Hashable
from dataclasses import dataclass

from lxml import etree

from sheetqc.package.colours import make_plain, theme_colours
from sheetqc.package.dialect import MAIN, STRICT_MAIN
from sheetqc.package.numberformats import BUILT_IN, FIRST_FREE, shows_date
from sheetqc.package.refusals import cannot_graft, damaged
from sheetqc.package.xml import Element, child, children, elements, ensured, likeness, local, namespace, whole

ORDER = (
    "numFmts",
    "fonts",
    "fills",
    "borders",
    "cellStyleXfs",
    "cellXfs",
    "cellStyles",
    "dxfs",
    "tableStyles",
    "colors",
    "extLst",
)
MOST_FORMATS = 65_490
NORMAL = 0  # number of the built-in cell style that everything else rests on
# How many of the last entries of a list are looked through for an equal one: those of an earlier answer are there.
NEAR = 1000
_PARTS = {"fonts": "fontId", "fills": "fillId", "borders": "borderId"}
_DEFAULTS = {
    "fonts": ('<font xmlns="{0}"><sz val="11"/><name val="Calibri"/><family val="2"/></font>',),
    "fills": (
        '<fill xmlns="{0}"><patternFill patternType="none"/></fill>',
        '<fill xmlns="{0}"><patternFill patternType="gray125"/></fill>',
    ),
    "borders": ('<border xmlns="{0}"><left/><right/><top/><bottom/><diagonal/></border>',),
    "cellStyleXfs": ('<xf xmlns="{0}" numFmtId="0" fontId="0" fillId="0" borderId="0"/>',),
    "cellXfs": ('<xf xmlns="{0}" numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/>',),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class StyleMap:
    """Where the formats of the additions are found in the copy."""

    formats: tuple[int, ...]  # by index of the additions' cell formats
    differential: tuple[int, ...]  # by index of the additions' differential formats
    dates: frozenset[int]  # indices of the additions' cell formats that show a date


class Styles:
    """The style sheet of a workbook, changed only by appending."""

    def __init__(self, root: Element) -> None:
        if local(root) != "styleSheet" or namespace(root) not in (MAIN, STRICT_MAIN):
            raise damaged("the styles part is something else")
        self.root = root
        self._main = namespace(root)
        self._known: dict[str, dict[Hashable, int]] = {}
        self._counts: dict[str, int] = {}

    def add(self, other: Element, theme: Element | None) -> StyleMap:
        """Appends all formats of another style sheet and says where they are.

        Parameters
        ----------
        other : root of the additions' style sheet, in the transitional dialect
        theme : root of the additions' theme, or None
        """
        colours = theme_colours(theme)
        codes = _declared(other)
        numbers = self._numbers(codes, {whole(e.get("numFmtId"), 0) for e in children(child(other, "cellXfs"), "xf")})
        maps = {
            attribute: self._appended(name, children(child(other, name), name[:-1]), colours)
            for name, attribute in _PARTS.items()
        }
        styles = self._style_formats(other)
        formats = []
        dates = set()
        for index, old in enumerate(children(child(other, "cellXfs"), "xf")):
            number = whole(old.get("numFmtId"), 0)
            formats.append(self._format(old, numbers.get(number, number), maps, styles))
            if shows_date(codes.get(number, BUILT_IN.get(number, "General"))):
                dates.add(index)
        return StyleMap(
            formats=tuple(formats),
            differential=self._differential(other, colours),
            dates=frozenset(dates),
        )

    def _list(self, name: str) -> Element:
        """The list of that name; the entries that every program takes for granted are made where they are missing."""
        found = ensured(self.root, name, ORDER)
        for text in _DEFAULTS.get(name, ())[len(elements(found)) :]:
            found.append(etree.fromstring(text.format(self._main)))
        return found

    def _appended(self, name: str, elements: list[Element], colours: tuple[str, ...]) -> tuple[int, ...]:
        return tuple(self._index(name, self._translated(element, colours)) for element in elements)

    def _index(self, name: str, element: Element) -> int:
        """Index of an entry of a list, appended when no equal one is there."""
        found = self._list(name)
        if name not in self._known:
            entries = elements(found)
            self._counts[name] = len(entries)
            start = max(0, len(entries) - NEAR)
            self._known[name] = {likeness(e): start + i for i, e in enumerate(entries[start:])}
        known = self._known[name]
        like = likeness(element)
        if like not in known:
            found.append(element)
            known[like] = self._counts[name]
            self._counts[name] += 1
            found.set("count", str(self._counts[name]))
        return known[like]

    def _format(self, old: Element, number: int, maps: dict[str, tuple[int, ...]], styles: dict[int, int]) -> int:
        made = etree.Element(f"{{{self._main}}}xf")
        made.set("numFmtId", str(number))
        for attribute, places in maps.items():
            index = whole(old.get(attribute), 0)
            made.set(attribute, str(places[index] if index < len(places) else 0))
        made.set("xfId", str(styles.get(whole(old.get("xfId"), 0), 0)))
        for name in ("quotePrefix", "pivotButton", "applyAlignment", "applyProtection"):
            if old.get(name) is not None:
                made.set(name, old.get(name, ""))
        # Said outright, so that a named style of the original cannot shine through.
        for name in ("applyNumberFormat", "applyFont", "applyFill", "applyBorder"):
            made.set(name, "1")
        for name in ("alignment", "protection"):
            for part in children(old, name):
                made.append(_moved(part, self._main))
        index = self._index("cellXfs", made)
        if index > MOST_FORMATS:
            raise cannot_graft("it already holds nearly as many cell formats as a workbook can")
        return index

    def _style_formats(self, other: Element) -> dict[int, int]:
        """Index of the original's format of a built-in style by the additions' index of the same style."""
        self._list("cellStyleXfs")
        mine = _built_in_styles(self.root)
        normal = mine.get(NORMAL, 0)
        theirs = {place: mine.get(kind, normal) for kind, place in _built_in_styles(other).items()}
        return {0: normal} | theirs

    def _numbers(self, codes: dict[int, str], used: set[int]) -> dict[int, int]:
        """New number-format ids by those of the additions."""
        mine = _declared(self.root)
        ids = {code: number for number, code in reversed(list(mine.items()))}
        free = max([FIRST_FREE - 1, *mine]) + 1
        found = {}
        for number in sorted(used):
            code = codes.get(number, BUILT_IN.get(number))
            if code is None or (number not in codes and mine.get(number, code) == code):
                continue
            if code not in ids:
                entry = etree.SubElement(self._list("numFmts"), f"{{{self._main}}}numFmt")
                entry.set("numFmtId", str(free))
                entry.set("formatCode", code)
                ids[code] = free
                free += 1
                self._list("numFmts").set("count", str(len(elements(self._list("numFmts")))))
            found[number] = ids[code]
        return found

    def _differential(self, other: Element, colours: tuple[str, ...]) -> tuple[int, ...]:
        found = []
        for old in children(child(other, "dxfs"), "dxf"):
            made = self._translated(old, colours)
            mine = {**_declared(self.root)}
            for entry in children(made, "numFmt"):
                # A differential format carries its own code; its id only has to be no one else's.
                free = next((n for n, code in mine.items() if code == entry.get("formatCode")), None)
                entry.set("numFmtId", str(free if free is not None else max([FIRST_FREE + 1000, *mine]) + 1))
            found.append(self._index("dxfs", made))
        return tuple(found)

    def _translated(self, element: Element, colours: tuple[str, ...]) -> Element:
        made = _moved(element, self._main)
        make_plain(made, colours)
        for scheme in children(made, "scheme"):
            made.remove(scheme)
        return made


def _moved(element: Element, main: str) -> Element:
    """A copy of an element in another main namespace."""
    if not isinstance(element.tag, str):
        return copy.deepcopy(element)
    space = main if namespace(element) == MAIN else namespace(element)
    made = etree.Element(f"{{{space}}}{local(element)}", {str(k): str(v) for k, v in element.attrib.items()})
    made.text = element.text
    for part in element:
        made.append(_moved(part, main))
    return made


def _declared(root: Element) -> dict[int, str]:
    """Number-format codes by id, as far as a style sheet declares them."""
    entries = children(child(root, "numFmts"), "numFmt")
    return {whole(e.get("numFmtId"), -1): e.get("formatCode", "") for e in entries}


def _built_in_styles(root: Element) -> dict[int, int]:
    """Index of the style format by number of the built-in style."""
    found: dict[int, int] = {}
    for style in children(child(root, "cellStyles"), "cellStyle"):
        found.setdefault(whole(style.get("builtinId"), -1), whole(style.get("xfId"), 0))
    return found
