"""The errors of this room with their advice, so that the same trouble is always told in the same words."""

from __future__ import annotations

from sheetqc.errors import (
    CannotGraft,
    DamagedWorkbook,
    EncryptedWorkbook,
    MissingWorkbook,
    NotAWorkbook,
    UnsafeWorkbook,
)


def damaged(met: str, expected: str = "") -> DamagedWorkbook:
    """The file is truncated or corrupt."""
    return DamagedWorkbook(
        met, expected=expected, advice="Open it in the spreadsheet program, save it again and send the new file."
    )


def unsafe(met: str, expected: str = "") -> UnsafeWorkbook:
    """The file breaks a limit or holds something no spreadsheet program writes."""
    return UnsafeWorkbook(
        met,
        expected=expected,
        advice="Find out where the file comes from; if it is trusted, save it again in a spreadsheet program.",
    )


def encrypted(met: str = "the workbook is protected by a password") -> EncryptedWorkbook:
    """The content cannot be read without a password."""
    return EncryptedWorkbook(
        met,
        expected="a workbook without a password to open it",
        advice="Save it without the password and send it again.",
    )


def not_a_workbook(met: str) -> NotAWorkbook:
    """The file is something else."""
    return NotAWorkbook(met, expected="a workbook (.xlsx or .xlsm)", advice="Send the workbook itself.")


def missing(name: str) -> MissingWorkbook:
    """No such file."""
    return MissingWorkbook(f"there is no file {name}", advice="Check the path.")


def cannot_graft(met: str, advice: str = "") -> CannotGraft:
    """Readable, but nothing can be added to a copy."""
    return CannotGraft(met, advice=advice)
