"""An answered workbook checked: its inputs are answered anew, and the named results compared."""

from __future__ import annotations

import tempfile
from dataclasses import dataclass
from pathlib import Path

from sheetqc.errors import NothingToAnswer
from sheetqc.pipeline import answer

TOLERANCE = 1e-9
"""Relative difference up to which two numbers are the same; results are stored with eleven digits."""

Value = str | float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Difference:
    """A named result whose stored value is not what its inputs give; None where it stands on one side only."""

    name: str
    stored: Value
    recomputed: Value


@dataclass(frozen=True, slots=True, kw_only=True)
class Verification:
    """How many named results were compared, and those that differ."""

    compared: int
    differences: tuple[Difference, ...]


def verify(path: Path) -> Verification:
    """The named results of an answered workbook against those its inputs give today.

    Parameters
    ----------
    path : an answered workbook; it is only read

    Raises
    ------
    NothingToAnswer : when it holds no results, or its inputs cannot be answered any more
    """
    stored = named_results(path)
    if not stored:
        raise NothingToAnswer(
            f"{path.name} holds no results of sheetqc", expected="an answered workbook", advice="Answer it first."
        )
    with tempfile.TemporaryDirectory(prefix="sheetqc-") as folder:
        outcome = answer(path, Path(folder), stem="again")
        if outcome.workbook is None:
            raise NothingToAnswer(f"the inputs of {path.name} cannot be answered any more: {outcome.text}")
        recomputed = named_results(outcome.workbook)
    names = sorted(stored.keys() | recomputed.keys())
    found = [Difference(name=n, stored=stored.get(n), recomputed=recomputed.get(n)) for n in names]
    return Verification(compared=len(names), differences=tuple(d for d in found if not same(d.stored, d.recomputed)))


def same(one: Value, other: Value) -> bool:
    """Whether two stored values are the same, numbers up to `TOLERANCE`."""
    if isinstance(one, float) and isinstance(other, float):
        return abs(one - other) <= TOLERANCE * max(abs(one), abs(other), 1e-12)
    return one == other


def named_results(path: Path) -> dict[str, Value]:
    """Stored value of each defined name qc.<Id>.<Quantity> of a workbook."""
    import openpyxl

    book = openpyxl.load_workbook(path, data_only=True)
    results: dict[str, Value] = {}
    for name, defined in book.defined_names.items():
        if not name.startswith("qc.") or defined.hidden:
            continue
        for sheet, address in defined.destinations:
            # the library leaves the doubled quotes of a sheet name as they stand in the reference
            name_of_sheet = sheet if sheet in book.sheetnames else sheet.replace("''", "'")
            if name_of_sheet not in book.sheetnames:
                continue
            value = book[name_of_sheet][address].value
            results[name] = float(value) if isinstance(value, int | float) else None if value is None else str(value)
    book.close()
    return results
