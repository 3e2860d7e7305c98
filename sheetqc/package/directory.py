"""The list of members at the end of a zip archive, read with suspicion."""

from __future__ import annotations

import struct
from collections.abc import Iterator
from dataclasses import dataclass
from typing import BinaryIO

from sheetqc.package.limits import Limits
from sheetqc.package.partname import PartName
from sheetqc.package.refusals import damaged, encrypted, unsafe

END = struct.Struct("<4s4H2LH")
END64_LOCATOR = struct.Struct("<4sLQL")
END64 = struct.Struct("<4sQ2H2L4Q")
CENTRAL = struct.Struct("<4s6H3L5H2L")
LOCAL = struct.Struct("<4s5H3L2H")
ENCRYPTED, UTF8 = 0x0001, 0x0800
STORED, DEFLATED = 0, 8
FULL16, FULL32 = 0xFFFF, 0xFFFFFFFF


@dataclass(frozen=True, slots=True, kw_only=True)
class Member:
    """One member of an archive as its central directory describes it."""

    name: PartName
    raw_name: bytes
    made_by: int
    flags: int
    method: int
    time: int  # in the archive's own two-byte form
    date: int  # in the archive's own two-byte form
    crc: int
    packed: int  # bytes
    unpacked: int  # bytes
    attributes: int
    offset: int  # of the local header, bytes from the start of the file

    @property
    def is_folder(self) -> bool:
        """Whether the entry only names a folder."""
        return self.raw_name.endswith((b"/", b"\\"))


def members_of(file: BinaryIO, limits: Limits) -> tuple[Member, ...]:
    """The members of an archive, in the order of its directory.

    Raises
    ------
    DamagedWorkbook : the directory is missing or does not fit the file
    UnsafeWorkbook : a limit is broken, names are ambiguous or lead out of the package, members overlap
    EncryptedWorkbook : a member is encrypted
    """
    file.seek(0, 2)
    size = file.tell()
    count, start, length = _directory_place(file, size)
    if count > limits.members:
        raise unsafe(f"the file lists {count} members", f"at most {limits.members}")
    if start + length > size:
        raise damaged("the list of members reaches beyond the end of the file")
    file.seek(start)
    members = tuple(_entries(file.read(length), count))
    _refuse_ambiguous(members)
    _refuse_excess(members, limits)
    _refuse_overlap(members, start)
    return members


def _directory_place(file: BinaryIO, size: int) -> tuple[int, int, int]:
    """Number of entries, offset and length of the central directory."""
    tail = min(size, END.size + FULL16)
    file.seek(size - tail)
    data = file.read(tail)
    at = data.rfind(b"PK\x05\x06")
    if at < 0 or at + END.size > len(data):
        raise damaged("the file is cut off: the list of its members is missing")
    _, disk, first, _, count, length, start, _ = END.unpack_from(data, at)
    if disk not in (0, FULL16) or first not in (0, FULL16):
        raise damaged("the file is one piece of an archive in several pieces")
    if count == FULL16 or FULL32 in (length, start):
        return _directory_place_64(file, size - tail + at, (count, start, length))
    return count, start, length


def _directory_place_64(file: BinaryIO, end: int, plain: tuple[int, int, int]) -> tuple[int, int, int]:
    if end < END64_LOCATOR.size:
        return plain
    file.seek(end - END64_LOCATOR.size)
    signature, _, at, _ = END64_LOCATOR.unpack(file.read(END64_LOCATOR.size))
    if signature != b"PK\x06\x07":
        return plain
    if at + END64.size > end:
        raise damaged("the list of members lies beyond the end of the file")
    file.seek(at)
    signature, _, _, _, _, _, _, count, length, start = END64.unpack(file.read(END64.size))
    if signature != b"PK\x06\x06":
        raise damaged("the list of members is not where the file says")
    return count, start, length


def _entries(data: bytes, count: int) -> Iterator[Member]:
    at = 0
    for _ in range(count):
        if at + CENTRAL.size > len(data):
            raise damaged("the list of members ends too early")
        fields = CENTRAL.unpack_from(data, at)
        if fields[0] != b"PK\x01\x02":
            raise damaged("the list of members is broken")
        name_end = at + CENTRAL.size + fields[10]
        extra_end = name_end + fields[11]
        if extra_end + fields[12] > len(data):
            raise damaged("the list of members ends too early")
        yield _member(fields, data[at + CENTRAL.size : name_end], data[name_end:extra_end])
        at = extra_end + fields[12]


def _member(fields: tuple[int, ...], raw_name: bytes, extra: bytes) -> Member:
    unpacked, packed, offset = _wide((fields[9], fields[8], fields[16]), extra)
    if fields[3] & ENCRYPTED:
        raise encrypted("parts of the file are encrypted")
    return Member(
        name=PartName(_decoded(raw_name)),
        raw_name=raw_name,
        made_by=fields[1],
        flags=fields[3],
        method=fields[4],
        time=fields[5],
        date=fields[6],
        crc=fields[7],
        packed=packed,
        unpacked=unpacked,
        attributes=fields[15],
        offset=offset,
    )


def _decoded(raw_name: bytes) -> str:
    # Many writers store UTF-8 without saying so; anything else is the old default of the format.
    try:
        return raw_name.decode("utf-8")
    except UnicodeDecodeError:
        return raw_name.decode("cp437")


def _wide(values: tuple[int, int, int], extra: bytes) -> tuple[int, int, int]:
    """Sizes and offset, taken from the extra field where the ordinary field says it is too small."""
    at = 0
    while at + 4 <= len(extra):
        tag, length = struct.unpack_from("<2H", extra, at)
        body = extra[at + 4 : at + 4 + length]
        if tag == 1:
            numbers = [int.from_bytes(body[i : i + 8], "little") for i in range(0, len(body) - 7, 8)]
            wide = iter(numbers)
            filled = tuple(next(wide, v) if v == FULL32 else v for v in values)
            return filled[0], filled[1], filled[2]
        at += 4 + length
    return values


def _refuse_ambiguous(members: tuple[Member, ...]) -> None:
    seen: set[str] = set()
    for member in members:
        text = member.name.text.replace("\\", "/")
        key = member.name.key
        if text.startswith("/") or ".." in key.split("/") or "\0" in text or key[1:2] == ":":
            raise unsafe(f"a member of the file is named {member.name.text!r}, which leads out of the package")
        if key in seen:
            raise unsafe(f"the file holds the member {member.name.text!r} twice")
        seen.add(key)


def _refuse_excess(members: tuple[Member, ...], limits: Limits) -> None:
    total = sum(m.unpacked for m in members)
    if total > limits.total:
        raise unsafe(f"the file unpacks to {total} bytes", f"at most {limits.total}")
    for member in members:
        if member.unpacked > limits.ratio_from and member.unpacked > limits.ratio * max(member.packed, 1):
            raise unsafe(
                f"{member.name.text} unpacks from {member.packed} to {member.unpacked} bytes",
                f"at most {limits.ratio:g} times its packed size",
            )


def _refuse_overlap(members: tuple[Member, ...], directory_start: int) -> None:
    at = 0
    for member in sorted(members, key=lambda m: m.offset):
        if at == 0 and member.offset != 0:
            raise damaged("the file starts with something that is not part of the archive")
        if member.offset < at:
            raise unsafe("members of the file overlap")
        at = member.offset + LOCAL.size + len(member.raw_name) + member.packed
    if at > directory_start:
        raise damaged("members of the file reach into the list of members")
