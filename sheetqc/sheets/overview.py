"""The overview: one row a characteristic, findings about the workbook, how to read a verdict."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import sheetqc
from sheetqc.assessment import Answer, Assessment
from sheetqc.finding import Finding, quoted
from sheetqc.sheets import decimals
from sheetqc.sheets.cells import NONE, Pen, Placed
from sheetqc.sheets.page import WrittenPage, lines_of
from sheetqc.sheets.palette import VERDICT
from sheetqc.sheets.tables import write_index
from sheetqc.sheets.words import Words
from sheetqc.sheets.workings.verdict import STATES

COLUMNS = (
    ("id", 100), ("characteristic", 180), ("unit", 48), ("n", 42), ("verdict", 106), ("index", 46), ("required", 62),
    ("estimate", 62), ("at_least", 62), ("ppm", 78), ("ppm_most", 66), ("reason", 330), ("next", 300),
)  # fmt: skip
AT = {key: index for index, (key, _) in enumerate(COLUMNS)}
LAST = len(COLUMNS) - 1

NUMBERS = ("n", "required", "estimate", "at_least", "ppm", "ppm_most")
INDENTED = ("verdict", "reason", "next")

HEADER = ("part_number", "part_name", "supplier", "lot", "date", "prepared_by")
MOST_FINDINGS = 12


@dataclass(frozen=True, slots=True, kw_only=True)
class OverviewJob:
    """What the overview needs to know."""

    answer: Answer
    pages: tuple[WrittenPage, ...]
    pen: Pen
    say: Words
    method: str
    alone: bool = False


def write_overview(job: OverviewJob) -> None:
    """Writes the whole overview sheet."""
    _set_up(job)
    row = _write_head(job)
    row = _write_rows(job, row)
    row = _write_findings(job, row + 1)
    row = _write_legend(job, row + 1)
    job.pen.sheet.print_area(0, 0, row, LAST)


def _set_up(job: OverviewJob) -> None:
    sheet = job.pen.sheet
    sheet.hide_gridlines(2)
    sheet.set_default_row(13.5)
    for column, (_, width) in enumerate(COLUMNS):
        sheet.set_column_pixels(column, column, width)
    sheet.set_landscape()
    sheet.set_paper(9)
    sheet.fit_to_pages(1, 1)
    sheet.set_margins(left=0.4, right=0.4, top=0.4, bottom=0.55)
    sheet.set_footer("&L&8" + job.say("page.footer", version=sheetqc.__version__) + "&R&8&P / &N")


def _write_head(job: OverviewJob) -> int:
    pen, say, header = job.pen, job.say, job.answer.header
    pen.sheet.set_row_pixels(0, 28)
    pen.text(0, 0, say("overview.title"), "title")
    told = [(say(f"overview.header.{key}"), str(getattr(header, key))) for key in HEADER if getattr(header, key)]
    told.append((say("overview.header.source"), job.answer.source.name))
    for index, (label, text) in enumerate(told):
        column = (0, 4, 11, 12)[index % 4]
        row = 1 + index // 4
        pen.text(row, column, f"{label}:  {text}", "subtitle")
    return 1 + -(-len(told) // 4) + 1


def _write_rows(job: OverviewJob, row: int) -> int:
    pen, say = job.pen, job.say
    pen.sheet.set_row_pixels(row, 20)
    for key, column in AT.items():
        style = "head_right" if key in NUMBERS else "head_indented" if key in INDENTED else "head"
        pen.text(row, column, say(f"overview.{key}"), style)
    first = row + 1
    for assessment, page in zip(job.answer.assessments, job.pages, strict=True):
        row += 1
        _write_row(job, row, assessment, page)
    pen.sheet.freeze_panes(first, 1)
    for state, color in VERDICT.items():
        rule = {
            "type": "formula",
            "criteria": f'=RIGHT($E{first + 1},{len(say.state(state)) + 1})=" {say.state(state)}"',
            "format": pen.formats.own_colour(color),
        }
        if job.pages:
            pen.sheet.conditional_format(first, AT["verdict"], row, AT["verdict"], rule)
    return row + 1


def _write_row(job: OverviewJob, row: int, found: Assessment, page: WrittenPage) -> None:
    pen, asked = job.pen, found.characteristic
    reason = " ".join(found.verdict.reasons)
    steps = " ".join(found.verdict.next_steps)
    lines = max(lines_of(reason, 62), lines_of(steps, 56), lines_of(asked.name, 32))
    pen.sheet.set_row_pixels(row, 6 + 15 * lines)
    link = f"internal:{quoted(page.sheet)}!A1"
    pen.sheet.write_url(row, AT["id"], link, pen.formats("link_cell"), asked.id)
    pen.text(row, AT["characteristic"], asked.name, "cell_wrapped")
    pen.text(row, AT["unit"], asked.unit, "cell")
    index = found.verdict.index
    for key, source, number_format, style in (
        ("n", "n", "0", "cell_right"),
        ("verdict", "sign", "", "cell_strong"),
        ("required", "requirement", decimals.INDEX, "cell_right"),
        ("estimate", index, decimals.INDEX, "cell_right"),
        ("at_least", f"{index}_lower", decimals.INDEX, "cell_right"),
        ("ppm", "total", decimals.RATE, "cell_right"),
        ("ppm_most", "total_upper", decimals.RATE, "cell_right"),
    ):
        _refer(pen, row, AT[key], page, source, number_format, style)
    pen.text(row, AT["index"], index, "cell")
    pen.text(row, AT["reason"], reason, "cell_words")
    pen.text(row, AT["next"], steps, "cell_words")


def _refer(pen: Pen, row: int, column: int, page: WrittenPage, key: str, number_format: str, style: str) -> None:
    cell: Placed | None = page.cells.get(key)
    if cell is None or cell.value is None:
        pen.text(row, column, NONE, style)
    elif number_format == decimals.INDEX:
        write_index(pen, row, column, cell, f"{quoted(page.sheet)}!{cell.ref}", style)
    else:
        pen.formula(row, column, f"{quoted(page.sheet)}!{cell.ref}", cell.value, style, number_format)


def _write_findings(job: OverviewJob, row: int) -> int:
    pen, say = job.pen, job.say
    pen.text(row, 0, say("overview.findings"), "strong")
    findings = job.answer.findings
    if not findings:
        pen.text(row + 1, 0, say("overview.no_findings"), "small")
        return row + 2
    for finding in findings[:MOST_FINDINGS]:
        row += 1
        write_finding(pen, row, finding, say, text_column=4, last=LAST, linked=not job.alone)
    return row + 1


def write_finding(
    pen: Pen, row: int, finding: Finding, say: Words, *, text_column: int, last: int, linked: bool
) -> None:
    """A finding in one row: its weight, a link to its first cell, its text."""
    pen.text(row, 0, say(f"level.{finding.level}"), "cell")
    if finding.cells:
        cell = finding.cells[0]
        if linked:
            pen.link(row, 1, cell, str(cell), "link_cell")
        else:
            pen.text(row, 1, str(cell), "cell")
    pen.sheet.merge_range(row, text_column, row, last, "", pen.formats("cell_words"))
    pen.text(row, text_column, finding.text, "cell_words")
    pen.sheet.set_row_pixels(row, 5 + 15 * lines_of(finding.text, 170))


def _write_legend(job: OverviewJob, row: int) -> int:
    pen, say = job.pen, job.say
    pen.text(row, 0, say("overview.legend"), "strong")
    pen.text(row, AT["reason"], say("overview.cautions"), "strong")
    top = row + 1
    for offset, state in enumerate(STATES):
        look = pen.formats.own(bold=True, font_color=VERDICT[state])
        pen.sheet.write_string(top + offset, 0, f"{say.sign(state)}  {say.state(state)}", look)
        pen.text(top + offset, 1, say(f"meaning.{state}"), "small")
    texts: Sequence[str] = [say(f"caution.{i}") for i in (1, 2, 3)] + [say("overview.names", method=job.method)]
    for offset, text in enumerate(texts):
        pen.sheet.merge_range(
            top + 2 * offset, AT["reason"], top + 2 * offset + 1, LAST, "", pen.formats("words_small")
        )
        pen.text(top + 2 * offset, AT["reason"], text, "words_small")
    return top + max(len(STATES), 2 * len(texts))
