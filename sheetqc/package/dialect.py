"""The two dialects of the format, transitional and strict: their namespaces and how one is told in the other."""

from __future__ import annotations

import re

from sheetqc.package.xml import Element, local

_OLD = "http://schemas.openxmlformats.org/"
_STRICT = "http://purl.oclc.org/ooxml/"
# Transitional namespaces that have a strict counterpart.
_PAIRS = {
    f"{_OLD}spreadsheetml/2006/main": f"{_STRICT}spreadsheetml/main",
    f"{_OLD}officeDocument/2006/relationships": f"{_STRICT}officeDocument/relationships",
    f"{_OLD}drawingml/2006/main": f"{_STRICT}drawingml/main",
    f"{_OLD}drawingml/2006/chart": f"{_STRICT}drawingml/chart",
    f"{_OLD}drawingml/2006/chartDrawing": f"{_STRICT}drawingml/chartDrawing",
    f"{_OLD}drawingml/2006/spreadsheetDrawing": f"{_STRICT}drawingml/spreadsheetDrawing",
    f"{_OLD}officeDocument/2006/docPropsVTypes": f"{_STRICT}officeDocument/docPropsVTypes",
}
MAIN = f"{_OLD}spreadsheetml/2006/main"
STRICT_MAIN = _PAIRS[MAIN]
RELATION = f"{_OLD}officeDocument/2006/relationships"
STRICT_RELATION = _PAIRS[RELATION]
# Relationship lists and content types are the same in both dialects.
RELATIONSHIPS = f"{_OLD}package/2006/relationships"
CONTENT_TYPES = f"{_OLD}package/2006/content-types"

# Where namespaces are named: in declarations, and where a drawing says what kind of object it holds.
_NAMING = re.compile(rb"((?:xmlns(?::[\w.-]+)?|\buri)\s*=\s*)([\"'])([^\"']+)\2")
# Shares that the strict dialect writes with a percent sign: element names and the attribute; a drawing counts in
# thousandths of a percent, a chart in percent.
_DRAWING_SHARES = frozenset(
    (
        *("tint", "shade", "alpha", "alphaOff", "alphaMod", "hueMod", "sat", "satOff", "satMod"),
        *("lum", "lumOff", "lumMod", "red", "redOff", "redMod", "green", "greenOff", "greenMod"),
        *("blue", "blueOff", "blueMod"),
    )
)
_RECTANGLES = frozenset(("srcRect", "fillRect", "fillToRect", "tileRect"))
_CHART_SHARES = frozenset(
    (
        *("gapWidth", "overlap", "gapDepth", "holeSize", "bubbleScale", "secondPieSize"),
        *("hPercent", "lblOffset", "depthPercent"),
    )
)


def relationship(kind: str, *, strict: bool) -> str:
    """The relationship type of a kind such as "worksheet"."""
    return f"{STRICT_RELATION if strict else RELATION}/{kind}"


def strict_relationship(kind: str) -> str:
    """A transitional relationship type in the strict dialect; any other unchanged."""
    return kind.replace(f"{RELATION}/", f"{STRICT_RELATION}/") if kind.startswith(f"{RELATION}/") else kind


def strict_namespaces(content: bytes) -> bytes:
    """The content of a part with its namespace declarations in the strict dialect."""

    def swapped(match: re.Match[bytes]) -> bytes:
        uri = match.group(3).decode("utf-8", "replace")
        return match.group(1) + match.group(2) + _PAIRS.get(uri, uri).encode("utf-8") + match.group(2)

    return _NAMING.sub(swapped, content)


def write_shares_with_sign(root: Element) -> None:
    """Rewrites the shares of a drawing or chart as the strict dialect wants them ("150%")."""
    for element in root.iter():
        name = local(element)
        if name in _DRAWING_SHARES:
            _sign(element, "val", 1000)
        elif name in _CHART_SHARES:
            _sign(element, "val", 1)
        elif name in _RECTANGLES:
            for side in ("l", "t", "r", "b"):
                _sign(element, side, 1000)
        elif name == "gs":
            _sign(element, "pos", 1000)


def _sign(element: Element, attribute: str, per_percent: int) -> None:
    text = element.get(attribute)
    if text and re.fullmatch(r"-?\d+", text):
        element.set(attribute, f"{int(text) / per_percent:g}%")
