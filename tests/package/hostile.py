"""Files that mean harm or are broken, made by hand; each maker writes one and HOSTILE says how it must be refused."""

from __future__ import annotations

import struct
import zipfile
from collections.abc import Callable
from pathlib import Path

from sheetqc.errors import (
    CannotGraft,
    DamagedWorkbook,
    EncryptedWorkbook,
    NotAWorkbook,
    UnsafeWorkbook,
    WorkbookError,
)
from tests.package.foreign import plain
from tests.package.packages import contents, packed

MAIN = b"http://schemas.openxmlformats.org/spreadsheetml/2006/main"


def _with(path: Path, name: str, content: bytes | None) -> Path:
    members = contents(plain(path))
    if content is None:
        del members[name]
    else:
        members[name] = content
    return packed(path, members)


def empty(path: Path) -> Path:
    """No bytes at all."""
    path.write_bytes(b"")
    return path


def text(path: Path) -> Path:
    """A text file under the name of a workbook."""
    path.write_text("1;2;3\n", encoding="utf-8")
    return path


def folder(path: Path) -> Path:
    """A folder under the name of a workbook."""
    path.mkdir()
    return path


def cut_off(path: Path) -> Path:
    """The second half is missing."""
    content = plain(path).read_bytes()
    path.write_bytes(content[: len(content) // 2])
    return path


def led_by_junk(path: Path) -> Path:
    """Something stands before the archive."""
    path.write_bytes(b"PK\x03\x04junk" + plain(path).read_bytes())
    return path


def twice(path: Path) -> Path:
    """Two members whose names differ in case only."""
    plain(path)
    with zipfile.ZipFile(path, "a") as archive:
        archive.writestr("XL/Workbook.xml", b"<a/>")
    return path


def escaped_twice(path: Path) -> Path:
    """Two members whose names differ in escapes and slashes only."""
    plain(path)
    with zipfile.ZipFile(path, "a") as archive:
        archive.writestr("xl\\work%62ook.xml", b"<a/>")
    return path


def climbing(path: Path) -> Path:
    """A member that leads out of the folder it would be unpacked in."""
    return _with(path, "../evil.xml", b"<a/>")


def absolute(path: Path) -> Path:
    """A member with an absolute name."""
    return _with(path, "/etc/evil", b"")


def on_a_drive(path: Path) -> Path:
    """A member with a drive letter."""
    return _with(path, "c:/evil", b"")


def bomb(path: Path) -> Path:
    """A sheet of 40 MB that packs to almost nothing."""
    return _with(path, "xl/worksheets/sheet2.xml", b"0" * 40_000_000)


def lying_bomb(path: Path) -> Path:
    """Styles that unpack to more than the directory says."""
    _with(path, "xl/styles.xml", b" " * 3_000_000 + b"<a/>")
    content = path.read_bytes()
    path.write_bytes(content.replace(struct.pack("<L", 3_000_004), struct.pack("<L", 3_000)))
    return path


def many(path: Path) -> Path:
    """More members than any workbook has."""
    plain(path)
    with zipfile.ZipFile(path, "a") as archive:
        for number in range(20_001):
            archive.writestr(f"x/{number}", b"")
    return path


def overlapping(path: Path) -> Path:
    """Two members that share their bytes."""
    content = plain(path).read_bytes()
    places = [content.index(b"PK\x01\x02")]
    places.append(content.index(b"PK\x01\x02", places[0] + 1))
    places.append(content.index(b"PK\x01\x02", places[1] + 1))
    second = content[places[1] + 42 : places[1] + 46]
    path.write_bytes(content[: places[2] + 42] + second + content[places[2] + 46 :])
    return path


def document_type(path: Path) -> Path:
    """Entities that would grow a billion-fold."""
    entities = b"".join(b'<!ENTITY a%d "%s">' % (i, b"&a%d;" % (i - 1) * 9 if i else b"ha") for i in range(9))
    return _with(
        path, "xl/styles.xml", b"<!DOCTYPE s [" + entities + b"]><styleSheet xmlns='" + MAIN + b"'>&a8;</styleSheet>"
    )


def wide_document_type(path: Path) -> Path:
    """The same, in UTF-16."""
    told = '<?xml version="1.0" encoding="UTF-16"?><!DOCTYPE s [<!ENTITY a "b">]><styleSheet/>'
    return _with(path, "xl/styles.xml", told.encode("utf-16"))


def foreign_entity(path: Path) -> Path:
    """An entity that would read a file of this machine."""
    told = b'<!DOCTYPE w [<!ENTITY x SYSTEM "file:///etc/passwd">]><workbook xmlns="' + MAIN + b'">&x;</workbook>'
    return _with(path, "xl/workbook.xml", told)


def encrypted_members(path: Path) -> Path:
    """Members that are encrypted one by one."""
    content = bytearray(plain(path).read_bytes())
    for signature, place in ((b"PK\x01\x02", 8), (b"PK\x03\x04", 6)):
        at = content.find(signature)
        while at >= 0:
            content[at + place] |= 1
            at = content.find(signature, at + 1)
    path.write_bytes(content)
    return path


def compound(path: Path, streams: tuple[str, ...], first: bytes = b"") -> Path:
    """A file of the old compound format with some named streams; the first one begins with some bytes."""
    header = bytearray(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(504))
    struct.pack_into("<3H", header, 24, 0x3E, 3, 0xFFFE)
    struct.pack_into("<H", header, 30, 9)
    struct.pack_into("<L", header, 44, 1)
    struct.pack_into("<L", header, 48, 1)  # the directory is in sector 1
    struct.pack_into("<109L", header, 76, 0, *[0xFFFFFFFF] * 108)
    table = struct.pack("<128L", 0xFFFFFFFD, 0xFFFFFFFE, 0xFFFFFFFE, *[0xFFFFFFFF] * 125)
    directory = b""
    for name in ("Root Entry", *streams):
        told = name.encode("utf-16-le") + b"\0\0"
        entry = bytearray(told.ljust(64, b"\0") + bytes(64))
        struct.pack_into("<H", entry, 64, len(told))
        struct.pack_into("<L", entry, 116, 2)
        directory += bytes(entry)
    path.write_bytes(bytes(header) + table + directory.ljust(512, b"\0") + first.ljust(512, b"\0"))
    return path


def locked(path: Path) -> Path:
    """Protected by a password."""
    return compound(path, ("EncryptionInfo", "EncryptedPackage"))


def old_kind(path: Path) -> Path:
    """A workbook of the old binary kind."""
    return compound(path, ("Workbook",), struct.pack("<4H", 0x0809, 4, 0x0600, 5))


def locked_old_kind(path: Path) -> Path:
    """A workbook of the old binary kind that is protected by a password."""
    return compound(path, ("Workbook",), struct.pack("<4H", 0x0809, 4, 0x0600, 5) + struct.pack("<3H", 0x2F, 2, 1))


def old_document(path: Path) -> Path:
    """A text document of the old binary kind."""
    return compound(path, ("WordDocument",))


def other_document(path: Path) -> Path:
    """A package of another program."""
    members = contents(plain(path))
    types = members["[Content_Types].xml"]
    members["[Content_Types].xml"] = types.replace(b"spreadsheetml.sheet.main", b"wordprocessingml.document.main")
    return packed(path, members)


def archive_of_texts(path: Path) -> Path:
    """An archive that is no package."""
    return packed(path, {"a.txt": b"a"})


def without_workbook(path: Path) -> Path:
    """The workbook part is missing."""
    return _with(path, "xl/workbook.xml", None)


def without_links(path: Path) -> Path:
    """The workbook part refers to nothing."""
    return _with(path, "xl/_rels/workbook.xml.rels", None)


def broken_styles(path: Path) -> Path:
    """Styles that are not well-formed."""
    return _with(path, "xl/styles.xml", b"<styleSheet>")


def wrong_checksum(path: Path) -> Path:
    """A part that must be read and whose checksum is wrong."""
    with zipfile.ZipFile(plain(path)) as archive:
        crc = struct.pack("<L", archive.getinfo("xl/styles.xml").CRC)
    path.write_bytes(path.read_bytes().replace(crc, b"\1\2\3\4"))
    return path


def binary_kind(path: Path) -> Path:
    """A workbook of the binary kind."""
    members = contents(plain(path))
    types = members["[Content_Types].xml"].replace(
        b"application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml",
        b"application/vnd.ms-excel.sheet.binary.macroEnabled.main",
    )
    members["[Content_Types].xml"] = types
    return packed(path, members)


def open_document(path: Path) -> Path:
    """A workbook of another make."""
    return packed(path, {"mimetype": b"application/vnd.oasis.opendocument.spreadsheet", "content.xml": b"<a/>"})


def locked_open_document(path: Path) -> Path:
    """A workbook of another make, protected by a password."""
    kind = b"application/vnd.oasis.opendocument.spreadsheet"
    return packed(path, {"mimetype": kind, "META-INF/manifest.xml": b"<m:encryption-data/>"})


HOSTILE: tuple[tuple[Callable[[Path], Path], type[WorkbookError], str], ...] = (
    (empty, NotAWorkbook, "empty"),
    (text, NotAWorkbook, "neither a workbook"),
    (folder, NotAWorkbook, "folder"),
    (cut_off, DamagedWorkbook, "cut off"),
    (led_by_junk, DamagedWorkbook, ""),
    (twice, UnsafeWorkbook, "twice"),
    (escaped_twice, UnsafeWorkbook, "twice"),
    (climbing, UnsafeWorkbook, "leads out"),
    (absolute, UnsafeWorkbook, "leads out"),
    (on_a_drive, UnsafeWorkbook, "leads out"),
    (bomb, UnsafeWorkbook, "unpacks from"),
    (lying_bomb, DamagedWorkbook, "checksum"),
    (many, UnsafeWorkbook, "members"),
    (overlapping, UnsafeWorkbook, "overlap"),
    (document_type, UnsafeWorkbook, "document type"),
    (wide_document_type, UnsafeWorkbook, "document type"),
    (foreign_entity, UnsafeWorkbook, "document type"),
    (encrypted_members, EncryptedWorkbook, "encrypted"),
    (locked, EncryptedWorkbook, "password"),
    (old_kind, CannotGraft, ".xls"),
    (locked_old_kind, EncryptedWorkbook, "password"),
    (old_document, NotAWorkbook, "another program"),
    (other_document, NotAWorkbook, "another program"),
    (archive_of_texts, NotAWorkbook, "content types"),
    (without_workbook, DamagedWorkbook, "missing"),
    (without_links, DamagedWorkbook, "refers to no sheets"),
    (broken_styles, DamagedWorkbook, "not well-formed"),
    (wrong_checksum, DamagedWorkbook, "checksum"),
    (binary_kind, CannotGraft, ".xlsb"),
    (open_document, CannotGraft, ".ods"),
    (locked_open_document, EncryptedWorkbook, "password"),
)
