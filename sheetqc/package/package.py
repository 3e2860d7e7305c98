"""A package: parts found by name, with their content types and relationships."""

from __future__ import annotations

from collections.abc import Iterable

from sheetqc.package.archive import Archive
from sheetqc.package.contenttypes import LIST, ContentTypes
from sheetqc.package.directory import Member
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import damaged, not_a_workbook
from sheetqc.package.relationships import EMPTY, Relationships
from sheetqc.package.xml import Element, parsed

ROOT = PartName("")


class Package:
    """Parts of an open archive."""

    def __init__(self, archive: Archive) -> None:
        self.archive = archive
        member = archive.member(LIST)
        if member is None:
            raise not_a_workbook("the file is an archive without a list of content types")
        self.types_content = archive.read(member)
        self.types = ContentTypes(self.types_content)

    def stored(self, name: PartName) -> PartName | None:
        """The name as the archive spells it, or None when there is no such part."""
        member = self.archive.member(name)
        return None if member is None else member.name

    def member(self, name: PartName) -> Member:
        """The member of a part that has to be there."""
        member = self.archive.member(name)
        if member is None:
            raise damaged(f"the part {name.text} is missing")
        return member

    def content(self, name: PartName) -> bytes:
        """The content of a part that has to be there."""
        return self.archive.read(self.member(name))

    def root(self, name: PartName) -> Element:
        """The root element of a part that has to be there."""
        return parsed(self.content(name), name.text)

    def relationships(self, source: PartName) -> Relationships:
        """The relationships of a part; none when it has no list of them."""
        return Relationships(source, self.relationships_content(source) or EMPTY)

    def relationships_content(self, source: PartName) -> bytes | None:
        """The list of relationships of a part as it is, or None."""
        member = self.archive.member(source.relationships)
        return None if member is None else self.archive.read(member)

    def reachable(self, starts: Iterable[PartName], without: frozenset[tuple[str, str]] = frozenset()) -> set[str]:
        """Keys of all parts that can be reached from some, by relationships that stay in the package.

        `without` names relationships, as (key of the source, id), that do not count.
        """
        seen: set[str] = set()
        waiting = list(starts)
        while waiting:
            name = waiting.pop()
            if name.key in seen:
                continue
            seen.add(name.key)
            for link in self.relationships(name):
                target = self.stored(link.target) if link.target else None
                if target is not None and (name.key, link.id) not in without:
                    waiting.append(target)
        return seen
