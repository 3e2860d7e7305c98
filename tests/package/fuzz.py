"""Mutated workbooks: each is served or refused with a reason, and nothing else happens.

`python -m tests.package.fuzz N [SEED]` tries N of them and prints what became of each kind.
"""

from __future__ import annotations

import collections
import random
import re
import sys
import tempfile
import time
import zipfile
from pathlib import Path

from sheetqc.errors import WorkbookError
from sheetqc.package import check, graft, parts, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import FOREIGN
from tests.package.packages import contents, packed

SLOWEST = 10.0  # seconds that one workbook may take
_ODD = (b"", b"-1", b"0", b"99999999999999999999", b"NaN", b"../../x", b"\xff\xfe", b"&#0;", b"&lol;", b"'", b"qc.x.y")
_LISTS = ("workbook.xml", "styles.xml", ".rels", "[Content_Types].xml")


def mutated(content: bytes, rng: random.Random) -> bytes:
    """A workbook with a few things wrong: bytes of the file, or text inside of its parts."""
    if rng.random() < 0.35:
        return _bytes_changed(content, rng)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "whole.xlsx"
        path.write_bytes(content)
        members = contents(path)
        for _ in range(rng.randint(1, 3)):
            _part_changed(members, rng)
        return packed(path, members).read_bytes()


def _bytes_changed(content: bytes, rng: random.Random) -> bytes:
    data = bytearray(content)
    for _ in range(rng.choice((1, 1, 2, 5, 40))):
        at = rng.randrange(len(data))
        match rng.randrange(5):
            case 0:
                data[at] = rng.randrange(256)
            case 1:
                del data[at : at + rng.randint(1, 200)]
            case 2:
                data[at:at] = data[at : at + rng.randint(1, 200)]
            case 3:
                at = max(0, len(data) - rng.randint(1, 900))  # the list of members
                data[at] = rng.randrange(256)
            case _:
                del data[rng.randrange(1, len(data) + 1) :]
        if not data:
            break
    return bytes(data)


def _part_changed(members: dict[str, bytes], rng: random.Random) -> None:
    names = sorted(members)
    lists = [name for name in names if name.endswith(_LISTS)]
    name = rng.choice(lists if lists and rng.random() < 0.8 else names)
    match rng.randrange(9):
        case 0:
            members.pop(name)
        case 1:
            members[name.upper() if rng.random() < 0.5 else f"{name}x"] = members.pop(name)
        case 2:
            members[name] = b"<!DOCTYPE a [<!ENTITY lol 'x'>]>" + members[name]
        case 3:
            members[name] = members[rng.choice(names)]
        case _:
            members[name] = _text_changed(members[name], rng)


def _text_changed(text: bytes, rng: random.Random) -> bytes:
    values = list(re.finditer(rb'"[^"<>]*"', text))
    tags = list(re.finditer(rb"<[^>]+>", text))
    match rng.randrange(6):
        case 0 | 1 if values:
            found = rng.choice(values)
            other = rng.choice((rng.choice(_ODD), rng.choice(values).group()[1:-1]))
            return text[: found.start() + 1] + other + text[found.end() - 1 :]
        case 2 if tags:
            found = rng.choice(tags)
            return text[: found.start()] + text[found.end() :]
        case 3 if tags:
            a, b = sorted((rng.choice(tags).start(), rng.choice(tags).end()))
            return text[:a] + text[b:]
        case 4 if tags:
            found = rng.choice(tags)
            return text[: found.end()] + found.group() + text[found.end() :]
        case _:
            return re.sub(rb'\s\w+="[^"]*"', b"", text, count=rng.randint(1, 9))


def fate(path: Path, additions: Path, into: Path) -> str:
    """What became of one workbook: "grafted" or the kind of error; anything unexpected is raised."""
    into.unlink(missing_ok=True)
    before = path.read_bytes()
    start = time.perf_counter()
    outcome = _served(path, additions, into)
    if time.perf_counter() - start > SLOWEST:
        raise AssertionError(f"took longer than {SLOWEST} s")
    if path.read_bytes() != before:
        raise AssertionError("the original was changed")
    if [p for p in into.parent.iterdir() if p.suffix == ".part"]:
        raise AssertionError("something half-written was left")
    if (outcome == "grafted") != into.exists():
        raise AssertionError(f"{outcome}, but the copy says otherwise")
    return outcome


def _served(path: Path, additions: Path, into: Path) -> str:
    for read in (check, sheet_names, parts):
        try:
            read(path)
        except WorkbookError:
            continue
    try:
        graft(path, additions, into)
    except WorkbookError as error:
        if "own check" in error.met:
            raise
        return type(error).__name__
    with zipfile.ZipFile(into) as archive:
        assert sum("added" in name for name in archive.namelist()) >= 8
    assert set(sheet_names(into)) > set(sheet_names(path, earlier_answer=False))
    return "grafted"


def tried(count: int, seed: int, folder: Path) -> collections.Counter[str]:
    """How many of so many mutated workbooks met which fate.

    Raises
    ------
    AssertionError : some met another fate than being served or refused; they are kept in the folder
    """
    additions = write_additions(folder / "additions.xlsx")
    originals = [maker(folder / f"{maker.__name__}.xlsx") for maker in FOREIGN]
    graft(originals[0], additions, folder / "answered.xlsx")
    pool = [path.read_bytes() for path in (*originals, folder / "answered.xlsx")]
    rng = random.Random(seed)
    tally: collections.Counter[str] = collections.Counter()
    path = folder / "mutated.xlsx"
    wrong: list[str] = []
    for number in range(count):
        path.write_bytes(mutated(rng.choice(pool), rng))
        try:
            tally[fate(path, additions, folder / "copy.xlsx")] += 1
        except Exception as error:
            kept = path.rename(folder / f"seed{seed}-number{number}.xlsx")
            wrong.append(f"{kept}: {error!r}")
    if wrong:
        raise AssertionError("\n".join(wrong))
    return tally


def main() -> None:
    """Tries as many as the command says."""
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 20_000
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else 1
    folder = Path(tempfile.mkdtemp(prefix="fuzz-"))
    start = time.perf_counter()
    tally = tried(count, seed, folder)
    print(f"{count} workbooks in {time.perf_counter() - start:.0f} s: {dict(tally.most_common())}")


if __name__ == "__main__":
    main()
