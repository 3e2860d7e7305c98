"""What a chart is asked for with."""

from __future__ import annotations

from dataclasses import dataclass

from xlsxwriter import Workbook

from sheetqc.sheets.job import Job
from sheetqc.sheets.words import Words
from sheetqc.sheets.workings.build import Workings


@dataclass(frozen=True, slots=True, kw_only=True)
class ChartRequest:
    """The workbook, the characteristic and its workings."""

    workbook: Workbook
    job: Job
    workings: Workings
    rows: int
    """Height of the chart in rows of the page."""

    @property
    def say(self) -> Words:
        """The words to be used."""
        return self.job.say

    @property
    def sheet(self) -> str:
        """Name of the sheet that holds the workings."""
        return self.job.pen.name

    @property
    def unit(self) -> str:
        """Unit of the values, "" when unknown."""
        return self.job.assessment.characteristic.unit

    @property
    def unit_in_words(self) -> str:
        """The unit as a title has it, with a comma before it."""
        return f", {self.unit}" if self.unit else ""
