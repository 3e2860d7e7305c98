"""Sheets of one workbook added to a copy of another."""

from __future__ import annotations

import os
import stat
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from sheetqc.package.adding import Adding
from sheetqc.package.archive import opened
from sheetqc.package.limits import DEFAULT_LIMITS, Limits
from sheetqc.package.obstacles import obstacle
from sheetqc.package.plan import write
from sheetqc.package.refusals import cannot_graft
from sheetqc.package.selfcheck import limits_for_copy, refuse_unfaithful
from sheetqc.package.workbook import opened_workbook


def graft(
    original: Path | str,
    additions: Path | str,
    into: Path | str,
    *,
    limits: Limits = DEFAULT_LIMITS,
    even_if_protected: bool = False,
) -> None:
    """Adds every sheet of a workbook to a copy of another one, which keeps all its other parts byte for byte.

    Parameters
    ----------
    original : the workbook that is copied; it is only read
    additions : a workbook that XlsxWriter made; a sheet whose name is taken gets another one, and its formulas follow
    into : the copy, written whole or not at all; sheets of an earlier answer are replaced in it
    limits : what the original may ask of this machine
    even_if_protected : add also where the structure is protected, the workbook is shared, or its signature would break

    Raises
    ------
    CannotGraft : it can be read, but nothing can (or should) be added to it
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : what else is met
    """
    original, additions, into = Path(original), Path(additions), Path(into)
    if into.exists() and original.exists() and into.samefile(original):
        raise cannot_graft("the copy would take the place of the original", "Name another place for the copy.")
    with opened_workbook(original, limits) as book, opened_workbook(additions, limits) as extra:
        reason = obstacle(book)
        if reason and not even_if_protected:
            raise cannot_graft(reason)
        plan = Adding(book, extra).plan()
        with _published(into, original) as temporary:
            with temporary.open("wb") as file:
                write(book.package.archive, plan, file)
                file.flush()
                os.fsync(file.fileno())
            # Read again from the disk, the original too: what is compared is what is there, not what was meant.
            with opened(original, limits) as before, opened(temporary, limits_for_copy(limits)) as copy:
                refuse_unfaithful(before, copy, plan)


@contextmanager
def _published(into: Path, original: Path) -> Iterator[Path]:
    """A file in the folder of `into` that takes its place when all went well, and is gone otherwise."""
    handle, name = tempfile.mkstemp(dir=into.parent, prefix=".sheetqc-", suffix=".part")
    os.close(handle)
    temporary = Path(name)
    try:
        yield temporary
        temporary.chmod(stat.S_IMODE(original.stat().st_mode) | stat.S_IWUSR)
        temporary.replace(into)
    except BaseException:
        temporary.unlink(missing_ok=True)
        raise
