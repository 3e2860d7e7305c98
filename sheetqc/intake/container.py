"""What kind of file is met, told by what it holds; refused before it can do harm."""

from __future__ import annotations

import struct
import zipfile
from pathlib import Path
from typing import BinaryIO, Literal

from sheetqc.errors import DamagedWorkbook, EncryptedWorkbook, MissingWorkbook, NotAWorkbook, UnsafeWorkbook

Make = Literal["package", "binary package", "open document", "old"]

_COMPOUND = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
_ZIP = (b"PK\x03\x04", b"PK\x05\x06")
_OPEN_DOCUMENT = b"application/vnd.oasis.opendocument.spreadsheet"

MOST_BYTES = 2048 << 20
"""All members unpacked; more is taken for an attempt to fill this machine."""
MOST_RATIO = 400
"""Unpacked over packed bytes of one member; a sheet of a million formatted empty rows stays below 250."""
RATIO_FROM = 64 << 20
"""Bytes unpacked below which the ratio does not matter."""
MOST_MEMBERS = 20_000

_SAVE_AGAIN = "Open it in the spreadsheet program, save it again and send it again."


def make_of(path: Path) -> Make:
    """What make of workbook a file is.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : what is met
    """
    if path.is_dir():
        raise NotAWorkbook(f"{path.name} is a folder", expected="a workbook (.xlsx or .xlsm)", file=path)
    try:
        file = path.open("rb")
    except FileNotFoundError:
        raise MissingWorkbook(f"there is no file {path.name}", advice="Check the path.", file=path) from None
    with file:
        start = file.read(8)
        if not start:
            raise DamagedWorkbook("the file is empty", expected="a workbook", advice=_SAVE_AGAIN, file=path)
        if start == _COMPOUND:
            return _compound_make(file, path)
        if start[:4] not in _ZIP:
            raise NotAWorkbook(
                f"{path.name} is not a workbook",
                expected="a workbook (.xlsx or .xlsm)",
                advice="Save it as a workbook (.xlsx) and send it again.",
                file=path,
            )
        return _zip_make(file, path)


def _zip_make(file: BinaryIO, path: Path) -> Make:
    try:
        archive = zipfile.ZipFile(file)
    except (zipfile.BadZipFile, ValueError, struct.error, OSError) as error:
        raise DamagedWorkbook(
            "the file begins like a workbook and breaks off or is corrupt", advice=_SAVE_AGAIN, file=path
        ) from error
    with archive:
        _check_sizes(archive, path)
        names = {info.filename.casefold().lstrip("/") for info in archive.infolist()}
        if "mimetype" in names and archive.read("mimetype").strip().startswith(_OPEN_DOCUMENT):
            return "open document"
        if "[content_types].xml" not in names or not any(n.startswith("_rels") for n in names):
            raise NotAWorkbook(
                f"{path.name} is an archive without a workbook in it",
                expected="a workbook (.xlsx or .xlsm)",
                file=path,
            )
        return "binary package" if "xl/workbook.bin" in names else "package"


def _check_sizes(archive: zipfile.ZipFile, path: Path) -> None:
    members = archive.infolist()
    if len(members) > MOST_MEMBERS:
        raise UnsafeWorkbook(f"the file holds {len(members)} parts", expected=f"{MOST_MEMBERS} at most", file=path)
    total = sum(info.file_size for info in members)
    if total > MOST_BYTES:
        raise UnsafeWorkbook(
            f"the file would unpack to {total >> 20} MiB", expected=f"{MOST_BYTES >> 20} MiB at most", file=path
        )
    for info in members:
        ratio = info.file_size // max(info.compress_size, 1)
        if info.file_size > RATIO_FROM and ratio > MOST_RATIO:
            raise UnsafeWorkbook(
                f"the part {info.filename} would unpack to {ratio} times its size",
                expected=f"{MOST_RATIO} times at most",
                file=path,
            )
        if info.flag_bits & 1:
            raise EncryptedWorkbook(
                "the file is protected by a password", advice="Remove the password and send it again.", file=path
            )


def _compound_make(file: BinaryIO, path: Path) -> Make:
    names = _stream_names(file)
    if "EncryptedPackage" in names or "EncryptionInfo" in names:
        raise EncryptedWorkbook(
            "the workbook is protected by a password",
            advice="Remove the password (save it without one) and send it again.",
            file=path,
        )
    if "Workbook" in names or "Book" in names:
        return "old"
    raise NotAWorkbook(f"{path.name} is a document of another program", expected="a workbook (.xlsx)", file=path)


def _stream_names(file: BinaryIO) -> set[str]:
    """Names of the streams of a compound file, looked for at every place where a directory entry may stand."""
    file.seek(0)
    data = file.read(64 << 20)
    found: set[str] = set()
    for name in ("EncryptedPackage", "EncryptionInfo", "Workbook", "Book"):
        entry = name.encode("utf-16-le") + b"\0\0"
        place = data.find(entry)
        while place >= 0:
            length = data[place + 64 : place + 66]
            if place % 128 == 0 and len(length) == 2 and struct.unpack("<H", length)[0] == len(entry):
                found.add(name)
                break
            place = data.find(entry, place + 1)
    return found
