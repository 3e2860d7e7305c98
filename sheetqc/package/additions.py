"""The parts behind the sheets of a workbook, under new names and fit for the workbook they go into."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass

from lxml import etree

from sheetqc.package.dialect import RELATIONSHIPS, strict_namespaces, strict_relationship, write_shares_with_sign
from sheetqc.package.package import Package
from sheetqc.package.partname import PartName
from sheetqc.package.references import renamed
from sheetqc.package.relationships import Relationship
from sheetqc.package.sheetxml import Fitting, fit_differential, fit_names, fit_sheet
from sheetqc.package.xml import Element, local, parsed, serialised

# Kinds of relationships that lead back to the workbook or to what all sheets share; they are not followed.
_SHARED = frozenset(("styles", "sharedStrings", "theme", "officeDocument", "worksheet", "calcChain"))


@dataclass(frozen=True, slots=True, kw_only=True)
class NewPart:
    """A part to be added."""

    name: PartName
    content: bytes
    content_type: str


class Transfer:
    """Parts of the additions on their way into a copy.

    Parameters
    ----------
    source : package of the additions
    renaming : the new name of each of their parts
    fitting : what changes in sheets, tables and charts
    strict : whether the copy is of the strict dialect
    table_id : gives a new free number for each table
    """

    def __init__(
        self,
        source: Package,
        renaming: Callable[[PartName], PartName],
        fitting: Fitting,
        *,
        strict: bool,
        table_id: Callable[[], int],
    ) -> None:
        self._source = source
        self._renaming = renaming
        self._fitting = fitting
        self._strict = strict
        self._table_id = table_id

    def parts(self, starts: tuple[PartName, ...]) -> Iterator[NewPart]:
        """All parts that can be reached from some sheets, the lists of relationships included."""
        seen: set[str] = set()
        waiting = list(reversed(starts))
        while waiting:
            name = waiting.pop()
            if name.key in seen:
                continue
            seen.add(name.key)
            yield NewPart(
                name=self._renaming(name), content=self._content(name), content_type=self._source.types.of(name)
            )
            links = tuple(self._source.relationships(name))
            if links:
                yield self._links(name, links)
            waiting.extend(target for link in links if (target := self._followed(link)) is not None)

    def _followed(self, link: Relationship) -> PartName | None:
        if link.target is None or link.kind in _SHARED:
            return None
        return self._source.stored(link.target)

    def _content(self, name: PartName) -> bytes:
        content = self._source.content(name)
        if not self._source.types.of(name).endswith("+xml"):
            return content
        kind = self._source.types.of(name).removesuffix("+xml").rpartition(".")[2]
        fitted = self._fitting
        if kind in ("worksheet", "chartsheet", "table") or fitted.sheet_names or fitted.table_names or self._strict:
            content = self._rewritten(content, name)
        return strict_namespaces(content) if self._strict else content

    def _rewritten(self, content: bytes, name: PartName) -> bytes:
        root = parsed(content, name.text)
        if local(root) in ("worksheet", "chartsheet"):
            fit_sheet(root, self._fitting)
        elif local(root) == "table":
            self._fit_table(root)
        else:
            fit_names(root, self._fitting)
        if self._strict:
            write_shares_with_sign(root)
        return serialised(root, content)

    def _fit_table(self, root: Element) -> None:
        root.set("id", str(self._table_id()))
        for attribute in ("name", "displayName"):
            old = root.get(attribute, "")
            root.set(attribute, self._fitting.table_names.get(old.casefold(), old))
        fit_differential(root, self._fitting)
        fit_names(root, self._fitting)

    def _links(self, name: PartName, links: tuple[Relationship, ...]) -> NewPart:
        new = self._renaming(name)
        root = parsed(self._source.relationships_content(name) or b"", name.relationships.text)
        by_id = {link.id: link for link in links}
        for element in root.iter(f"{{{RELATIONSHIPS}}}Relationship"):
            link = by_id[element.get("Id", "")]
            element.set("Type", strict_relationship(link.type) if self._strict else link.type)
            target = self._followed(link)
            if target is not None:
                element.set("Target", new.reference_to(self._renaming(target)))
            elif link.reference.startswith("#"):
                element.set("Target", "#" + renamed(link.reference[1:], self._fitting.sheet_names))
        return NewPart(
            name=new.relationships,
            content=etree.tostring(root, xml_declaration=True, encoding="UTF-8", standalone=True),
            content_type="",
        )


def renaming(old_folder: str, new_folder: str) -> Callable[[PartName], PartName]:
    """Moves parts from below one folder to below another, keeping their place among themselves."""
    start = f"{old_folder}/" if old_folder else ""

    def moved(name: PartName) -> PartName:
        return PartName(f"{new_folder}/{name.text.removeprefix(start)}")

    return moved


def new_table_names(roots: list[Element], taken: frozenset[str]) -> Mapping[str, str]:
    """New names of tables by old ones (case-folded), for those whose name is taken."""
    used = set(taken) | {root.get("displayName", "").casefold() for root in roots}
    found = {}
    for root in roots:
        old = root.get("displayName", "")
        if old.casefold() not in taken:
            continue
        number = 2
        while f"{old}_{number}".casefold() in used:
            number += 1
        found[old.casefold()] = f"{old}_{number}"
        used.add(f"{old}_{number}".casefold())
    return found
