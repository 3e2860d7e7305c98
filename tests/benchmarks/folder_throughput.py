"""How many files a served folder answers in which time, with one worker and with two, and what the service needs.

    python -m tests.benchmarks.folder_throughput [FILES] [--workbook FILE]

Without a workbook the answering is a stand-in that computes for a set time, so that what is measured is the folder
itself; with one, copies of it that differ in one byte go through the whole of sheetqc.
"""

from __future__ import annotations

import argparse
import hashlib
import shutil
import tempfile
import time
import zipfile
from collections.abc import Callable
from contextlib import suppress
from pathlib import Path

from sheetqc.folder import Answerer, serve
from sheetqc.outcome import Outcome
from tests.folder import standin

COMPUTING = 0.1
"""Seconds of processor time that the stand-in takes for a file."""


def computing(path: Path, into: Path) -> Outcome:
    """Answer after computing for a while."""
    end = time.process_time() + COMPUTING
    while time.process_time() < end:
        hashlib.sha256(b"0" * 10_000).digest()
    return standin.answer(path, into)


def fill(inbox: Path, count: int, workbook: Path | None) -> None:
    """Drop so many files of different content."""
    inbox.mkdir(parents=True)
    for number in range(count):
        target = inbox / f"{number:05d}{workbook.suffix if workbook else '.xlsx'}"
        if workbook is None:
            standin.package(target, str(number))
        else:
            shutil.copyfile(workbook, target)
            with zipfile.ZipFile(target, "a") as package:
                package.comment = str(number).encode()


def resident() -> float | None:
    """Memory of this process in MB; None where /proc is not."""
    with suppress(OSError):
        for line in Path("/proc/self/status").read_text().splitlines():
            if line.startswith("VmRSS:"):
                return int(line.split()[1]) / 1000
    return None


def measured(count: int, workers: int, answer: Answerer, workbook: Path | None, note: Callable[[str], None]) -> float:
    """Seconds in which a folder with so many files was answered."""
    with tempfile.TemporaryDirectory() as place:
        folder = Path(place) / "served"
        fill(folder / "in", count, workbook)
        start, before = time.perf_counter(), resident()
        result = serve(folder, answer, once=True, workers=workers, say=lambda _: None)
        seconds, after = time.perf_counter() - start, resident()
    memory = "" if before is None or after is None else f", memory of the service {before:.0f} -> {after:.0f} MB"
    note(
        f"{workers} worker(s): {result.answered} answered, {result.returned} returned in {seconds:.1f} s, "
        f"{1000 * seconds / count:.0f} ms a file{memory}"
    )
    return seconds


def main() -> None:
    """Measure and print."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("files", nargs="?", type=int, default=200)
    parser.add_argument("--workbook", type=Path)
    options = parser.parse_args()
    answer: Answerer = computing
    if options.workbook:
        from sheetqc.pipeline import answer as whole

        answer = whole
    one = measured(options.files, 1, answer, options.workbook, print)
    two = measured(options.files, 2, answer, options.workbook, print)
    print(f"two workers are {one / two:.2f} times as fast")
    if not options.workbook:
        own = one / options.files - COMPUTING
        print(f"the folder's own share is {1000 * own:.1f} ms a file with one worker")
        measured(2000, 2, standin.answer, None, print)


if __name__ == "__main__":
    main()
