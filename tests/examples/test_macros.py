"""The written project of macros, read back by its published description ([MS-CFB], [MS-OVBA])."""

from __future__ import annotations

import struct
import zipfile
from pathlib import Path

import pytest

from tests.examples.compound_file import Entry, compound_file
from tests.examples.macros import INTAKE, PROJECT_ID, compressed, vba_project, veiled
from tests.examples.make import FOLDER
from tests.office import converted, office

SECTOR, MINI, END = 512, 64, 0xFFFFFFFE


def streams_of(content: bytes) -> dict[str, bytes]:
    """Paths and contents of the streams of a compound file, found through its tree as a reader would."""
    header = struct.unpack_from("<9L", content, 40)
    (fat_at,) = struct.unpack_from("<L", content, 76)

    def sector(number: int) -> bytes:
        return content[(number + 1) * SECTOR : (number + 2) * SECTOR]

    fat = struct.unpack("<128L", sector(fat_at))

    def chain(start: int) -> bytes:
        whole = b""
        while start != END:
            whole += sector(start)
            start = fat[start]
        return whole

    directory = chain(header[2])
    entries = [directory[at : at + 128] for at in range(0, len(directory), 128)]
    table = chain(header[5])
    mini_fat = struct.unpack(f"<{len(table) // 4}L", table)
    root_start, root_size = struct.unpack_from("<LQ", entries[0], 116)
    mini = chain(root_start)[:root_size]
    found: dict[str, bytes] = {}

    def walk(number: int, path: str) -> None:
        if number == 0xFFFFFFFF:
            return
        length, kind, colour, left, right, below = struct.unpack_from("<HBBLLL", entries[number], 64)
        assert colour == 1
        name = path + entries[number][: length - 2].decode("utf-16-le")
        walk(left, path)
        if kind == 2:
            start, size = struct.unpack_from("<LQ", entries[number], 116)
            whole = b""
            while start != END:
                whole += mini[start * MINI : (start + 1) * MINI]
                start = mini_fat[start]
            found[name] = whole[:size]
        walk(below, f"{name}/")
        walk(right, path)

    walk(struct.unpack_from("<L", entries[0], 76)[0], "")
    return found


def decompressed(container: bytes) -> bytes:
    """The content of a compressed container of literal bytes."""
    assert container[0] == 1
    (head,) = struct.unpack_from("<H", container, 1)
    assert head >> 12 == 0xB
    assert (head & 0xFFF) + 3 == len(container) - 1
    body, out = container[3:], b""
    for at in range(0, len(body), 9):
        assert body[at] == 0
        out += body[at + 1 : at + 9]
    return out


def unveiled(text: str) -> tuple[int, int, bytes]:
    """Version, project key and content of a veiled value ([MS-OVBA] 2.4.3.3)."""
    data = bytes.fromhex(text)
    version, key = data[0] ^ data[1], data[0] ^ data[2]
    plain, out = key, b""
    for at in range(3, len(data)):
        plain = data[at] ^ ((data[at - 2] + plain) & 0xFF)
        out += bytes([plain])
    out = out[(data[0] & 6) // 2 :]
    (length,) = struct.unpack_from("<L", out)
    assert length == len(out) - 4
    return version, key, out[4:]


def records(directory: bytes) -> list[tuple[int, bytes]]:
    """The records of the stream dir; the version record has a length of its own."""
    found: list[tuple[int, bytes]] = []
    at = 0
    while at < len(directory):
        kind, length = struct.unpack_from("<HL", directory, at)
        length += 2 if kind == 0x0009 else 0
        found.append((kind, directory[at + 6 : at + 6 + length]))
        at += 6 + length
    return found


@pytest.fixture(scope="module")
def streams() -> dict[str, bytes]:
    return streams_of(vba_project(["Sheet1", "Sheet2"]))


def test_every_stream_is_found_through_the_tree(streams: dict[str, bytes]) -> None:
    modules = {"VBA/ThisWorkbook", "VBA/Sheet1", "VBA/Sheet2", "VBA/Intake"}
    assert set(streams) == modules | {"VBA/dir", "VBA/_VBA_PROJECT", "PROJECT", "PROJECTwm"}


def test_sources_come_back(streams: dict[str, bytes]) -> None:
    assert decompressed(streams["VBA/Intake"]).decode("cp1252") == INTAKE
    assert decompressed(streams["VBA/Sheet2"]).startswith(b'Attribute VB_Name = "Sheet2"\r\n')


def test_the_directory_names_every_module(streams: dict[str, bytes]) -> None:
    found = records(decompressed(streams["VBA/dir"]))
    assert found[-1][0] == 0x0010
    assert [text for kind, text in found if kind == 0x0019] == [b"ThisWorkbook", b"Sheet1", b"Sheet2", b"Intake"]
    assert [text for kind, text in found if kind == 0x000F] == [struct.pack("<H", 4)]
    assert [kind for kind, _ in found if kind in (0x0021, 0x0022)] == [0x0022] * 3 + [0x0021]


def test_the_project_is_neither_protected_nor_hidden(streams: dict[str, bytes]) -> None:
    lines = dict(line.split("=", 1) for line in streams["PROJECT"].decode("cp1252").splitlines() if "=" in line)
    key = sum(PROJECT_ID.encode()) & 0xFF
    assert unveiled(lines["CMG"].strip('"')) == (2, key, bytes(4))
    assert unveiled(lines["DPB"].strip('"')) == (2, key, bytes(1))
    assert unveiled(lines["GC"].strip('"')) == (2, key, b"\xff")


def test_what_is_too_long_is_refused() -> None:
    with pytest.raises(ValueError, match="one chunk"):
        compressed(bytes(5000))
    with pytest.raises(ValueError, match="mini stream"):
        compound_file([Entry("long", bytes(4096))])
    with pytest.raises(ValueError, match="one sector"):
        compound_file([Entry(f"s{i}", bytes(4000)) for i in range(20)])


def test_veiled_bytes_differ_from_the_plain_ones() -> None:
    assert veiled(b"\0", 0x5C)[2:] != "00" * (len(veiled(b"\0", 0x5C)) // 2 - 1)


@office
def test_another_program_reads_the_macro(tmp_path: Path) -> None:
    (book,) = converted([FOLDER / "wear-ring-macros.xlsm"], "ods", tmp_path)
    with zipfile.ZipFile(book) as archive:
        module = archive.read("Basic/VBAProject/Intake.xml").decode()
    assert "Sub StampDate()" in module
