"""Packages of workbooks: read safely, checked, and new sheets added to a copy that keeps everything else.

This room knows parts, relationships and sheets, and nothing of what the sheets are about.
"""

from sheetqc.package.facts import PackageFacts, check, parts, sheet_names
from sheetqc.package.graft import graft
from sheetqc.package.limits import DEFAULT_LIMITS, Limits
from sheetqc.package.sheetnames import free_sheet_names

__all__ = [
    "DEFAULT_LIMITS",
    "Limits",
    "PackageFacts",
    "check",
    "free_sheet_names",
    "graft",
    "parts",
    "sheet_names",
]
