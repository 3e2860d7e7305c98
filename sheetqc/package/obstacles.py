"""What speaks against adding sheets to a workbook although it can be read."""

from __future__ import annotations

from sheetqc.package.package import ROOT
from sheetqc.package.workbook import Workbook
from sheetqc.package.xml import child, truth

_SHARED_KINDS = frozenset(("revisionHeaders", "usernames"))


def is_signed(book: Workbook) -> bool:
    """Whether the package carries a digital signature, which no changed copy can keep."""
    return any(link.type.endswith("/digital-signature/origin") for link in book.package.relationships(ROOT))


def has_protected_structure(book: Workbook) -> bool:
    """Whether the workbook forbids adding sheets."""
    protection = child(book.root, "workbookProtection")
    return protection is not None and truth(protection.get("lockStructure"))


def is_shared(book: Workbook) -> bool:
    """Whether the workbook keeps a log of changes by several people, which would not know of new sheets."""
    return any(link.kind in _SHARED_KINDS for link in book.links)


def obstacle(book: Workbook) -> str:
    """The reason why sheets should not be added, "" when there is none."""
    if is_signed(book):
        return "it carries a digital signature, which a changed copy would break"
    if has_protected_structure(book):
        return "its structure is protected"
    if is_shared(book):
        return "it is shared and keeps a log of everybody's changes"
    return ""
