"""What becomes of a package: parts replaced, parts left out, parts added; and the copy written accordingly."""

from __future__ import annotations

from dataclasses import dataclass
from typing import BinaryIO

from sheetqc.package.additions import NewPart
from sheetqc.package.archive import Archive
from sheetqc.package.partname import PartName
from sheetqc.package.zipwriter import ZipWriter


@dataclass(frozen=True, slots=True, kw_only=True)
class AddedSheet:
    """A sheet that was added: its name in the copy and its part."""

    name: str
    part: PartName


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """What a copy changes against its original."""

    replaced: dict[str, bytes]  # new content by key of a part of the original
    left_out: frozenset[str]  # keys of parts of the original
    added: tuple[NewPart, ...]
    sheets: tuple[AddedSheet, ...]
    removed_sheets: tuple[str, ...] = ()  # names of sheets of an earlier answer
    removed_links: frozenset[str] = frozenset()  # ids of the relationships of the workbook that led to them


def write(archive: Archive, plan: Plan, file: BinaryIO) -> None:
    """Writes the copy: what is unchanged as it is packed, in its order; what is new at the end."""
    writer = ZipWriter(file)
    for member in archive.members:
        key = member.name.key
        if key in plan.left_out:
            continue
        if key in plan.replaced and not member.is_folder:
            writer.add(member.name, plan.replaced[key], like=member)
        else:
            writer.copy(member, archive.raw(member))
    for part in plan.added:
        writer.add(part.name, part.content)
    writer.close()
