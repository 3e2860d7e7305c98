"""Two-point lines that draw limits, quantiles and the requirement, so that they move when a cell is changed."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.sheets.axis import Axis
from sheetqc.sheets.cells import NA, Column, Placed
from sheetqc.sheets.expressions import constant
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """Two points."""

    x: Column
    y: Column


class Lines:
    """Writes lines below one another.

    Parameters
    ----------
    job : the characteristic
    ground : where there is room
    """

    def __init__(self, job: Job, ground: Ground) -> None:
        heads = tuple(job.say(f"work.lines.{k}") for k in ("line", "x", "y"))
        self._job = job
        self._column = ground.block(job.say("work.lines"), heads, (130,))
        self._row = FIRST

    def upright(self, label: str, cell: Placed, axis: Axis, low: float, high: float) -> Line:
        """An upright line at what the cell holds, between two heights; not drawn where it holds no number.

        A place that is no number would turn the whole series into one of text, so the axis' end stands in for it.
        """
        x = f"IF(ISNUMBER({cell.ref}),{cell.ref},{constant(axis.minimum)})"
        value = cell.number if cell.is_number else axis.minimum
        return self._line(
            label,
            ([x, x], [value, value]),
            (
                [f"IF(ISNUMBER({cell.ref}),{constant(y)},NA())" for y in (low, high)],
                [y if cell.is_number else NA for y in (low, high)],
            ),
        )

    def level(self, label: str, cell: Placed, first: float, last: float) -> Line:
        """A level line at what the cell holds, from one place to another; not drawn where it holds no number."""
        y = f"IF(ISNUMBER({cell.ref}),{cell.ref},NA())"
        value = cell.number if cell.is_number else NA
        return self._line(label, ([constant(first), constant(last)], [first, last]), ([y, y], [value, value]))

    def reach(self, label: str, end: Placed, limit: Placed, height: float, *, upwards: bool) -> Line:
        """A level line from the last value to a limit beyond it, with a point in the middle; else not drawn."""
        sign = ">" if upwards else "<"
        beyond = f"AND(ISNUMBER({limit.ref}),N({limit.ref}){sign}{end.ref})"
        drawn = limit.is_number and (limit.number > end.number if upwards else limit.number < end.number)
        far = f"IF({beyond},{limit.ref},{end.ref})"
        value = limit.number if drawn else end.number
        y = f"IF({beyond},{constant(height)},NA())"
        return self._line(
            label,
            ([end.ref, f"({end.ref}+{far})/2", far], [end.number, (end.number + value) / 2, value]),
            ([y] * 3, [height if drawn else NA] * 3),
        )

    def anchors(self, label: str, x: float, cells: list[Placed]) -> Line:
        """Points at one place, each at the height that a cell holds: where labels are hung."""
        return self._line(
            label,
            ([constant(x)] * len(cells), [x] * len(cells)),
            ([cell.ref for cell in cells], [cell.number for cell in cells]),
        )

    def constants(self, label: str, values: list[float]) -> Column:
        """Places below one another that do not move."""
        pen, row = self._job.pen, self._row
        pen.text(row, self._column, label, "small")
        self._row += len(values)
        return pen.numbers(row, self._column + 1, values)

    def _line(
        self,
        label: str,
        x: tuple[list[str], list[float]],
        y: tuple[list[str], list[float | str]] | tuple[list[str], list[float]],
    ) -> Line:
        pen, row = self._job.pen, self._row
        pen.text(row, self._column, label, "small")
        self._row += len(x[0])
        return Line(
            x=pen.formulas(row, self._column + 1, *x),
            y=pen.formulas(row, self._column + 2, *y),
        )
