"""From a decision to results in their places, in steps that can be broken off anywhere.

The decision is one file, done.json in the claim, written whole or not at all. Before it exists nothing of the results
can be seen outside the claim, and the file is simply answered again; once it exists the file is never answered again,
and whoever holds the claim only has to carry out what it says: every move in it is skipped when its source is gone.
The workbook goes first, its JSON next (who sees the JSON finds the workbook), the dropped file last.

The name under which results appear must be free in answered/, originals/ and returned/, in this service and in all
others: it is reserved by a file that only one can create, until the results themselves stand there.
"""

from __future__ import annotations

import contextlib
import errno
import hashlib
import json
import os
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from sheetqc.folder.claims import Claim, drop, seen
from sheetqc.folder.layout import Layout
from sheetqc.folder.moves import flush, is_there, move, write_whole
from sheetqc.folder.names import numbered, split


@dataclass(frozen=True, slots=True, kw_only=True)
class Decision:
    """What is to become of a claimed file.

    `results` are files in the claim, in the order in which they are to appear, named after the claimed file;
    `sha256` is the content of that file; `text` tells people what happened.
    """

    answered: bool
    results: tuple[Path, ...]
    sha256: str
    edition: str = ""
    text: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Done:
    """A decision with the places its files go to: (source within the claim, target within the folder)."""

    answered: bool
    stem: str
    moves: tuple[tuple[str, str], ...]
    sha256: str
    edition: str
    text: str

    def targets(self, *endings: str) -> list[str]:
        """Targets with one of these endings, in any case."""
        return [target for _, target in self.moves if target.lower().endswith(endings)]


def decided(layout: Layout, claim: Claim, decision: Decision) -> Done:
    """Write the decision down. From here on the file counts as done.

    Raises
    ------
    OSError : when it cannot be written; nothing is decided then
    """
    for path in decision.results:
        flush(path)
    known = split(claim.file.name)[0]
    stem = _reserved(layout, claim, known)
    place = (layout.answered if decision.answered else layout.returned).relative_to(layout.root) / claim.place
    kept = (layout.originals if decision.answered else layout.returned).relative_to(layout.root) / claim.place
    moves = [(_within(p, claim), (place / (stem + p.name.removeprefix(known))).as_posix()) for p in decision.results]
    moves.append((_within(claim.file, claim), (kept / (stem + split(claim.file.name)[1])).as_posix()))
    done = Done(
        answered=decision.answered,
        stem=stem,
        moves=tuple(moves),
        sha256=decision.sha256,
        edition=decision.edition,
        text=decision.text,
    )
    record = {name: getattr(done, name) for name in Done.__slots__}
    write_whole(claim.done, json.dumps(record, indent=1).encode("ascii"))
    return done


def decision_of(layout: Layout, claim: Claim) -> Done | None:
    """The decision written down in a claim; None when there is none."""
    try:
        record = json.loads(claim.done.read_text("ascii"))
        done = Done(**{**record, "moves": tuple((str(s), str(t)) for s, t in record["moves"])})
    except (OSError, ValueError, TypeError, LookupError):
        return None
    return done if all(_is_inside(claim.folder, s) and _is_inside(layout.root, t) for s, t in done.moves) else None


def carry_out(layout: Layout, claim: Claim, done: Done) -> None:
    """Move everything to its place. May be called again after any failure.

    Raises
    ------
    OSError : when something cannot be moved now
    """
    for source, target in done.moves:
        if is_there(claim.folder / source):
            move(claim.folder / source, layout.root / target)


def closed(layout: Layout, claim: Claim, done: Done) -> None:
    """Drop a claim that was carried out, and free its reservation.

    Raises
    ------
    OSError : when it was not carried out after all (a share that was gone for a moment hides files), or cannot be
        removed now
    """
    left = [source for source, _ in done.moves if is_there(claim.folder / source)]
    if left:
        raise OSError(errno.EBUSY, "not in its place yet", left[0])
    _free(_reservation(layout, claim.place, done.stem), claim)  # while the claim still tells the ticket
    drop(claim)


def _reserved(layout: Layout, claim: Claim, stem: str) -> str:
    layout.names.mkdir(parents=True, exist_ok=True)
    for name in numbered(stem):
        reservation = _reservation(layout, claim.place, name)
        if not _is_mine(reservation, claim):
            continue
        if not _is_used(layout, claim.place, name):
            return name
        _free(reservation, claim)
    raise AssertionError("numbers do not end")


def _is_mine(reservation: Path, claim: Claim) -> bool:
    try:
        with reservation.open("x", encoding="ascii") as stream:
            stream.write(claim.ticket)
            return True
    except FileExistsError:
        try:
            return reservation.read_text("ascii") == claim.ticket
        except OSError:
            return False


def _is_used(layout: Layout, place: str, stem: str) -> bool:
    """Whether any file of this stem stands in the places of results; names differing in case count as the same."""
    wanted = stem.casefold()
    for folder in (layout.answered, layout.originals, layout.returned):
        with contextlib.suppress(FileNotFoundError), os.scandir(folder / place) as entries:
            # thousands may lie there: the cheap comparison first
            near = [entry.name for entry in entries if entry.name.casefold().startswith(wanted)]
            if any(_stem_of(name.casefold()) == wanted for name in near):
                return True
    return False


def _stem_of(name: str) -> str:
    stem = split(name)[0]
    return stem.removesuffix(".answered").removesuffix(".returned")


def _reservation(layout: Layout, place: str, stem: str) -> Path:
    key = f"{place}/{stem}".casefold().encode("utf-8", "surrogateescape")
    return layout.names / hashlib.sha256(key).hexdigest()


def _free(reservation: Path, claim: Claim) -> None:
    with contextlib.suppress(OSError):
        if reservation.read_text("ascii") == claim.ticket:
            reservation.unlink()


def _within(path: Path, claim: Claim) -> str:
    return path.relative_to(claim.folder).as_posix()


def _is_inside(base: Path, relative: str) -> bool:
    parts = Path(relative).parts
    return bool(parts) and not Path(relative).is_absolute() and ".." not in parts


def forget(layout: Layout, ticket: str) -> None:
    """Remove the reservations of a claim that is gone."""
    _forget(layout, lambda held: held == ticket)


def forget_all(layout: Layout) -> None:
    """Remove reservations that no claim stands behind; only for a service that is alone on the folder."""
    claims = [seen(folder) for folder in layout.working.iterdir()]
    if None not in claims:
        tickets = {claim.ticket for claim in claims if claim is not None}
        _forget(layout, lambda held: held not in tickets)


def _forget(layout: Layout, which: Callable[[str], bool]) -> None:
    for path in layout.names.iterdir():
        with contextlib.suppress(OSError):
            if which(path.read_text("ascii")):
                path.unlink()
