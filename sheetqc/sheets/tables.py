"""The small tables beside the pictures: every number refers to the workings."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from sheetqc.assessment import Signal
from sheetqc.sheets import decimals
from sheetqc.sheets.cells import NONE, Pen, Placed, cut
from sheetqc.sheets.expressions import cut_off, literal
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.build import Workings

CAPTION_LETTERS = 66
"""About how many letters of a caption fit into the words' columns."""

MOST_SIGNALS = 4
MOST_POINTS = 8
SIGNAL_LETTERS = 50

MOST_MODELS = 11
"""Rows of the candidates' table; further ones stand in the workings."""


def data_table(job: Job, work: Workings, row: int) -> int:
    """How many values there are and how they lie; gives the row below."""
    say, look, q = job.say, job.decimals, work.quantities
    row = _line(job, row, say("table.reading"), [(q["n"], "0")]) if "n" in q else row
    if job.assessment.left_out:
        job.pen.text(row, 0, say("table.left_out"), "label")
        _fill(job, row, 1)
        job.pen.number(row, 3, job.assessment.left_out, "figure")
        row += 1
    for label, keys, number_format in (
        ("range", ("minimum", "maximum"), look.value),
        ("mean", ("mean",), look.mean),
        ("s", ("s",), look.spread),
        ("skewness", ("skewness", "kurtosis"), decimals.MOMENT),
    ):
        if all(key in q for key in keys):
            row = _line(job, row, say(f"table.{label}"), [(q[key], number_format) for key in keys])
    gauge = job.assessment.gauge
    if gauge is not None and gauge.share_of_tolerance is not None:
        _label(job, row, say("table.gauge"))
        job.pen.number(row, 3, gauge.share_of_tolerance, "figure", decimals.SHARE)
        row += 1
    return row


def steady_table(job: Job, work: Workings, row: int) -> int:
    """What the control chart rests on; gives the row below."""
    say, look, q, found = job.say, job.decimals, work.quantities, job.assessment
    row = _words(job, row, say("table.chart"), found.stability.chart or say("table.none"))
    if found.subgroup_count and found.subgroup_size and found.subgroup_size > 1:
        row = _words(job, row, say("table.subgroups"), f"{found.subgroup_count} × {found.subgroup_size}")
    if "within_s" in q:
        row = _line(job, row, say("table.within_s"), [(q["within_s"], look.spread)])
    if "within_s" in q and "s" in q:
        _label(job, row, say("table.ratio"))
        within, whole = q["within_s"], q["s"]
        job.pen.formula(row, 3, f"{within.ref}/{whole.ref}", within.number / whole.number, "figure", "0.00")
        row += 1
    signals = found.stability.signals
    row = _words(job, row, say("table.signals"), str(len(signals)) if signals else say("table.none"))
    for signal in signals[:MOST_SIGNALS]:
        row = _signal(job, row, signal)
    return row


def _signal(job: Job, row: int, signal: Signal) -> int:
    """A broken rule with its points, and a link to the first cell behind them."""
    points = ", ".join(str(p) for p in signal.points[:MOST_POINTS]) + ("…" if len(signal.points) > MOST_POINTS else "")
    text = job.say("table.signal", rule=signal.rule, points=points) if points else signal.rule
    cell = job.linked(signal.cells[0]) if signal.cells else None
    if cell is not None:
        job.pen.link(row, 3, cell, cell.address, "link_small")
    lines = 1 if len(text) <= SIGNAL_LETTERS else 2
    job.pen.sheet.merge_range(row, 0, row + lines - 1, 2, "", job.pen.formats("words_muted"))
    job.pen.text(row, 0, text, "words_muted")
    return row + lines


def shape_table(job: Job, work: Workings, row: int) -> int:
    """The candidates, the one in use first; gives the row below."""
    pen, say, candidates, q = job.pen, job.say, work.candidates, work.quantities
    if "a2" in q:
        row = _line(job, row, say("table.normal"), [(q["a2"], decimals.MOMENT), (q["a2_p"], decimals.PROBABILITY)])
    if candidates is None:
        return row
    if "x_low" in q:
        look = job.decimals.mean
        row = _line(job, row, say("table.quantiles"), [(q[k], look) for k in ("x_low", "x_median", "x_high")])
    row += 1
    pen.text(row, 0, say("table.model"), "head")
    for column, key in enumerate(("weight", "p", "Ppk"), start=1):
        pen.text(row, column, say(f"table.{key}"), "head_right")
    for i in range(min(candidates.count, MOST_MODELS)):
        row += 1
        title, selector = candidates.title.at(i), q["model"]
        mark = say("table.in_use")
        told = (mark if selector.number == i + 1 else "") + str(title.value)
        pen.formula(row, 0, f'IF({selector.ref}={i + 1},"{mark}","")&{title.ref}', told, "label")
        pen.formula(row, 1, candidates.weight.at(i).ref, candidates.weight.at(i).number, "figure", decimals.SHARE)
        _number(job, row, 2, candidates.p_value.at(i), decimals.PROBABILITY)
        _number(job, row, 3, candidates.ppk.at(i), decimals.INDEX)
    if candidates.count > MOST_MODELS:
        row += 1
        pen.text(row, 0, say("table.more_models", count=candidates.count - MOST_MODELS), "muted")
    return row + 1


def capable_table(job: Job, work: Workings, row: int) -> int:
    """Indices with bounds, rates expected and seen; gives the row below."""
    pen, say, q = job.pen, job.say, work.quantities
    pen.text(row, 0, say("table.index"), "head")
    for column, key in enumerate(("estimate", "at_least", "at_most"), start=1):
        pen.text(row, column, say(f"table.{key}"), "head_right")
    row += 1
    for index in ("Ppk", "Pp", "Cpk", "Cp"):
        if index in q and q[index].is_number:
            row = _three(job, row, index, (index, f"{index}_lower", f"{index}_upper"), work, decimals.INDEX)
    if "total" in q:
        row = _three(job, row, say("table.expected"), ("total", "total_lower", "total_upper"), work, decimals.RATE)
    if "observed" in q:
        n = len(job.assessment.sample.values)
        row = _three(job, row, say("table.observed", n=n), ("observed",), work, "0")
        row = _three(
            job, row, say("table.observed_rate"), ("", "observed_lower", "observed_upper"), work, decimals.OBSERVED_RATE
        )
    claimed = job.assessment.characteristic
    if claimed.claimed_value is not None:
        _label(job, row, say("table.claimed", index=claimed.claimed_index).rstrip())
        pen.number(row, 1, claimed.claimed_value, "figure", "0.00")
        row += 1
    return row


def write_caption(job: Job, row: int, question: str) -> int:
    """What the signs in the pictures mean, below the table of a question; gives the row below."""
    if not job.has_spread:
        return row
    text = job.say(f"caption.{question}", confidence=job.say.percent(job.assessment.confidence))
    lines = -(-len(text) // CAPTION_LETTERS)
    job.pen.sheet.merge_range(row, 0, row + lines - 1, 3, "", job.pen.formats("words_caption"))
    job.pen.text(row, 0, text, "words_caption")
    return row + lines


def _three(job: Job, row: int, label: str, keys: tuple[str, ...], work: Workings, number_format: str) -> int:
    _label(job, row, label)
    for column, key in enumerate(keys, start=1):
        if key in work.quantities:
            _number(job, row, column, work.quantities[key], number_format)
    return row + 1


def _label(job: Job, row: int, label: str) -> None:
    job.pen.text(row, 0, label, "label")
    _fill(job, row, 1)


def _fill(job: Job, row: int, first: int) -> None:
    for column in range(first, 4):
        job.pen.blank(row, column, "figure")


def _line(job: Job, row: int, label: str, cells: list[tuple[Placed, str]]) -> int:
    """A label and up to three numbers, set to the right."""
    _label(job, row, label)
    for offset, (cell, number_format) in enumerate(cells):
        _number(job, row, 4 - len(cells) + offset, cell, number_format)
    return row + 1


def _words(job: Job, row: int, label: str, words: str) -> int:
    _label(job, row, label)
    job.pen.text(row, 3, words, "figure")
    return row + 1


def _number(job: Job, row: int, column: int, cell: Placed, number_format: str) -> None:
    """A number of the workings; an index is cut off, not rounded up."""
    if cell.value is None:
        job.pen.text(row, column, NONE, "figure")
    elif number_format == decimals.INDEX:
        write_index(job.pen, row, column, cell, cell.ref, "figure")
    else:
        job.pen.formula(row, column, cell.ref, cell.value, "figure", number_format)


def write_index(pen: Pen, row: int, column: int, cell: Placed, reference: str, style: str) -> None:
    """An index as it is shown: cut off after two decimals."""
    formula = f"IF(ISNUMBER({reference}),{cut_off(reference)},{literal(NONE)})"
    pen.formula(row, column, formula, cut(cell.number) if cell.is_number else NONE, style, decimals.INDEX)


TABLES: Mapping[str, Callable[[Job, Workings, int], int]] = {
    "data": data_table,
    "steady": steady_table,
    "shape": shape_table,
    "capable": capable_table,
}
