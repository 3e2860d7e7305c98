"""The page of a characteristic: verdict, entry cells, and five questions answered one below the other."""

from __future__ import annotations

from dataclasses import dataclass

from xlsxwriter import Workbook

import sheetqc
from sheetqc.finding import quoted
from sheetqc.sheets import layout
from sheetqc.sheets.cells import Pen, Placed
from sheetqc.sheets.charts import CHARTS, ChartRequest
from sheetqc.sheets.job import Job
from sheetqc.sheets.palette import ACCENT_LIGHT, INK, VERDICT
from sheetqc.sheets.tables import TABLES, write_caption
from sheetqc.sheets.workings.build import Workings, write_workings
from sheetqc.sheets.workings.quantities import NamedQuantity

QUESTIONS = ("data", "steady", "shape", "capable", "next")
CHARACTERS_PER_LINE = 56
"""About how many letters of Arial 10 fit into the words' columns."""

WIDE_LINE = 150
"""The same for the whole width of the page."""

FINDING_LINE = 125
MOST_ROWS = 18
"""Rows up to which a picture grows."""

MOST_FINDINGS = 6
LEVELS = ("stop", "caution", "note")


@dataclass(frozen=True, slots=True, kw_only=True)
class WrittenPage:
    """What other sheets refer to: cells of the results, and the quantities that get a name."""

    sheet: str
    cells: dict[str, Placed]
    names: tuple[NamedQuantity, ...]
    assessment_id: str


def write_page(workbook: Workbook, job: Job, overview: str) -> WrittenPage:
    """Writes the whole sheet of one characteristic.

    Parameters
    ----------
    workbook : the workbook that is being written
    job : the characteristic and its pen
    overview : name of the overview sheet
    """
    _set_up(job)
    work = write_workings(job)
    _write_head(job, overview)
    _write_band(job, work)
    _write_entries(job, work)
    row = layout.FIRST_SECTION
    for number, key in enumerate(QUESTIONS, start=1):
        row = _write_section(workbook, job, work, row, number, key)
    job.pen.sheet.print_area(0, 0, row, layout.LAST)
    quantities = work.quantities
    wanted = ("n", "sign", "verdict", "total", "total_upper", *_index_keys(job))
    return WrittenPage(
        sheet=job.pen.name,
        cells={key: quantities[key] for key in wanted if key in quantities} | {"requirement": work.inputs.requirement},
        names=tuple(quantities.names),
        assessment_id=job.assessment.characteristic.id,
    )


def _index_keys(job: Job) -> tuple[str, ...]:
    index = job.assessment.verdict.index
    return index, f"{index}_lower", f"{index}_upper"


def _set_up(job: Job) -> None:
    sheet = job.pen.sheet
    sheet.hide_gridlines(2)
    sheet.set_default_row(layout.ROW * 0.75)
    for column, width in enumerate((*layout.LEFT, layout.GAP, *layout.RIGHT)):
        sheet.set_column_pixels(column, column, width)
    for row, height in layout.HEIGHTS.items():
        sheet.set_row_pixels(row, height)
    sheet.set_paper(9)
    sheet.set_portrait()
    sheet.fit_to_pages(1, 1)
    sheet.set_margins(left=0.45, right=0.45, top=0.4, bottom=0.55)
    sheet.center_horizontally()
    sheet.set_footer("&L&8" + job.say("page.footer", version=sheetqc.__version__) + "&R&8&P / &N")


def _write_head(job: Job, overview: str) -> None:
    pen, asked, header = job.pen, job.assessment.characteristic, job.answer.header
    pen.text(layout.TITLE, 0, "  ".join(part for part in (asked.id, asked.name) if part), "title")
    told = [part for part in (header.part_number, header.part_name) if part]
    parts = [" ".join(told), header.supplier, header.lot, header.date]
    pen.text(layout.SUBTITLE, 0, "   ·   ".join(part for part in parts if part) or job.answer.source.name, "subtitle")
    pen.sheet.write_url(
        layout.TITLE,
        layout.LAST,
        f"internal:{quoted(overview)}!A1",
        pen.formats.own(font_color="#1B6B8C", underline=1, align="right", valign="top"),
        job.say("page.overview"),
    )


def _write_band(job: Job, work: Workings) -> None:
    pen = job.pen
    row, split = layout.BAND, 2
    edges = {"bg_color": ACCENT_LIGHT, "valign": "vcenter", "font_color": INK}
    word = pen.formats.own(**edges, bold=True, font_size=15, indent=1)
    line = pen.formats.own(**edges, font_size=11)
    pen.sheet.merge_range(row, 0, row, split - 1, "", word)
    pen.sheet.merge_range(row, split, row, layout.LAST, "", line)
    for column, key, look in ((0, "sign", word), (split, "line", line)):
        told = work.quantities[key]
        pen.sheet.stored_formula(row, column, told.ref, look, str(told.value))
    verdict = work.quantities["verdict"]
    for state, color in VERDICT.items():
        pen.sheet.conditional_format(
            row,
            0,
            row,
            split - 1,
            {
                "type": "formula",
                "criteria": f'={verdict.ref}="{job.say.state(state)}"',
                "format": pen.formats.own_colour(color),
            },
        )
    reasons = " ".join(job.assessment.verdict.reasons)
    pen.sheet.merge_range(layout.REASON, 0, layout.REASON, layout.LAST, "", pen.formats("words"))
    pen.text(layout.REASON, 0, reasons, "words")


def _write_entries(job: Job, work: Workings) -> None:
    pen, say = job.pen, job.say
    row = layout.ENTRY_LABELS
    for key, column in (
        ("lower", layout.LOWER_ENTRY),
        ("upper", layout.UPPER_ENTRY),
        ("requirement", layout.REQUIREMENT_ENTRY),
    ):
        pen.text(row, column, say(f"entry.{key}"), "muted_right")
    for column in (layout.LOWER_ENTRY, layout.UPPER_ENTRY, layout.REQUIREMENT_ENTRY):
        pen.sheet.data_validation(
            layout.ENTRIES,
            column,
            layout.ENTRIES,
            column,
            {"validate": "decimal", "criteria": "between", "minimum": -1e15, "maximum": 1e15, "ignore_blank": True},
        )
    if work.inputs.model is not None and work.candidates is not None:
        pen.text(row, layout.MODEL_ENTRY, say("entry.model"), "muted")
        pen.sheet.data_validation(
            layout.ENTRIES,
            layout.MODEL_ENTRY,
            layout.ENTRIES,
            layout.MODEL_ENTRY,
            {"validate": "list", "source": f"={work.candidates.selectable.ref}"},
        )
    pen.text(layout.STATUS, 0, say("entry.hint"), "muted")
    if "status" in work.quantities:
        status = work.quantities["status"]
        first = layout.MODEL_ENTRY + 2
        look = pen.formats.own(font_size=8, font_color=INK, text_wrap=True, valign="vcenter", indent=1)
        pen.sheet.merge_range(layout.ENTRIES - 1, first, layout.ENTRIES, layout.LAST, "", look)
        pen.sheet.stored_formula(layout.ENTRIES - 1, first, status.ref, look, str(status.value))


def _write_section(workbook: Workbook, job: Job, work: Workings, row: int, number: int, key: str) -> int:
    """Writes a question with answer, table and pictures; gives the row below."""
    pen, say = job.pen, job.say
    pen.sheet.set_row_pixels(row, 22)
    for column in range(layout.LAST + 1):
        pen.blank(row, column, "heading")
    pen.text(row, 0, f"{number}   {say(f'question.{key}')}", "heading")
    row += 1
    words = dict(job.assessment.answers).get(key, "")
    if key == "next":
        return _write_findings(job, _write_wide(pen, row, words, WIDE_LINE))
    below = _write_words(pen, row, words)
    below = write_caption(job, TABLES[key](job, work, below), key)
    pictures = _insert_charts(workbook, job, work, row, key, below - row)
    return max(below, pictures) + 1


def _write_words(pen: Pen, row: int, words: str) -> int:
    """The answer in the left columns; gives the row below."""
    lines = lines_of(words, CHARACTERS_PER_LINE)
    last = row + lines - 1
    pen.sheet.merge_range(row, 0, last, len(layout.LEFT) - 1, "", pen.formats("words"))
    pen.text(row, 0, words, "words")
    return last + 1


def _write_wide(pen: Pen, row: int, words: str, characters: int) -> int:
    last = row + max(2, lines_of(words, characters)) - 1
    pen.sheet.merge_range(row, 0, last, layout.LAST, "", pen.formats("words"))
    pen.text(row, 0, words, "words")
    return last + 1


def _write_findings(job: Job, row: int) -> int:
    """The findings about the characteristic, each with a link to its first cell; gives the row below."""
    pen, say, findings = job.pen, job.say, job.assessment.findings
    if not findings:
        return row
    pen.text(row, 0, say("page.findings"), "head")
    for column in range(1, layout.LAST + 1):
        pen.blank(row, column, "head")
    order = sorted(findings, key=lambda f: LEVELS.index(f.level))
    for finding in order[:MOST_FINDINGS]:
        row += 1
        lines = lines_of(finding.text, FINDING_LINE)
        pen.text(row, 0, say(f"level.{finding.level}"), "small_top")
        cell = job.linked(finding.cells[0]) if finding.cells else None
        if cell is not None:
            pen.link(row, layout.LAST, cell, cell.address, "link_small")
        pen.sheet.merge_range(row, 1, row + lines - 1, layout.LAST - 1, "", pen.formats("words_small"))
        pen.text(row, 1, finding.text, "words_small")
        row += lines - 1
    if len(order) > MOST_FINDINGS:
        row += 1
        pen.text(row, 1, say("page.more_findings", count=len(order) - MOST_FINDINGS), "muted")
    return row + 1


def lines_of(words: str, characters: int) -> int:
    """About how many lines a text takes."""
    return max(1, sum(-(-len(part) // characters) for part in words.split("\n")))


def _insert_charts(workbook: Workbook, job: Job, work: Workings, row: int, question: str, least: int) -> int:
    """The pictures beside an answer, one below the other; gives the row below.

    A picture that stands alone grows with the words beside it, within reason.
    """
    asked, n = job.assessment.characteristic, len(job.assessment.sample.values)
    kinds = [kind for kind in CHARTS if kind.question == question]
    for kind in kinds:
        rows = kind.rows if len(kinds) > 1 else max(kind.rows, min(least, MOST_ROWS))
        drawing = kind.draw(ChartRequest(workbook=workbook, job=job, workings=work, rows=rows))
        if drawing is None:
            continue
        options = {"object_position": 2, "description": job.say(f"alt.{kind.key}", id=asked.id, n=n)}
        job.pen.sheet.insert_chart(row, layout.PICTURE_COLUMN, drawing.chart, options)
        row += rows
    return row
