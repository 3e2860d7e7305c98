"""The relationships of a part: what it refers to, under which id, and as what."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from lxml import etree

from sheetqc.package.dialect import RELATIONSHIPS
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import damaged
from sheetqc.package.xml import parsed, serialised

EMPTY = f'<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n<Relationships xmlns="{RELATIONSHIPS}"/>'.encode()


@dataclass(frozen=True, slots=True, kw_only=True)
class Relationship:
    """One relationship; `target` is None where it leads out of the package."""

    id: str
    type: str
    reference: str
    target: PartName | None

    @property
    def kind(self) -> str:
        """Last step of the type, the same in either dialect ("worksheet")."""
        return self.type.rstrip("/").rpartition("/")[2]


class Relationships:
    """The relationships of one part, and their list, to which some are added."""

    def __init__(self, source: PartName, content: bytes = EMPTY) -> None:
        self._source = source
        self._content = content
        self._reserved: set[str] = set()
        self._root = parsed(content, source.relationships.text)
        if etree.QName(self._root).localname != "Relationships":
            raise damaged(f"{source.relationships.text} is not a list of relationships")

    def __iter__(self) -> Iterator[Relationship]:
        for element in self._root.iter(f"{{{RELATIONSHIPS}}}Relationship"):
            reference = element.get("Target", "")
            external = element.get("TargetMode", "").lower() == "external"
            yield Relationship(
                id=element.get("Id", ""),
                type=element.get("Type", ""),
                reference=reference,
                target=None if external else self._source.target(reference),
            )

    def by_kind(self, kind: str) -> Relationship | None:
        """The first relationship of a kind that stays in the package."""
        return next((r for r in self if r.kind == kind and r.target is not None), None)

    def by_id(self, id_: str | None) -> Relationship | None:
        """The relationship of that id."""
        return next((r for r in self if r.id == id_), None)

    def reserve(self, ids: Iterable[str]) -> None:
        """Keeps ids from being given out: those that the part uses although they lead nowhere."""
        self._reserved |= {id_.lower() for id_ in ids}

    def add(self, type_: str, target: PartName) -> str:
        """Adds a relationship to a part and gives its new id."""
        taken = {r.id.lower() for r in self} | self._reserved
        number = len(taken) + 1
        while f"rid{number}" in taken:
            number += 1
        element = etree.SubElement(self._root, f"{{{RELATIONSHIPS}}}Relationship")
        element.set("Id", f"rId{number}")
        element.set("Type", type_)
        element.set("Target", self._source.reference_to(target))
        return f"rId{number}"

    def forget(self, ids: Iterable[str]) -> None:
        """Takes relationships out."""
        gone = set(ids)
        for element in list(self._root.iter(f"{{{RELATIONSHIPS}}}Relationship")):
            if element.get("Id", "") in gone:
                parent = element.getparent()
                assert parent is not None
                parent.remove(element)

    def content(self) -> bytes:
        """The list as it stands now."""
        return serialised(self._root, self._content)
