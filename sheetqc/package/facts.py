"""What a workbook is and whether sheets can be added to a copy of it."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from pathlib import Path

from sheetqc.package.archive import opened
from sheetqc.package.contenttypes import WORKBOOK_KINDS
from sheetqc.package.filekind import archive_kind, container
from sheetqc.package.limits import DEFAULT_LIMITS, Limits
from sheetqc.package.mentions import mentions_own_names
from sheetqc.package.names import marked_sheets
from sheetqc.package.obstacles import obstacle
from sheetqc.package.package import Package
from sheetqc.package.workbook import FOREIGN_KINDS, Workbook, main_part, opened_workbook


@dataclass(frozen=True, slots=True, kw_only=True)
class PackageFacts:
    """A workbook as its package tells it; nothing in its sheets was read but formulas that use an added name."""

    kind: str  # xlsx, xlsm, xltx, xltm, xlam, xlsb, xls or ods
    macro_enabled: bool
    strict: bool
    date_1904: bool
    sheets: tuple[str, ...]  # all, in order; () where the kind is not a package of this format
    earlier_answer: tuple[str, ...]  # sheets that an earlier answer added
    reason: str  # why sheets cannot (or should not) be added; "" when they can
    mentions_own_names: bool | None  # whether formulas use names beginning with "qc."; None when not looked through


def check(path: Path | str, *, limits: Limits = DEFAULT_LIMITS) -> PackageFacts:
    """What a workbook is.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : it is no readable workbook
    """
    path = Path(path)
    kind = container(path)
    if kind not in FOREIGN_KINDS:
        with opened(path, limits) as archive:
            kind = archive_kind(archive)
            if kind not in FOREIGN_KINDS:
                package = Package(archive)
                kind = WORKBOOK_KINDS.get(package.types.of(main_part(package)).strip().lower(), kind)
            if kind not in FOREIGN_KINDS:
                return _facts(Workbook(package))
    return PackageFacts(
        kind=kind,
        macro_enabled=False,
        strict=False,
        date_1904=False,
        sheets=(),
        earlier_answer=(),
        reason=FOREIGN_KINDS[kind],
        mentions_own_names=None,
    )


def _facts(book: Workbook) -> PackageFacts:
    earlier = marked_sheets(book)
    return PackageFacts(
        kind=book.kind,
        macro_enabled=book.kind in ("xlsm", "xltm", "xlam"),
        strict=book.strict,
        date_1904=book.date_1904,
        sheets=tuple(sheet.name for sheet in book.sheets),
        earlier_answer=earlier,
        reason=obstacle(book),
        mentions_own_names=mentions_own_names(book, frozenset(earlier)),
    )


def sheet_names(path: Path | str, *, earlier_answer: bool = True, limits: Limits = DEFAULT_LIMITS) -> tuple[str, ...]:
    """Names of all sheets of a workbook in order, hidden ones too.

    Parameters
    ----------
    path : the workbook
    earlier_answer : whether sheets count that an earlier answer added (a new answer replaces them)

    Raises
    ------
    CannotGraft : a workbook of a kind that nothing can be added to
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : what else is met
    """
    with opened_workbook(Path(path), limits) as book:
        left_out = () if earlier_answer else marked_sheets(book)
        return tuple(sheet.name for sheet in book.sheets if sheet.name not in left_out)


def parts(path: Path | str, *, limits: Limits = DEFAULT_LIMITS) -> tuple[tuple[str, str], ...]:
    """Every part of a package with the SHA-256 of its content, in the order of the file."""
    found = []
    with opened(Path(path), limits) as archive:
        for member in archive.members:
            digest = hashlib.sha256()
            for block in archive.content(member, limits.total):
                digest.update(block)
            found.append((member.name.text, digest.hexdigest()))
    return tuple(found)
