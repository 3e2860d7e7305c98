"""What adding sheets to a large workbook costs beyond copying its bytes.

`python -m tests.benchmarks.graft_cost [MEGABYTES]` prints milliseconds and the memory used.
"""

from __future__ import annotations

import random
import shutil
import statistics
import sys
import tempfile
import time
import tracemalloc
import zipfile
from collections.abc import Callable
from pathlib import Path

from sheetqc.package import graft
from tests.package.additions import write_additions
from tests.package.foreign import furnished

MEGABYTE = 1_000_000


def large(path: Path, megabytes: int) -> Path:
    """A workbook of that size: mostly pictures, and some sheets that nothing can pack well."""
    furnished(path)
    rng = random.Random(1)
    with zipfile.ZipFile(path, "a", zipfile.ZIP_STORED) as archive:
        for number in range(megabytes):
            archive.writestr(f"xl/media/picture{number}.jpeg", rng.randbytes(MEGABYTE))
    return path


def milliseconds(work: Callable[[], object], times: int = 7) -> float:
    """Median time of a piece of work."""
    taken = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        taken.append(1000 * (time.perf_counter() - start))
    return statistics.median(taken)


def main() -> None:
    """Prints the costs."""
    megabytes = int(sys.argv[1]) if len(sys.argv) > 1 else 100
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        additions = write_additions(folder / "additions.xlsx")
        small = furnished(folder / "small.xlsx")
        original = large(folder / "large.xlsx", megabytes)
        copying = milliseconds(lambda: shutil.copyfile(original, folder / "copied.xlsx"))
        grafting = milliseconds(lambda: graft(original, additions, folder / "copy.xlsx"))
        least = milliseconds(lambda: graft(small, additions, folder / "copy.xlsx"))
        tracemalloc.start()
        graft(original, additions, folder / "copy.xlsx")
        peak = tracemalloc.get_traced_memory()[1] / MEGABYTE
    print(f"copying {megabytes} MB: {copying:.0f} ms; grafting: {grafting:.0f} ms; onto a small one: {least:.0f} ms")
    print(f"memory at most: {peak:.1f} MB")


if __name__ == "__main__":
    main()
