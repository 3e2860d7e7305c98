"""The workbook of new sheets: overview, a page per characteristic, methods."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from xlsxwriter import Workbook

from sheetqc.assessment import Answer
from sheetqc.finding import quoted
from sheetqc.sheets.cells import FastWorksheet, Pen
from sheetqc.sheets.decimals import decimals_of
from sheetqc.sheets.formats import FONT, SIZE, Formats
from sheetqc.sheets.job import Job
from sheetqc.sheets.method import MethodJob, NamedCell, write_method
from sheetqc.sheets.names import defined_name, safe_ids
from sheetqc.sheets.overview import OverviewJob, write_overview
from sheetqc.sheets.page import WrittenPage, write_page
from sheetqc.sheets.words import Words
from sheetqc.study import Study

OPTIONS = {
    "in_memory": True,
    "strings_to_formulas": False,
    "strings_to_numbers": False,
    "strings_to_urls": False,
    "default_format_properties": {"font_name": FONT, "font_size": SIZE},
}

SHEET_KINDS: tuple[str, ...] = ("overview", "characteristic", "method")
"""The kinds of sheets in the order they stand; there is one "characteristic" for each."""


def wanted_names(answer: Answer) -> tuple[str, ...]:
    """Names the new sheets would like to have, in the order `write` takes them."""
    say = Words()
    return (say("overview.name"), *(f"QC {a.characteristic.id}" for a in answer.assessments), say("method.name"))


def write(answer: Answer, study: Study, names: Sequence[str], into: Path, *, alone: bool = False) -> None:
    """Writes the new sheets into a workbook of their own.

    Parameters
    ----------
    answer : what was found
    study : what was asked; its findings are part of the answer already
    names : final names of the sheets, in the order of `wanted_names`
    into : the workbook to be written
    alone : True when it is not grafted into a copy, so that formulas cannot refer to the sender's cells

    Raises
    ------
    ValueError : when there are not as many names as sheets
    """
    if len(names) != len(answer.assessments) + 2:
        raise ValueError(f"{len(answer.assessments) + 2} sheets need as many names, not {len(names)}")
    del study
    say = Words()
    with Workbook(str(into), OPTIONS) as workbook:
        formats = Formats(workbook)
        pens = [Pen(workbook.add_worksheet(name, FastWorksheet), name, formats) for name in names]
        pages = tuple(
            write_page(workbook, _job(answer, index, pens[index + 1], say, alone), names[0])
            for index in range(len(answer.assessments))
        )
        named = _define_names(workbook, pages)
        write_overview(OverviewJob(answer=answer, pages=pages, pen=pens[0], say=say, method=names[-1], alone=alone))
        write_method(MethodJob(answer=answer, names=named, pen=pens[-1], say=say, alone=alone))


def _job(answer: Answer, index: int, pen: Pen, say: Words, alone: bool) -> Job:
    found = answer.assessments[index]
    asked = found.characteristic
    shown = decimals_of(found.sample.values, (asked.limits.lower, asked.limits.upper), asked.resolution)
    return Job(answer=answer, assessment=found, pen=pen, say=say, decimals=shown, alone=alone)


def _define_names(workbook: Workbook, pages: Sequence[WrittenPage]) -> tuple[NamedCell, ...]:
    named = []
    for page, safe in zip(pages, safe_ids([page.assessment_id for page in pages]), strict=True):
        for quantity in page.names:
            name = defined_name(safe, quantity.name)
            workbook.define_name(name, f"={quoted(page.sheet)}!{quantity.cell.ref}")
            named.append(NamedCell(name=name, quantity=quantity, sheet=page.sheet))
    return tuple(named)
