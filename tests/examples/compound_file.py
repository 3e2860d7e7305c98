"""Writes small files in the compound format, by its published description [MS-CFB] (version 3, 512-byte sectors).

Streams below 4,096 bytes live in the mini stream; larger ones are not written here.
"""

from __future__ import annotations

import struct
from dataclasses import dataclass, field

SECTOR, MINI_SECTOR, MINI_LIMIT = 512, 64, 4096
_FREE, _END, _FAT, _NONE = 0xFFFFFFFF, 0xFFFFFFFE, 0xFFFFFFFD, 0xFFFFFFFF
_STORAGE, _STREAM, _ROOT = 1, 2, 5


@dataclass(slots=True)
class Entry:
    """An entry of the directory: a stream with its content, or a storage with entries below it."""

    name: str
    content: bytes | None = None
    below: list[Entry] = field(default_factory=list)
    left: int = _NONE
    right: int = _NONE
    child: int = _NONE
    start: int = 0
    size: int = 0


def compound_file(entries: list[Entry]) -> bytes:
    """The bytes of a compound file with these entries at its top."""
    root = Entry("Root Entry", below=entries)
    directory: list[Entry] = []
    _list(root, directory)
    mini, mini_fat = _mini_stream([e for e in directory if e.content is not None])
    root.start, root.size = 0, len(mini)
    mini_sectors = _sectors(mini)
    directory_sectors = _sectors(b"".join(_packed(e, root) for e in directory), _packed_empty())
    mini_fat_sectors = _sectors(struct.pack(f"<{len(mini_fat)}L", *mini_fat), struct.pack("<L", _FREE))
    chains = [len(mini_sectors), len(directory_sectors), len(mini_fat_sectors)]
    fat = [link for start, length in zip(_starts(chains), chains, strict=True) for link in _chain(start, length)]
    fat.append(_FAT)
    if len(fat) > SECTOR // 4:
        raise ValueError("one sector of sector links is all that is written here")
    table = struct.pack(f"<{SECTOR // 4}L", *fat, *[_FREE] * (SECTOR // 4 - len(fat)))
    starts = _starts(chains)
    header = _header(fat_at=len(fat) - 1, directory_at=starts[1], mini_fat_at=starts[2], mini_fats=chains[2])
    return header + b"".join([*mini_sectors, *directory_sectors, *mini_fat_sectors, table])


def _list(entry: Entry, directory: list[Entry]) -> None:
    """Lists an entry and all below it, and joins the entries of each storage to a balanced tree."""
    directory.append(entry)
    for below in entry.below:
        _list(below, directory)
    ordered = sorted(entry.below, key=lambda e: (len(e.name), e.name.upper()))
    entry.child = _tree(ordered, [directory.index(e) for e in ordered])


def _tree(ordered: list[Entry], places: list[int]) -> int:
    if not ordered:
        return _NONE
    middle = len(ordered) // 2
    ordered[middle].left = _tree(ordered[:middle], places[:middle])
    ordered[middle].right = _tree(ordered[middle + 1 :], places[middle + 1 :])
    return places[middle]


def _mini_stream(streams: list[Entry]) -> tuple[bytes, list[int]]:
    mini, links = b"", list[int]()
    for stream in streams:
        content = stream.content or b""
        if len(content) >= MINI_LIMIT:
            raise ValueError(f"{stream.name} is too long for the mini stream")
        stream.start, stream.size = len(mini) // MINI_SECTOR if content else _END, len(content)
        padded = content + bytes(-len(content) % MINI_SECTOR)
        links += _chain(len(mini) // MINI_SECTOR, len(padded) // MINI_SECTOR)
        mini += padded
    return mini, links


def _chain(start: int, length: int) -> list[int]:
    return [*range(start + 1, start + length), _END] if length else []


def _starts(lengths: list[int]) -> list[int]:
    return [sum(lengths[:i]) for i in range(len(lengths))]


def _sectors(content: bytes, filler: bytes = b"\0") -> list[bytes]:
    missing = -len(content) % SECTOR
    content += filler * (missing // len(filler))
    return [content[at : at + SECTOR] for at in range(0, len(content), SECTOR)]


def _packed(entry: Entry, root: Entry) -> bytes:
    name = entry.name.encode("utf-16-le") + b"\0\0"
    kind = _ROOT if entry is root else _STORAGE if entry.content is None else _STREAM
    black = 1  # a tree of black entries only is balanced enough, says [MS-CFB] 2.6.4
    return struct.pack(
        "<64sHBB3L16sLQQLQ",
        name,
        len(name),
        kind,
        black,
        entry.left,
        entry.right,
        entry.child,
        bytes(16),
        0,
        0,
        0,
        entry.start,
        entry.size,
    )


def _packed_empty() -> bytes:
    return struct.pack("<64sHBB3L16sLQQLQ", b"", 0, 0, 0, _NONE, _NONE, _NONE, bytes(16), 0, 0, 0, 0, 0)


def _header(*, fat_at: int, directory_at: int, mini_fat_at: int, mini_fats: int) -> bytes:
    start = struct.pack("<8s16s5H6s", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", bytes(16), 0x3E, 3, 0xFFFE, 9, 6, bytes(6))
    places = struct.pack("<9L", 0, 1, directory_at, 0, MINI_LIMIT, mini_fat_at, mini_fats, _END, 0)
    return start + places + struct.pack("<109L", fat_at, *[_FREE] * 108)
