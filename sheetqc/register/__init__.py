"""The register: every characteristic of many answered workbooks in one workbook, those first that need a person."""

from __future__ import annotations

from sheetqc.register.collecting import collect
from sheetqc.register.rows import Aside, Judged, Row
from sheetqc.register.workbook import write

__all__ = ["Aside", "Judged", "Row", "collect", "write"]
