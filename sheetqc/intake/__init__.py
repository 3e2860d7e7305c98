"""Intake: a workbook with tagged tables read into a study, every doubt named by cell. Never writes."""

from __future__ import annotations

from sheetqc.intake.reading import read
from sheetqc.intake.understood import questions, understood, understood_text

__all__ = ["questions", "read", "understood", "understood_text"]
