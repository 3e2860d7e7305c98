"""A zip archive written member by member: some copied as they are, some new."""

from __future__ import annotations

import zlib
from collections.abc import Iterable
from dataclasses import replace
from typing import BinaryIO

from sheetqc.package.directory import CENTRAL, DEFLATED, END, FULL16, FULL32, LOCAL, UTF8, Member
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import cannot_graft

DESCRIPTOR_FOLLOWS = 0x0008
# 1980-01-01: what is written does not depend on the clock.
NO_TIME, NO_DATE = 0, 33


class ZipWriter:
    """Members written in the order given; `close` writes the directory."""

    def __init__(self, file: BinaryIO) -> None:
        self._file = file
        self._at = 0
        self._written: list[Member] = []

    def copy(self, member: Member, packed: Iterable[bytes]) -> None:
        """Writes a member of another archive without unpacking it."""
        self._start(member)
        for block in packed:
            self._write(block)

    def add(self, name: PartName, content: bytes, like: Member | None = None) -> None:
        """Writes a new member, or new content under the name and date of an existing one."""
        deflate = zlib.compressobj(6, zlib.DEFLATED, -15)
        packed = deflate.compress(content) + deflate.flush()
        raw_name = like.raw_name if like else name.text.encode("utf-8")
        plain = raw_name.isascii()
        member = Member(
            name=name,
            raw_name=raw_name,
            made_by=20,
            flags=like.flags & UTF8 if like else (0 if plain else UTF8),
            method=DEFLATED,
            time=like.time if like else NO_TIME,
            date=like.date if like else NO_DATE,
            crc=zlib.crc32(content),
            packed=len(packed),
            unpacked=len(content),
            attributes=0,
            offset=0,
        )
        self._start(member)
        self._write(packed)

    def close(self) -> None:
        """Writes the directory; nothing can be added afterwards."""
        start = self._at
        for member in self._written:
            self._write(_central(member))
        if len(self._written) >= FULL16 or self._at >= FULL32:
            raise cannot_graft("the copy would be larger than 4 GB or hold more than 65,000 parts")
        count = len(self._written)
        self._write(END.pack(b"PK\x05\x06", 0, 0, count, count, self._at - start, start, 0))

    def _start(self, member: Member) -> None:
        if self._at + member.packed >= FULL32 or member.unpacked >= FULL32:
            raise cannot_graft("the copy would be larger than 4 GB or hold more than 65,000 parts")
        placed = replace(member, flags=member.flags & ~DESCRIPTOR_FOLLOWS, offset=self._at)
        self._written.append(placed)
        self._write(_local(placed) + placed.raw_name)

    def _write(self, data: bytes) -> None:
        self._file.write(data)
        self._at += len(data)


def _needed_version(method: int) -> int:
    return 20 if method in (0, DEFLATED) else 63


def _local(m: Member) -> bytes:
    return LOCAL.pack(
        b"PK\x03\x04",
        _needed_version(m.method),
        m.flags,
        m.method,
        m.time,
        m.date,
        m.crc,
        m.packed,
        m.unpacked,
        len(m.raw_name),
        0,
    )


def _central(m: Member) -> bytes:
    fixed = CENTRAL.pack(
        b"PK\x01\x02",
        m.made_by,
        _needed_version(m.method),
        m.flags,
        m.method,
        m.time,
        m.date,
        m.crc,
        m.packed,
        m.unpacked,
        len(m.raw_name),
        0,
        0,
        0,
        0,
        m.attributes,
        m.offset,
    )
    return fixed + m.raw_name
