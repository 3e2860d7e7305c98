"""Sheets: an answer as a workbook of result sheets with live formulas and native charts."""

from __future__ import annotations

from sheetqc.sheets.workbook import wanted_names, write

__all__ = ["wanted_names", "write"]
