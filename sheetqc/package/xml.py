"""XML of a part: parsed with suspicion, written back in its own encoding."""

from __future__ import annotations

import codecs
from collections.abc import Hashable, Sequence

from lxml import etree

from sheetqc.package.refusals import damaged, unsafe

Element = etree._Element
_UTF16 = (codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)


def parsed(content: bytes, part: str) -> Element:
    """The root element of a part.

    Raises
    ------
    DamagedWorkbook : not well-formed
    UnsafeWorkbook : it declares a document type, which no workbook needs and which can hide entities
    """
    if b"<!DOCTYPE" in content or b"<!DOCTYPE" in content.replace(b"\0", b""):
        raise unsafe(f"{part} declares a document type")
    parser = etree.XMLParser(
        resolve_entities=False, no_network=True, load_dtd=False, huge_tree=False, strip_cdata=False
    )
    try:
        root = etree.fromstring(content, parser)
    except (etree.XMLSyntaxError, ValueError, LookupError) as error:
        raise damaged(f"{part} is not well-formed XML") from error
    if document(root).internalDTD is not None:
        raise unsafe(f"{part} declares a document type")
    return root


def serialised(root: Element, original: bytes = b"") -> bytes:
    """The whole document of a root, in the encoding (and with the byte-order mark) that the part had."""
    info = document(root)
    encoding = info.encoding or "UTF-8"
    if encoding.upper().startswith("UTF-16") or original[:2] in _UTF16:
        encoding = "UTF-16"
    content: bytes = etree.tostring(  # type: ignore[assignment]
        root.getroottree(),
        xml_declaration=True,
        encoding=encoding,
        standalone=info.standalone or None,  # type: ignore[arg-type]
    )
    return codecs.BOM_UTF8 + content if original.startswith(codecs.BOM_UTF8) else content


def document(root: Element) -> etree.DocInfo:
    """What the document of a root says about itself."""
    info = root.getroottree().docinfo
    assert info is not None
    return info


def canonical(element: Element) -> bytes:
    """What of a document matters: attribute order, quotes and declarations do not."""
    try:
        return etree.tostring(element, method="c14n", with_tail=False)
    except etree.C14NError:
        # The canonical form knows no relative namespaces; a comparison has to do without it then.
        return repr(likeness(element)).encode("utf-8", "surrogatepass")


def likeness(element: Element) -> Hashable:
    """What two elements that mean the same have in common."""
    attributes = tuple(sorted((str(k), str(v)) for k, v in element.attrib.items()))
    return element.tag, attributes, (element.text or "").strip(), tuple(likeness(e) for e in elements(element))


def elements(parent: Element) -> list[Element]:
    """The children that are elements, not comments or instructions."""
    return [e for e in parent if isinstance(e.tag, str)]


def namespace(element: Element) -> str:
    """Namespace of an element, "" when it has none."""
    return etree.QName(element).namespace or ""


def local(element: Element) -> str:
    """Name of an element without its namespace; "" for a comment or an instruction."""
    return etree.QName(element).localname if isinstance(element.tag, str) else ""


def child(parent: Element, name: str) -> Element | None:
    """The first child of that name in the parent's namespace."""
    return parent.find(f"{{{namespace(parent)}}}{name}")


def children(parent: Element | None, name: str) -> list[Element]:
    """All children of that name in the parent's namespace."""
    return [] if parent is None else parent.findall(f"{{{namespace(parent)}}}{name}")


def ensured(parent: Element, name: str, order: Sequence[str]) -> Element:
    """The child of that name, made at its place in the schema's order when there is none."""
    found = child(parent, name)
    if found is not None:
        return found
    made = etree.SubElement(parent, f"{{{namespace(parent)}}}{name}")
    before = set(order[: order.index(name)])
    known = [i for i, e in enumerate(parent) if e is not made and local(e) in before]
    parent.insert(known[-1] + 1 if known else _first(parent, order, made), made)
    return made


def _first(parent: Element, order: Sequence[str], made: Element) -> int:
    return next((i for i, e in enumerate(parent) if e is not made and local(e) in order), 0)


def whole(text: str | None, default: int) -> int:
    """A whole number written in an attribute, or the default where it is none."""
    try:
        return int(text) if text is not None else default
    except ValueError:
        return default


def truth(text: str | None) -> bool:
    """A truth value written in an attribute; absent is false."""
    return text is not None and text.strip().lower() in ("1", "true", "on")
