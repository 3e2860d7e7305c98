"""What the picture of the candidates draws: a row per model, the answer on top."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.assessment import ModelFit
from sheetqc.sheets.cells import NA, Column, Placed
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.candidates import Candidates
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.quantities import Quantities
from sheetqc.stats.families import family

MOST = 11
"""Models that the picture has room for."""

HEADS = ("label", "height", "index", "less", "more", "in_use")


@dataclass(frozen=True, slots=True, kw_only=True)
class Intervals:
    """Columns of the candidates: height in the picture, index, lengths of the interval to both sides.

    The first row is the answer: the model in use with the bounds over all admitted models.
    """

    label: Column
    height: Column
    index: Column
    less: Column
    more: Column
    in_use: Column

    @property
    def rows(self) -> int:
        """How many rows, the answer included."""
        return len(self.height.values)


def write_intervals(job: Job, ground: Ground, candidates: Candidates, quantities: Quantities) -> Intervals:
    """Writes the rows. Where there is no index, a point at 0 is not drawn, since its height is missing."""
    column = ground.block(job.say("work.intervals"), tuple(job.say(f"work.intervals.{k}") for k in HEADS), (130,))
    pen, count = job.pen, min(candidates.count, MOST)
    labels = (job.say("chart.candidates.answer"), *(_name(job, f) for f in candidates.fits[:count]))
    for row, label in enumerate(labels):
        pen.text(FIRST + row, column, label, "small")
    index = [quantities["Ppk"], *(candidates.ppk.at(i) for i in range(count))]
    lower = [quantities["Ppk_lower"], *(candidates.ppk_lower.at(i) for i in range(count))]
    upper = [quantities["Ppk_upper"], *(candidates.ppk_upper.at(i) for i in range(count))]
    heights = [count + 1.3, *range(count, 0, -1)]
    selector = quantities["model"]
    return Intervals(
        label=Column(FIRST, column, labels),
        height=pen.formulas(
            FIRST,
            column + 1,
            [f"IF(ISNUMBER({c.ref}),{h},NA())" for c, h in zip(index, heights, strict=True)],
            [h if c.is_number else NA for c, h in zip(index, heights, strict=True)],
        ),
        index=pen.formulas(FIRST, column + 2, [f"N({c.ref})" for c in index], [_or_zero(c) for c in index], "0.00"),
        less=_lengths(job, column + 3, index, lower, -1),
        more=_lengths(job, column + 4, index, upper, 1),
        in_use=pen.formulas(
            FIRST,
            column + 5,
            ["NA()"] + [f"IF({selector.ref}={i + 1},{heights[i + 1]},NA())" for i in range(count)],
            [NA] + [heights[i + 1] if selector.number == i + 1 else NA for i in range(count)],
        ),
    )


def _name(job: Job, fit: ModelFit) -> str:
    """The title of a model; a shorter one where there is one."""
    return job.say.if_any(f"short.{fit.family}") or family(fit.family).title


def _or_zero(cell: Placed) -> float:
    return cell.number if cell.is_number else 0.0


def _lengths(job: Job, column: int, index: list[Placed], end: list[Placed], sign: int) -> Column:
    """Lengths of the intervals to one side; 0 where there is no bound."""
    formulas, values = [], []
    for here, there in zip(index, end, strict=True):
        first, second = (there, here) if sign > 0 else (here, there)
        formulas.append(f"IF(COUNT({here.ref},{there.ref})=2,ROUND(MAX(0,{first.ref}-{second.ref}),6),0)")
        known = here.is_number and there.is_number
        values.append(round(max(0.0, first.number - second.number), 6) if known else 0.0)
    return job.pen.formulas(FIRST, column, formulas, values, "0.00")
