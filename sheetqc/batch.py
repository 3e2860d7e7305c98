"""Many workbooks answered in one go."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from concurrent.futures import BrokenExecutor, ProcessPoolExecutor, as_completed
from dataclasses import dataclass
from multiprocessing import get_context
from pathlib import Path

from sheetqc.outcome import Outcome

WORKBOOKS = (".xlsx", ".xlsm", ".xltx", ".xltm", ".xls", ".xlsb", ".ods")
"""Endings of what is looked for in a folder."""

OWN = (".answered", ".returned")
"""Ends of the stems of sheetqc's own results, which are no input."""


@dataclass(frozen=True, slots=True)
class Job:
    """One workbook to be answered: its file, the folder and the stem of its results."""

    source: Path
    into: Path
    stem: str


def planned(paths: Iterable[Path], into: Path | None) -> tuple[tuple[Job, ...], tuple[Path, ...]]:
    """The jobs behind paths of workbooks and folders, and the paths that lead nowhere.

    A workbook found below a folder keeps its subfolder below `into`. Where two workbooks would have the same
    results, the later one's stem gets a number.
    """
    jobs: list[Job] = []
    missing: list[Path] = []
    taken: set[Path] = set()
    seen: set[Path] = set()
    for path in paths:
        if not path.exists():
            missing.append(path)
        for source, subfolder in _workbooks(path):
            if source.resolve() in seen:
                continue
            seen.add(source.resolve())
            target = source.parent if into is None else into / subfolder
            jobs.append(Job(source, target, _free_stem(source.stem, target, taken)))
    return tuple(jobs), tuple(missing)


def _workbooks(path: Path) -> Iterator[tuple[Path, Path]]:
    """Each workbook at or below a path with its subfolder; a file that is named is taken whatever it is."""
    if path.is_file():
        yield path, Path()
    elif path.is_dir():
        for found in sorted(path.rglob("*")):
            if found.is_file() and _is_input(found):
                yield found, found.parent.relative_to(path)


def _is_input(path: Path) -> bool:
    return (
        path.suffix.lower() in WORKBOOKS
        and not path.name.startswith(("~$", "."))
        and not path.stem.lower().endswith(OWN)
    )


def _free_stem(stem: str, folder: Path, taken: set[Path]) -> str:
    free, number = stem, 1
    while (folder / free.casefold()) in taken:
        number += 1
        free = f"{stem} ({number})"
    taken.add(folder / free.casefold())
    return free


def answer_job(job: Job) -> Outcome:
    """Answers one job; a function of the module, so that a process of its own can be handed it."""
    from sheetqc.pipeline import answer

    try:
        return answer(job.source, job.into, stem=job.stem)
    except OSError as error:
        return _left(job, f"its results could not be written ({error})")


def _left(job: Job, why: str) -> Outcome:
    """The outcome of a job without results; the run goes on with the others."""
    return Outcome(source=job.source, state="returned", report=job.into / f"{job.stem}.returned.json", text=why)


def answer_all(jobs: Sequence[Job], *, workers: int = 1) -> Iterator[Outcome]:
    """The outcome of each job, as it is done; with several workers not in their order."""
    if workers == 1 or len(jobs) < 2:
        yield from map(answer_job, jobs)
        return
    with ProcessPoolExecutor(min(workers, len(jobs)), mp_context=get_context("spawn")) as pool:
        futures = {pool.submit(answer_job, job): job for job in jobs}
        for future in as_completed(futures):
            try:
                yield future.result()
            except BrokenExecutor:
                yield _left(futures[future], "the process that answered it, or one beside it, ended unexpectedly")
