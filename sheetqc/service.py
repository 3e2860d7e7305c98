"""A served folder: the folder room handed the corridor and the register."""

from __future__ import annotations

from pathlib import Path

from sheetqc import __version__, folder, register
from sheetqc.pipeline import answer


def watch(served: Path, *, once: bool = False, workers: int = 1) -> bool:
    """Serves a folder until stopped, or answers what is there when `once`; True when something was returned."""
    result = folder.serve(
        served, answer, once=once, workers=workers, after=renew_register, edition=__version__, warm=warm
    )
    return bool(result.returned)


def warm() -> None:
    """Brings in what answering needs, so that the first workbook does not wait for it."""
    from sheetqc import intake, judgement, package, sheets

    del intake, judgement, package, sheets


def renew_register(served: Path) -> None:
    """Brings the register of a served folder up to date."""
    register.write(register.collect(served), served / "register.xlsx")
