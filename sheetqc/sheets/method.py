"""How it was computed: settings, methods with their sources, all findings, defined names with their values."""

from __future__ import annotations

from dataclasses import dataclass

import sheetqc
from sheetqc.assessment import Answer
from sheetqc.finding import quoted
from sheetqc.sheets.cells import Pen
from sheetqc.sheets.decimals import INDEX, INDEX_IN_FULL
from sheetqc.sheets.overview import write_finding
from sheetqc.sheets.page import lines_of
from sheetqc.sheets.words import Words
from sheetqc.sheets.workings.quantities import NamedQuantity

METHODS = ("quantiles", "within", "fit", "bound", "a2", "observed", "plot", "control")
WIDTHS = (190, 150, 110, 110, 90, 90, 90, 90)
LAST = len(WIDTHS) - 1


@dataclass(frozen=True, slots=True, kw_only=True)
class NamedCell:
    """A defined name, the quantity it stands for, and the sheet of its cell."""

    name: str
    quantity: NamedQuantity
    sheet: str


@dataclass(frozen=True, slots=True, kw_only=True)
class MethodJob:
    """What the sheet of methods needs to know."""

    answer: Answer
    names: tuple[NamedCell, ...]
    pen: Pen
    say: Words
    alone: bool = False


def write_method(job: MethodJob) -> None:
    """Writes the whole sheet of methods."""
    sheet = job.pen.sheet
    sheet.hide_gridlines(2)
    for column, width in enumerate(WIDTHS):
        sheet.set_column_pixels(column, column, width)
    sheet.set_paper(9)
    sheet.fit_to_pages(1, 0)
    sheet.set_margins(left=0.45, right=0.45, top=0.4, bottom=0.55)
    sheet.set_footer("&L&8" + job.say("page.footer", version=sheetqc.__version__) + "&R&8&P / &N")
    sheet.set_row_pixels(0, 28)
    job.pen.text(0, 0, job.say("method.title"), "title")
    row = _write_settings(job, 2)
    row = _write_methods(job, row + 1)
    row = _write_findings(job, row + 1)
    row = _write_names(job, row + 1)
    sheet.print_area(0, 0, row, LAST)


def _head(job: MethodJob, row: int, key: str) -> None:
    for column in range(LAST + 1):
        job.pen.blank(row, column, "heading")
    job.pen.text(row, 0, job.say(key), "heading")


def _write_settings(job: MethodJob, row: int) -> int:
    pen, say, answer = job.pen, job.say, job.answer
    _head(job, row, "method.settings")
    required = answer.header.requirement
    for key, value in (
        ("source", answer.source.name),
        ("sha256", answer.source.sha256),
        ("bytes", str(answer.source.bytes)),
        ("version", f"sheetqc {sheetqc.__version__}"),
        ("confidence", say.percent(answer.header.confidence)),
        ("requirement", say("method.none") if required is None else f"{required:g}"),
        ("requirement_on", answer.header.requirement_on),
        ("seed", say("method.seed_text")),
    ):
        row += 1
        pen.text(row, 0, say(f"method.{key}"), "small")
        pen.text(row, 1, value, "small")
    return row + 1


def _write_methods(job: MethodJob, row: int) -> int:
    pen, say = job.pen, job.say
    _head(job, row, "method.methods")
    for key in METHODS:
        row += 1
        text, source = say(f"methods.{key}"), say(f"methods.{key}.source")
        pen.sheet.merge_range(row, 0, row, 4, "", pen.formats("cell_words"))
        pen.text(row, 0, text, "cell_words")
        pen.sheet.merge_range(row, 5, row, LAST, "", pen.formats("cell_words"))
        pen.text(row, 5, source, "cell_words")
        pen.sheet.set_row_pixels(row, 6 + 15 * max(lines_of(text, 110), lines_of(source, 44)))
    return row + 1


def _write_findings(job: MethodJob, row: int) -> int:
    pen, say, answer = job.pen, job.say, job.answer
    _head(job, row, "method.findings")
    several = [("", f) for f in answer.findings]
    several += [(a.characteristic.id, f) for a in answer.assessments for f in a.findings]
    if not several:
        pen.text(row + 1, 0, say("overview.no_findings"), "small")
        return row + 2
    for of, finding in several:
        row += 1
        write_finding(pen, row, finding, say, text_column=2, last=LAST, linked=not job.alone)
        label = say(f"level.{finding.level}") + (f" · {of}" if of else "")
        pen.text(row, 0, label, "cell")
        pen.sheet.set_row_pixels(row, 5 + 15 * lines_of(finding.text, 92))
    return row + 1


def _write_names(job: MethodJob, row: int) -> int:
    pen, say = job.pen, job.say
    _head(job, row, "method.names")
    row += 1
    for column, key in ((0, "name"), (2, "quantity"), (4, "value")):
        pen.text(row, column, say(f"method.names.{key}"), "head")
    for named in job.names:
        row += 1
        pen.text(row, 0, named.name, "small")
        quantity, cell = named.quantity, named.quantity.cell
        pen.text(row, 2, quantity.label, "small")
        if cell.value is not None:
            as_shown = INDEX_IN_FULL if quantity.number_format == INDEX else quantity.number_format
            pen.formula(row, 4, f"{quoted(named.sheet)}!{cell.ref}", cell.value, "small", as_shown)
    return row + 1
