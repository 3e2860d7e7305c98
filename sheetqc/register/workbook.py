"""The register as a workbook."""

from __future__ import annotations

import contextlib
import secrets
from collections.abc import Sequence
from pathlib import Path

from sheetqc.register.history import add_history
from sheetqc.register.listing import add_aside, add_judged
from sheetqc.register.look import FONT, Formats
from sheetqc.register.overview import Overview
from sheetqc.register.rows import Aside, Judged, Row
from sheetqc.register.urgency import by_urgency

_ORDER = ("returned", "unreadable", "repeated")


def write(rows: Sequence[Row], into: Path) -> None:
    """Write the register; what stood there before is replaced in one step.

    Parameters
    ----------
    rows : what `collect` found
    into : the workbook to be written; links in it are relative to its folder

    Raises
    ------
    OSError : when it cannot be written, for example because it is open in a spreadsheet program
    """
    judged = by_urgency(row for row in rows if isinstance(row, Judged))
    aside = sorted((row for row in rows if isinstance(row, Aside)), key=lambda row: _ORDER.index(row.state))
    into.parent.mkdir(parents=True, exist_ok=True)
    temporary = into.with_name(f".{secrets.token_hex(6)}.tmp")
    try:
        _write(judged, aside, temporary, into.parent.resolve())
        temporary.replace(into)
    finally:
        with contextlib.suppress(OSError):
            temporary.unlink(missing_ok=True)


def _write(judged: Sequence[Judged], aside: Sequence[Aside], path: Path, base: Path) -> None:
    from xlsxwriter import Workbook

    options = {
        "strings_to_formulas": False,
        "strings_to_urls": False,
        "strings_to_numbers": False,
        "max_url_length": 2079,
        "default_format_properties": FONT,
    }
    with path.open("wb") as stream:
        book = Workbook(stream, options)
        formats = Formats(book)
        Overview(book, formats, judged, aside, base).write()
        add_judged(book, formats, judged, base)
        add_history(book, formats, judged, base)
        add_aside(book, formats, aside, base)
        book.close()
