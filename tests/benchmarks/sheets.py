"""Writing result sheets: `python -m tests.benchmarks.sheets [CHARACTERISTICS]`.

Prints the processor time and the bytes per characteristic of 125 values with eleven candidate models, and the ratio to
what the writer needs for the same cells as plain values with the same charts.
"""

from __future__ import annotations

import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from unittest import mock

import numpy as np

from sheetqc import sheets
from sheetqc.sheets.cells import FastWorksheet, Value
from tests.sheets.made import made_answer
from tests.sheets.samples import EVERY, bore

REPEATS = 3


def _time(run: Callable[[], None]) -> float:
    best = float("inf")
    for _ in range(REPEATS):
        start = time.process_time()
        run()
        best = min(best, time.process_time() - start)
    return best


def _plain(self: FastWorksheet, row: int, column: int, formula: str, cell_format: object, value: Value) -> None:
    """The value alone, as the writer's own functions take it."""
    del formula
    if isinstance(value, str):
        self.write_string(row, column, value, cell_format)
    else:
        self.write_number(row, column, value, cell_format)


def main(count: int) -> None:
    """Measures and prints."""
    rng = np.random.default_rng(7)
    asked = [
        replace(bore(), id=f"C{i}", values=np.round(25.012 + 0.004 * rng.standard_normal(125), 3), families=EVERY)
        for i in range(count)
    ]
    answer, study = made_answer(*asked)
    names = sheets.wanted_names(answer)
    with tempfile.TemporaryDirectory() as folder:
        book = Path(folder) / "additions.xlsx"
        live = _time(lambda: sheets.write(answer, study, names, book))
        size = book.stat().st_size
        with mock.patch.object(FastWorksheet, "stored_formula", _plain):
            plain = _time(lambda: sheets.write(answer, study, names, Path(folder) / "plain.xlsx"))
    print(f"{live / count:.3f} s and {size / count / 1000:.1f} kB per characteristic ({count} characteristics)")
    print(f"{live / plain:.2f} times the time of plain values and the same charts")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 20)
