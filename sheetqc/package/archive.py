"""A zip archive opened for reading: members found by name, read within limits, or handed on as they are."""

from __future__ import annotations

import zlib
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import BinaryIO

from sheetqc.package.directory import DEFLATED, LOCAL, STORED, Member, members_of
from sheetqc.package.limits import DEFAULT_LIMITS, Limits
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import damaged, missing, not_a_workbook, unsafe

BLOCK = 1 << 16  # small enough to stay in the processor's cache


class Archive:
    """Members of an open zip file."""

    def __init__(self, file: BinaryIO, limits: Limits = DEFAULT_LIMITS) -> None:
        self._file = file
        self.limits = limits
        self.members = members_of(file, limits)
        self._by_key = {m.name.key: m for m in self.members if not m.is_folder}

    def member(self, name: PartName) -> Member | None:
        """The member of that name, however it is spelled."""
        return self._by_key.get(name.key)

    def read(self, member: Member) -> bytes:
        """The content of a member that has to be understood, with its checksum verified."""
        self._refuse_long(member.name, member.unpacked)
        content = b"".join(self.content(member, self.limits.part))
        if len(content) != member.unpacked or zlib.crc32(content) != member.crc:
            raise damaged(f"{member.name.text} does not match its checksum")
        return content

    def content(self, member: Member, most: int) -> Iterator[bytes]:
        """The unpacked content in blocks, ending in an error when it is longer than `most` bytes."""
        if member.method == STORED:
            yield from self.raw(member)
            return
        if member.method != DEFLATED:
            raise damaged(f"{member.name.text} is packed in a way that workbooks do not use")
        length = 0
        for block in self._inflated(member):
            length += len(block)
            self._refuse_long(member.name, length, most)
            yield block

    def _inflated(self, member: Member) -> Iterator[bytes]:
        unpack = zlib.decompressobj(-15)
        try:
            for block in self.raw(member):
                rest = block
                while rest and not unpack.eof:
                    yield unpack.decompress(rest, BLOCK)
                    rest = unpack.unconsumed_tail
            yield unpack.flush()
        except zlib.error as error:
            raise damaged(f"{member.name.text} cannot be unpacked") from error
        if not unpack.eof:
            raise damaged(f"{member.name.text} is cut off")

    def raw(self, member: Member) -> Iterator[bytes]:
        """The packed bytes of a member, as they are in the file, in blocks."""
        self._file.seek(member.offset)
        header = self._file.read(LOCAL.size)
        if len(header) < LOCAL.size or header[:4] != b"PK\x03\x04":
            raise damaged(f"{member.name.text} is not where the list of members says")
        *_, name_length, extra_length = LOCAL.unpack(header)
        if self._file.read(name_length) != member.raw_name:
            raise damaged(f"{member.name.text} has another name where it is stored")
        self._file.seek(extra_length, 1)
        left = member.packed
        while left:
            block = self._file.read(min(left, BLOCK))
            if not block:
                raise damaged(f"{member.name.text} is cut off")
            left -= len(block)
            yield block

    def _refuse_long(self, name: PartName, length: int, most: int | None = None) -> None:
        most = self.limits.part if most is None else most
        if length > most:
            raise unsafe(f"{name.text} unpacks to {length} bytes or more", f"at most {most}")


@contextmanager
def opened(path: Path, limits: Limits = DEFAULT_LIMITS) -> Iterator[Archive]:
    """An archive open for reading.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, DamagedWorkbook, UnsafeWorkbook, EncryptedWorkbook : what is met
    """
    try:
        file = path.open("rb")
    except FileNotFoundError as error:
        raise missing(path.name) from error
    except IsADirectoryError as error:
        raise not_a_workbook(f"{path.name} is a folder") from error
    with file:
        yield Archive(file, limits)
