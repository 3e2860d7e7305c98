"""Claims: a folder in working/ for each file taken, named after the service that holds it.

    working/<owner>.<number>/
        claim.json          what was taken, from where
        file/NAME           the dropped file, moved here in one step
        answer-1, -2 ...    where a try puts its results; only the last one counts
        done.json           the decision: what goes where (see `publish`)

The number of `answer-` folders is the number of tries begun, so that it survives any kill.
"""

from __future__ import annotations

import contextlib
import errno
import json
import secrets
import time
from dataclasses import asdict, dataclass, replace
from itertools import count
from pathlib import Path, PurePosixPath

from sheetqc.folder.layout import Layout
from sheetqc.folder.moves import is_there, move, patiently, put_back, remove, remove_tree, write_whole
from sheetqc.folder.names import numbered, split, workable

_numbers = count(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Claim:
    """A file taken out of in/.

    `place` is its subfolder there ("" at the top) and `name` what it was called; `ticket` stays the same when another
    service takes the claim over. `crashes` counts the tries in which the answering process died working on this file
    alone, `troubles` those that failed for a reason outside the file.
    """

    folder: Path
    ticket: str
    place: str
    name: str
    taken: float
    crashes: int = 0
    troubles: int = 0

    @property
    def file(self) -> Path:
        """The claimed file."""
        return self.folder / "file" / workable(self.name)

    @property
    def owner(self) -> str:
        """The service that holds the claim."""
        return owner_of(self.folder)

    @property
    def done(self) -> Path:
        """The record of the decision."""
        return self.folder / "done.json"

    @property
    def shown(self) -> str:
        """Name with subfolder, for people."""
        return f"{self.place}/{self.name}" if self.place else self.name

    @property
    def tries(self) -> int:
        """Tries begun so far."""
        return max((_number(p) for p in self.folder.glob("answer-*")), default=0)

    def next_try(self) -> Path:
        """A fresh folder for results; what earlier tries left is removed."""
        tries = self.tries
        for number in range(1, tries + 1):
            for left in (self.folder / f"answer-{number}").glob("*"):
                with contextlib.suppress(OSError):
                    remove(left)
        into = self.folder / f"answer-{tries + 1}"
        into.mkdir()
        return into


def owner_of(folder: Path) -> str:
    """The service that holds a claim folder."""
    return folder.name.rpartition(".")[0]


def take(layout: Layout, owner: str, path: Path) -> Claim | None:
    """Claim a file in in/; None when another service was faster or the file is gone.

    Raises
    ------
    OSError : when it cannot be moved now
    """
    place = PurePosixPath(path.parent.relative_to(layout.inbox).as_posix()).as_posix()
    claim = Claim(
        folder=_new_folder(layout, owner),
        ticket=secrets.token_hex(8),
        place="" if place == "." else place,
        name=path.name,
        taken=time.time(),
    )
    try:
        claim.file.parent.mkdir(parents=True)
        _write(claim)
        _move_in(path, claim)
    except OSError as error:
        if is_there(claim.file):  # some shares report a rename as failed that was done
            return claim
        drop(claim)
        if isinstance(error, FileNotFoundError):
            return None
        raise
    return claim


def take_back(layout: Layout, owner: str, folder: Path) -> Claim | None:
    """Take over the claim of a dead service; None when there is nothing in it or another was faster."""
    mine = layout.working / f"{owner}.{next(_numbers):06d}"
    try:
        patiently(lambda: folder.replace(mine))
    except FileNotFoundError:
        return None
    claim = _read(mine)
    if claim is not None:
        _let_go(layout, claim)
    claim = _opened(mine)
    if claim is not None and _was_given_back(layout, claim):
        remove(claim.file)
        drop(claim)
        return None
    return claim


def _opened(folder: Path) -> Claim | None:
    """The claim in a folder; None, and the folder removed, when it holds no file and no decision."""
    files = [p for p in (folder / "file").glob("*") if not p.name.startswith(".")]
    claim = _read(folder) or Claim(
        folder=folder,
        ticket=secrets.token_hex(8),
        place="",
        name=files[0].name if files else folder.name,
        taken=time.time(),
    )
    if not files and not is_there(claim.done):
        drop(claim)
        return None
    return claim


def _was_given_back(layout: Layout, claim: Claim) -> bool:
    """Whether the file stands in in/ already: the kill came between its two names there and here."""
    returned = layout.inbox / claim.place / claim.name
    return is_there(returned) and is_there(claim.file) and returned.samefile(claim.file)


def seen(folder: Path) -> Claim | None:
    """The claim in a folder as far as its record can be read; changes nothing."""
    return _read(folder)


def noted(claim: Claim, *, crashes: int = 0, troubles: int = 0) -> Claim:
    """The claim with more crashes or troubles, also on the disk."""
    changed = replace(claim, crashes=claim.crashes + crashes, troubles=claim.troubles + troubles)
    _write(changed)
    return changed


def release(layout: Layout, claim: Claim) -> None:
    """Give a file back to in/, under its own name or the next free one, and drop the claim."""
    stem, suffix = split(claim.name)
    for free in numbered(stem):
        if put_back(claim.file, layout.inbox / claim.place / (free + suffix)):
            break
    drop(claim)


def drop(claim: Claim) -> None:
    """Remove a claim, but never the file it is about: while that is in it, the claim stays.

    The decision goes last, so that a half removed claim is known for what it is.

    Raises
    ------
    OSError : when the claim still holds its file, or cannot be removed now
    """
    if is_there(claim.file):
        raise OSError(errno.EBUSY, "the claim still holds its file", str(claim.file))
    for path in (claim.folder / "file").glob("*"):
        remove(path)
    with contextlib.suppress(FileNotFoundError):
        (claim.folder / "file").rmdir()
    for path in claim.folder.glob("answer-*"):
        remove_tree(path)
    for path in [p for p in claim.folder.glob("*") if p != claim.done and not p.is_dir()]:
        remove(path)
    remove(claim.done)
    with contextlib.suppress(FileNotFoundError):
        claim.folder.rmdir()


def _new_folder(layout: Layout, owner: str) -> Path:
    folder = layout.working / f"{owner}.{next(_numbers):06d}"
    folder.mkdir()
    return folder


def _move_in(path: Path, claim: Claim) -> None:
    if _same_volume(path.parent, claim.folder):
        patiently(lambda: path.rename(claim.file))
        return
    held = held_name(path, claim)  # a rename within in/ decides between services; the copy may take its time
    patiently(lambda: path.rename(held))
    try:
        move(held, claim.file)
    except BaseException:
        with contextlib.suppress(OSError):
            put_back(held, path)
        raise


def held_name(path: Path, claim: Claim) -> Path:
    """Name beside a file under which it is held in in/ while it is copied to another volume."""
    return path.with_name(f".{claim.ticket}.sheetqc-claim")


def _same_volume(one: Path, other: Path) -> bool:
    return one.stat().st_dev == other.stat().st_dev


def _let_go(layout: Layout, claim: Claim) -> None:
    """End what a kill on the way from another volume has left: the copy is whole, or it is none."""
    target = layout.inbox / claim.place / claim.name
    held = held_name(target, claim)
    if not is_there(held):
        return
    if is_there(claim.file):
        remove(held)
        return
    stem, suffix = split(claim.name)
    for free in numbered(stem):
        if put_back(held, target.with_name(free + suffix)):
            return


def _write(claim: Claim) -> None:
    record = {k: v for k, v in asdict(claim).items() if k != "folder"}
    write_whole(claim.folder / "claim.json", json.dumps(record, indent=1).encode("ascii"))


def _read(folder: Path) -> Claim | None:
    try:
        record = json.loads((folder / "claim.json").read_text("ascii"))
        claim = Claim(folder=folder, **record)
        # a record that was tampered with must not lead out of the folder
        safe = PurePosixPath(claim.place)
        inside = not safe.is_absolute() and ".." not in safe.parts and PurePosixPath(claim.name).name == claim.name
        return claim if inside else None
    except (OSError, ValueError, TypeError):
        return None


def _number(path: Path) -> int:
    tail = path.name.rpartition("-")[2]
    return int(tail) if tail.isdigit() else 0
