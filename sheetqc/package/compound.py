"""Files in the old compound format: which streams they hold, and so what they are."""

from __future__ import annotations

import struct
from typing import BinaryIO

MAGIC = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
MOST_SECTORS = 4096
_ENTRY = 128
_PASSWORD_RECORD = 0x002F
_END_OF_SUBSTREAM = 0x000A


def stream_starts(file: BinaryIO) -> dict[str, int]:
    """First sector of every named stream of the file, empty when its directory cannot be followed."""
    file.seek(0)
    header = file.read(512)
    if len(header) < 512:
        return {}
    size = _sector_size(header)
    (sector,) = struct.unpack_from("<L", header, 48)
    fat = _first_table(file, header, size)
    found: dict[str, int] = {}
    for _ in range(MOST_SECTORS):
        block = _sector(file, sector, size)
        if not block:
            break
        found.update(_entries(block))
        sector = fat.get(sector, -1)
    return found


def workbook_has_password(file: BinaryIO, streams: dict[str, int]) -> bool:
    """Whether an old binary workbook (.xls) says near its start that it is encrypted."""
    file.seek(0)
    size = _sector_size(file.read(512))
    start = streams.get("Workbook", streams.get("Book"))
    block = _sector(file, start, size) if start is not None else b""
    at = 0
    while at + 4 <= len(block):
        record, length = struct.unpack_from("<2H", block, at)
        if record == _PASSWORD_RECORD:
            return True
        if record == _END_OF_SUBSTREAM:
            break
        at += 4 + length
    return False


def _sector_size(header: bytes) -> int:
    (shift,) = struct.unpack_from("<H", header, 30)
    return 1 << shift if shift in (9, 12) else 512


def _sector(file: BinaryIO, number: int, size: int) -> bytes:
    if not 0 <= number < 0xFFFFFFFA:
        return b""
    file.seek((number + 1) * size)
    return file.read(size)


def _first_table(file: BinaryIO, header: bytes, size: int) -> dict[int, int]:
    """Chains of sectors, as far as the header's own list of tables goes."""
    chains: dict[int, int] = {}
    for index, number in enumerate(struct.unpack_from("<109L", header, 76)):
        block = _sector(file, number, size)
        if not block:
            break
        per_table = size // 4
        for at in range(len(block) // 4):
            chains[index * per_table + at] = struct.unpack_from("<L", block, 4 * at)[0]
    return chains


def _entries(block: bytes) -> dict[str, int]:
    found: dict[str, int] = {}
    for at in range(0, len(block) - _ENTRY + 1, _ENTRY):
        (length,) = struct.unpack_from("<H", block, at + 64)
        if 2 <= length <= 64:
            name = block[at : at + length - 2].decode("utf-16-le", "replace")
            found[name] = struct.unpack_from("<L", block, at + 116)[0]
    return found
