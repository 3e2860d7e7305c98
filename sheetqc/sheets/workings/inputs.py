"""The cells a reader may overwrite: limits, requirement, model in use."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.finding import Cell
from sheetqc.sheets import layout
from sheetqc.sheets.cells import Pen, Placed
from sheetqc.sheets.expressions import constant
from sheetqc.sheets.job import Job
from sheetqc.stats.families import family


@dataclass(frozen=True, slots=True, kw_only=True)
class Inputs:
    """Entry cells of the page; `lower` and `upper` may be empty."""

    lower: Placed
    upper: Placed
    requirement: Placed
    model: Placed | None


def write_inputs(job: Job) -> Inputs:
    """Writes the entry cells, filled from the sender's cells where the fields were read from some."""
    asked, header = job.assessment.characteristic, job.answer.header
    required = job.assessment.verdict.requirement
    requirement_cell = asked.cell("requirement") or header.cell("requirement")
    look = job.decimals.value
    return Inputs(
        lower=_limit(job, layout.LOWER_ENTRY, asked.limits.lower, asked.cell("lower"), look),
        upper=_limit(job, layout.UPPER_ENTRY, asked.limits.upper, asked.cell("upper"), look),
        requirement=_limit(job, layout.REQUIREMENT_ENTRY, required, requirement_cell, "0.00"),
        model=_model(job),
    )


def _limit(job: Job, column: int, value: float | None, cell: Cell | None, number_format: str) -> Placed:
    if value is None:
        job.pen.blank(layout.ENTRIES, column, "entry")
        return Placed(layout.ENTRIES, column, None)
    linked = job.linked(cell)
    if linked is None:
        return job.pen.number(layout.ENTRIES, column, value, "entry", number_format)
    # a cell that holds no plain number (a text such as "10,5") was read by sheetqc: what was read stands in for it
    formula = f"IF(ISNUMBER({linked.reference}),{linked.reference},{constant(value)})"
    return job.pen.formula(layout.ENTRIES, column, formula, value, "entry", number_format)


def _model(job: Job) -> Placed | None:
    in_use = job.assessment.model_in_use
    if in_use is None or not job.assessment.models:
        return None
    pen: Pen = job.pen
    column = layout.MODEL_ENTRY
    pen.sheet.merge_range(layout.ENTRIES, column, layout.ENTRIES, column + 1, "", pen.formats("entry_text"))
    return pen.text(layout.ENTRIES, column, family(in_use).title, "entry_text")
