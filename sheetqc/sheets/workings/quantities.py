"""The quantities of a characteristic, a row each: label, live value, value as of the analysis, defined name."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.sheets.cells import NONE, Placed, Value
from sheetqc.sheets.expressions import literal
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground

HEADS = ("quantity", "live", "analysed", "name")
WIDTHS = (210, 96, 96, 150)


@dataclass(frozen=True, slots=True, kw_only=True)
class NamedQuantity:
    """A quantity with the last part of its defined name, its label, cell and number format."""

    name: str
    label: str
    cell: Placed
    number_format: str


class Quantities:
    """A list that grows downwards; each entry can be referred to by its key.

    Parameters
    ----------
    job : the characteristic
    ground : where there is room
    """

    def __init__(self, job: Job, ground: Ground) -> None:
        self._job = job
        self._column = ground.block(
            job.say("work.quantities"), tuple(job.say(f"work.quantities.{k}") for k in HEADS), WIDTHS
        )
        self._row = FIRST
        self._placed: dict[str, Placed] = {}
        self.names: list[NamedQuantity] = []
        """Quantities that get a defined name."""

    def __getitem__(self, key: str) -> Placed:
        return self._placed[key]

    def __contains__(self, key: str) -> bool:
        return key in self._placed

    def add(
        self,
        key: str,
        formula: str,
        value: Value,
        number_format: str = "",
        *,
        analysed: Value | None = None,
        name: str = "",
    ) -> Placed:
        """A quantity as a formula; `analysed` is written beside it as it was at the analysis."""
        placed = self._job.pen.formula(self._row, self._column + 1, formula, value, "small", number_format)
        return self._added(key, placed, number_format, analysed, name)

    def as_analysed(self, key: str, value: float | None, number_format: str, *, name: str = "") -> Placed:
        """A number that cannot follow: shown as long as values, limits and model are those of the analysis."""
        if value is None:
            return self.constant(key, NONE, number_format, name=name)
        then = Placed(self._row, self._column + 2, value)
        formula = f"IF({self['unchanged'].ref},{then.ref},{literal(NONE)})"
        return self.add(key, formula, value, number_format, analysed=value, name=name)

    def constant(self, key: str, value: Value | None, number_format: str = "", *, name: str = "") -> Placed:
        """A quantity that a spreadsheet cannot compute; None leaves the cell empty."""
        pen = self._job.pen
        if value is None:
            pen.blank(self._row, self._column + 1, "small")
            placed = Placed(self._row, self._column + 1, None)
        elif isinstance(value, str):
            placed = pen.text(self._row, self._column + 1, value, "small")
        else:
            placed = pen.number(self._row, self._column + 1, value, "small", number_format)
        return self._added(key, placed, number_format, None, name)

    def _added(self, key: str, placed: Placed, number_format: str, analysed: Value | None, name: str) -> Placed:
        pen = self._job.pen
        label = self._job.say(f"quantity.{key}")
        pen.text(self._row, self._column, label, "small")
        if isinstance(analysed, str):
            pen.text(self._row, self._column + 2, analysed, "small")
        elif analysed is not None:
            pen.number(self._row, self._column + 2, analysed, "small", number_format)
        if name:
            self.names.append(NamedQuantity(name=name, label=label, cell=placed, number_format=number_format))
        self._placed[key] = placed
        self._row += 1
        return placed

    def analysed(self, key: str) -> Placed:
        """The cell that holds the value as of the analysis."""
        live = self._placed[key]
        return Placed(live.row, live.column + 1, live.value)

    def name_cell(self, placed: Placed) -> tuple[int, int]:
        """Row and column where the defined name of a quantity is told."""
        return placed.row, self._column + 3
