"""Single entries of a characteristic: numbers and words, each doubt told with its cell."""

from __future__ import annotations

from sheetqc import vocabulary
from sheetqc.finding import Cell, Level
from sheetqc.intake.content import Content, Held, nature, number_in, plain, shown
from sheetqc.intake.doubts import Doubts, listed
from sheetqc.intake.figures import Figure, by_mark, limit_in, tidied
from sheetqc.intake.units import factor, is_unit

_WRONG_SIDE = {"lower": "<", "upper": ">"}
_STOPPING = ("lower", "upper")
"""Fields without which a verdict would be about something else."""


class EntryReader:
    """Reads the entries of one block; `decimal` is the decimal mark its texts show, None when they show none."""

    def __init__(self, decimal: str | None, doubts: Doubts) -> None:
        self._decimal = decimal
        self._doubts = doubts

    def number(self, field: str, held: Held, cell: Cell, of: str, unit: str) -> float | None:
        """The number of an entry, None when it holds none."""
        number = number_in(held)
        if number is not None:
            percent = isinstance(held, Content) and held.percent and unit.strip() == "%"
            return number * 100 if percent else number
        if nature(held) == "text":
            return self._from_text(field, shown(held), cell, of, unit)
        met = {
            "error": f"the error value {shown(held)}",
            "date": f"a date ({shown(held)})",
            "boolean": shown(held),
            "uncalculated": "a formula whose result is not stored in the file",
        }[nature(held)]
        self._unreadable(field, met, cell, of)
        return None

    def _from_text(self, field: str, text: str, cell: Cell, of: str, unit: str) -> float | None:
        figure = limit_in(text)
        if figure.sense in ("missing", "undetected"):
            return None
        if figure.sense == "words" or figure.mark == _WRONG_SIDE.get(field, "none"):
            self._unreadable(field, f"“{tidied(text)}”", cell, of)
            return None
        by = self._unit_factor(figure, unit)
        if by is None:
            self._unreadable(field, f"“{tidied(text)}”", cell, of)
            return None
        by_others = by_mark(figure, self._decimal) if figure.sense == "ambiguous" else figure.number
        number = (figure.number if by_others is None else by_others) * by
        level: Level = "caution" if by_others is None or by != 1.0 else "note"
        self._doubts.add(
            "entry-as-text",
            level,
            f"{_title(field)} of {of} ({cell}) holds the text “{tidied(text)}”, which was read as {plain(number)}. "
            "Type it as a number if that is wrong.",
            (cell,),
            of=of,
        )
        return number

    @staticmethod
    def _unit_factor(figure: Figure, unit: str) -> float | None:
        rest = figure.rest
        if not rest or rest.casefold() == unit.strip().casefold():
            return 1.0
        if not is_unit(rest):
            return None
        return factor(rest, unit) if unit else 1.0

    def _unreadable(self, field: str, met: str, cell: Cell, of: str) -> None:
        self._doubts.add(
            "unreadable-entry",
            "stop" if field in _STOPPING else "caution",
            f"{_title(field)} of {of} ({cell}) holds {met}; a number was expected. It was not used. Correct it.",
            (cell,),
            of=of,
        )

    def size(self, number: float | None, held: tuple[Held, Cell] | None, of: str) -> int | None:
        """A subgroup size, None when it is none or 1."""
        if number is None or held is None:
            return None
        if number == int(number) and 1 <= number <= 1000:
            return int(number) if number > 1 else None
        self._doubts.add(
            "unreadable-entry",
            "caution",
            f"Subgroup size of {of} ({held[1]}) is {plain(number)}; a whole number of at least 1 was expected. It was "
            "not used. Correct it.",
            (held[1],),
            of=of,
        )
        return None

    def word(self, field: str, held: Held, cell: Cell, of: str) -> str:
        """The kind or model an entry names, in sheetqc's own word; "" when it names none."""
        text = tidied(shown(held))
        if nature(held) == "text" and vocabulary.word_in("missing", text):
            return ""
        if field == "kind":
            kind = vocabulary.kind_named(text)
            found = None if kind is None else kind.name
            known = [k.name for k in vocabulary.KINDS]
        else:
            found = vocabulary.model_named(text)
            known = [m for m in vocabulary.MODELS if m]
        if found is not None:
            return found
        self._doubts.add(
            f"unknown-{field}",
            "caution",
            f"{_title(field)} of {of} ({cell}) holds “{text}”, which is not known; it was left open. Known are "
            f"{listed(known, most=40)}.",
            (cell,),
            of=of,
        )
        return ""


def _title(field: str) -> str:
    return next(h.title for h in vocabulary.headings("characteristics") if h.field == field)
