"""Whether formulas of a workbook use a name that an answer will define."""

from __future__ import annotations

import re

from sheetqc.errors import DamagedWorkbook, UnsafeWorkbook
from sheetqc.package.archive import Archive
from sheetqc.package.directory import Member
from sheetqc.package.names import OWN
from sheetqc.package.workbook import Workbook

# A formula of a cell that holds the prefix outside of a longer name.
_FORMULA = re.compile(
    rb"<(?:[\w.-]+:)?f(?:\s[^>]*)?>[^<]*?(?<![\w.])" + re.escape(OWN).encode() + rb"\w", re.IGNORECASE
)
_OVERLAP = 1 << 14  # bytes, longer than the longest formula


def mentions_own_names(book: Workbook, apart_from: frozenset[str]) -> bool | None:
    """Whether a formula in a sheet or in a defined name uses a name that begins with the own prefix.

    Parameters
    ----------
    book : the workbook
    apart_from : names of sheets that do not count (those of an earlier answer)

    Returns
    -------
    bool or None : None when some sheets were left unread because they are too large to be looked through
    """
    if any(OWN in (name.text or "").casefold() for name in book.defined_names if _is_foreign(name.get("name", ""))):
        return True
    parts = [s.part for s in book.sheets if s.part is not None and s.name not in apart_from]
    members = sorted((book.package.member(part) for part in parts), key=lambda m: m.unpacked)
    left = book.package.archive.limits.formula_scan
    for member in members:
        if member.unpacked > left:
            return None
        left -= member.unpacked
        try:
            if _holds(book.package.archive, member, left + member.unpacked):
                return True
        except (DamagedWorkbook, UnsafeWorkbook):
            # A part that is only copied may be broken: it stays as it is.
            continue
    return False


def _is_foreign(name: str) -> bool:
    return not name.casefold().startswith(OWN)


def _holds(archive: Archive, member: Member, most: int) -> bool:
    tail = b""
    for block in archive.content(member, most):
        window = tail + block
        if OWN.encode() in window.lower() and _FORMULA.search(window):
            return True
        tail = window[-_OVERLAP:]
    return False
