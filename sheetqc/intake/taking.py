"""Cells turned into measured values, with everything that was repaired or set aside written down."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass, replace

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.content import Content, Held, plain, shown
from sheetqc.intake.figures import Figure, by_mark, figure_in, nearer, tidied
from sheetqc.intake.units import factor, is_unit


@dataclass(frozen=True, slots=True, kw_only=True)
class Taken:
    """A value taken from a cell; `mark` is "<" or ">" when only a bound is known."""

    value: float
    cell: Cell
    mark: str = ""
    copied: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Scale:
    """What is known of a characteristic's figures before a cell is read.

    `unit` is the unit asked for, `typed_unit` the one in the column's heading, `decimal` the decimal mark of the
    block's texts, `reference` a size the values are expected near.
    """

    unit: str = ""
    typed_unit: str = ""
    decimal: str | None = None
    reference: float | None = None

    @property
    def heading_factor(self) -> float:
        """What the column's numbers are multiplied with to come to the unit asked for."""
        if not self.typed_unit or not self.unit:
            return 1.0
        return factor(self.typed_unit, self.unit) or 1.0


class Taking:
    """Takes values from cells; `met` holds what was noteworthy: a word for it, then cells with what stood there."""

    def __init__(self, scale: Scale) -> None:
        self.scale = scale
        self.met: defaultdict[str, list[tuple[Cell, str]]] = defaultdict(list)
        self._factor = scale.heading_factor

    def value(self, held: Held, cell: Cell) -> Taken | None:
        """The value of a cell; None when it holds none that can be used."""
        if isinstance(held, float):
            if self._factor == 1.0:
                return Taken(value=held, cell=cell)
            return self._converted(held, cell, self._factor, plain(held), "")
        if isinstance(held, str):
            return self._from_text(held, cell)
        return self._from_content(held, cell)

    def _note(self, what: str, cell: Cell, text: str) -> None:
        self.met[what].append((cell, text))

    def _from_content(self, held: Content, cell: Cell) -> Taken | None:
        if held.nature == "text":
            taken = self._from_text(held.text, cell)
        elif held.computed and held.number is not None:
            self._note("computed", cell, f"{held.formula} as {plain(held.number)}")
            taken = replace(self._from_number(held.number, held.percent, cell), copied=True)
        elif held.nature == "number" and held.number is not None:
            taken = self._from_number(held.number, held.percent, cell)
        else:
            self._note(held.nature, cell, shown(held))
            return None
        if held.struck and taken is not None:
            self._note("struck", cell, shown(held))
        return taken

    def _from_number(self, number: float, percent: bool, cell: Cell) -> Taken:
        if percent and self.scale.unit.strip() == "%":
            return self._converted(number, cell, 100.0, f"{plain(number * 100)}%", "")
        if percent:
            self._note("percent", cell, f"{plain(number * 100)}%")
        if self._factor != 1.0:
            return self._converted(number, cell, self._factor, plain(number), "")
        return Taken(value=number, cell=cell)

    def _converted(self, number: float, cell: Cell, by: float, text: str, mark: str) -> Taken:
        self._note("converted", cell, f"{text} as {plain(number * by)}")
        return Taken(value=number * by, cell=cell, mark=mark, copied=True)

    def _from_text(self, text: str, cell: Cell) -> Taken | None:
        figure = figure_in(text)
        if figure.sense == "ambiguous":
            return self._from_ambiguous(figure, text, cell)
        if figure.sense != "number":
            self._note(figure.sense, cell, tidied(text))
            return None
        return self._with_rest(figure.number, figure, text, cell)

    def _from_ambiguous(self, figure: Figure, text: str, cell: Cell) -> Taken | None:
        """The decimal mark of the other texts decides, unless the size of the other values speaks against it."""
        likely, expected = by_mark(figure, self.scale.decimal), nearer(figure, self.scale.reference)
        number = expected if expected is not None else likely
        if number is None:
            self._note("ambiguous", cell, tidied(text))
            return None
        taken = self._with_rest(number, figure, text, cell)
        if number != likely and taken is not None:
            self._note("resolved", cell, f"{tidied(text)} as {plain(number)}")
        return taken

    def _with_rest(self, number: float, figure: Figure, text: str, cell: Cell) -> Taken | None:
        """The value of a text, by what was typed after the figure: nothing, a unit, or a mark."""
        rest = figure.rest
        by = self._factor
        if rest and is_unit(rest) and self.scale.unit:
            typed = factor(rest, self.scale.unit)
            if typed is None:
                self._note("other unit", cell, tidied(text))
                return None
            by = typed
        elif rest and not is_unit(rest) and rest.casefold() != self.scale.unit.strip().casefold():
            if not vocabulary.word_in("mark", rest):
                self._note("words", cell, tidied(text))
                return None
            self._note("marked", cell, tidied(text))
        if by != 1.0:
            return self._converted(number, cell, by, tidied(text), figure.mark)
        self._note("bounded" if figure.mark else "repaired", cell, f"{tidied(text)} as {plain(number)}")
        return Taken(value=number, cell=cell, mark=figure.mark, copied=True)
