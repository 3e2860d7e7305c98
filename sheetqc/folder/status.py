"""What a served folder holds and does; only looks, so that it can be asked at any time from anywhere."""

from __future__ import annotations

import contextlib
import time
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from sheetqc.errors import UsageError
from sheetqc.folder import claims
from sheetqc.folder.layout import Layout
from sheetqc.folder.names import printable
from sheetqc.folder.owners import BEAT, PATIENCE, host_of, lock_state, pid_of, this_host
from sheetqc.folder.sweep import dropped_files

_SHOWN = 10


@dataclass(frozen=True, slots=True, kw_only=True)
class Service:
    """A service on the folder; `alive` is None where it runs on another machine and cannot be told for certain."""

    host: str
    pid: str
    alive: bool | None


@dataclass(frozen=True, slots=True, kw_only=True)
class InWork:
    """A claimed file: its name, the machine that holds it, for how many seconds, and the tries begun."""

    name: str
    host: str
    seconds: float
    tries: int


@dataclass(frozen=True, slots=True, kw_only=True)
class FolderStatus:
    """State of a served folder.

    `waiting` are names in in/ that will be taken; `aside` are those that will not, each with the reason;
    `recent` are the newest results, (time, what became of it, name), newest first.
    """

    folder: Path
    services: tuple[Service, ...]
    waiting: tuple[str, ...]
    aside: tuple[tuple[str, str], ...]
    in_work: tuple[InWork, ...]
    answered: int
    returned: int
    summary_due: bool
    recent: tuple[tuple[float, str, str], ...] = ()

    def __str__(self) -> str:
        """The status as lines for people."""
        return "\n".join(_lines(self))


def status(folder: Path) -> FolderStatus:
    """The state of a served folder.

    Raises
    ------
    UsageError : when the folder is not there, or was never served
    """
    layout = Layout(folder.resolve())
    if not layout.reachable():
        raise UsageError(f"{folder} is not a served folder: it has no folder in/")
    dropped = [(printable(d.path.relative_to(layout.inbox).as_posix()), d.aside) for d in dropped_files(layout.inbox)]
    results = sorted(_results(layout), reverse=True)
    return FolderStatus(
        folder=layout.root,
        services=tuple(_services(layout)),
        waiting=tuple(name for name, aside in dropped if not aside),
        aside=tuple((name, aside) for name, aside in dropped if aside and "temporary" not in aside),
        in_work=tuple(_in_work(layout)),
        answered=sum(1 for _, state, _ in results if state == "answered"),
        returned=sum(1 for _, state, _ in results if state == "returned"),
        summary_due=layout.due.exists(),
        recent=tuple(results[:_SHOWN]),
    )


def _services(layout: Layout) -> Iterator[Service]:
    for path in sorted(layout.owners.glob("*.lock")):
        here = host_of(path.stem) == this_host()
        state = lock_state(path)
        alive = True if state == "held" else False if here and state == "free" else _beats(path.with_suffix(".beat"))
        yield Service(host=host_of(path.stem), pid=pid_of(path.stem), alive=alive)


def _beats(beat: Path) -> bool | None:
    """Whether a beat is fresh; the clocks of two machines may differ, so that an old one proves nothing."""
    with contextlib.suppress(OSError):
        if abs(time.time() - beat.stat().st_mtime) < PATIENCE + BEAT:
            return True
    return None


def _in_work(layout: Layout) -> Iterator[InWork]:
    with contextlib.suppress(OSError):
        for folder in sorted(layout.working.iterdir()):
            claim = claims.seen(folder)
            if claim is not None:
                yield InWork(
                    name=printable(claim.shown),
                    host=host_of(claim.owner),
                    seconds=max(0.0, time.time() - claim.taken),
                    tries=claim.tries,
                )


def _results(layout: Layout) -> Iterator[tuple[float, str, str]]:
    for state, place in (("answered", layout.answered), ("returned", layout.returned)):
        ending = f".{state}.json"
        for path in place.rglob(f"*{ending}"):
            with contextlib.suppress(OSError):
                name = path.relative_to(place).as_posix().removesuffix(ending)
                yield path.stat().st_mtime, state, printable(name)


def _lines(status: FolderStatus) -> Iterator[str]:
    yield str(status.folder)
    alive = [s for s in status.services if s.alive]
    unsure = [s for s in status.services if s.alive is None]
    yield "served by " + (", ".join(f"{s.host} (process {s.pid})" for s in alive) if alive else "nobody at present")
    if unsure:
        yield "no sign of life from " + ", ".join(f"{s.host} (process {s.pid})" for s in unsure)
    counts = (len(status.waiting), len(status.in_work), status.answered, status.returned)
    yield "waiting {}, in work {}, answered {}, returned {}".format(*counts)
    yield from _listed("waiting", status.waiting)
    yield from _listed("in work", [_work_line(w) for w in status.in_work])
    yield from _listed("left alone", [f"{name} {why}" for name, why in status.aside])
    yield from _listed(
        "latest", [f"{time.strftime('%Y-%m-%d %H:%M', time.localtime(t))}  {s}  {n}" for t, s, n in status.recent]
    )
    if status.summary_due:
        yield "the summary is not up to date yet"


def _work_line(work: InWork) -> str:
    tries = "" if work.tries < 2 else f", try {work.tries}"
    return f"{work.name} on {work.host}, for {work.seconds:.0f} s{tries}"


def _listed(title: str, lines: tuple[str, ...] | list[str]) -> Iterator[str]:
    if lines:
        yield f"{title}:"
        yield from (f"  {line}" for line in lines[:_SHOWN])
        if len(lines) > _SHOWN:
            yield f"  and {len(lines) - _SHOWN} more"
