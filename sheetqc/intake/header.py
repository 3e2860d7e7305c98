"""The study as a whole: labels and values of qc:study."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence
from typing import Any

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.content import Held, nature, number_in, shown
from sheetqc.intake.doubts import Doubts, listed
from sheetqc.intake.figures import figure_in, tidied
from sheetqc.study import Header

_BEFORE_NUMBER = re.compile(r"^(?:[CP]m?pk?|Cmk?)?\s*[≥>=:]*\s*", re.IGNORECASE)
_TEXTS = ("part_number", "part_name", "supplier", "lot", "date", "prepared_by", "note")


def header_of(blocks: Sequence[Block], doubts: Doubts) -> Header:
    """The header from all qc:study blocks; the first entry of a label counts."""
    entries: dict[str, tuple[Held, Cell]] = {}
    for block in blocks:
        _collect(block, entries, doubts)
    values: dict[str, Any] = {}
    cells: list[tuple[str, Cell]] = []
    for field, (held, cell) in entries.items():
        value = _value(field, held, cell, doubts)
        if value is not None:
            values[field] = value
            cells.append((field, cell))
    return Header(**values, cells=tuple(cells))


def _collect(block: Block, entries: dict[str, tuple[Held, Cell]], doubts: Doubts) -> None:
    unknown: list[tuple[str, Cell]] = []
    for row, label_column, value_column in _pairs(block):
        label = block.sheet.text(row, label_column)
        field = vocabulary.field_of("study", label)
        if field is None:
            unknown.append((label, block.sheet.cell(row, label_column)))
            continue
        held, cell = block.sheet.rows[row][value_column], block.sheet.cell(row, value_column)
        if field in entries:
            doubts.add(
                "label-twice",
                "caution",
                f"{label} is filled in twice ({entries[field][1]} and {cell}); the first entry was used. Leave one.",
                (entries[field][1], cell),
            )
        else:
            entries[field] = (held, cell)
    if unknown:
        known = listed([h.title for h in vocabulary.headings("study")])
        doubts.add(
            "unknown-label",
            "caution",
            f"Below {block.at} the label{'s' if len(unknown) > 1 else ''} {listed([t for t, _ in unknown])} "
            f"{'are' if len(unknown) > 1 else 'is'} not known and was not used. Known labels are {known}.",
            [cell for _, cell in unknown],
        )


def _pairs(block: Block) -> Iterator[tuple[int, int, int]]:
    """Row, column of the label and column of the value, wherever both are filled in.

    Labels may be merged over several columns: the values stand in the next column that holds anything at all.
    """
    used = sorted({c for row in block.filled for c in block.columns(row)})
    labels = [c for c in used if any(_is_label(block, row, c) for row in block.filled)][:1]
    values = [c for c in used if labels and c > labels[0]][:1]
    for row in block.filled:
        held = block.sheet.rows[row]
        if values and labels[0] in held and values[0] in held:
            yield row, labels[0], values[0]


def _is_label(block: Block, row: int, column: int) -> bool:
    return vocabulary.field_of("study", block.sheet.text(row, column)) is not None


def _value(field: str, held: Held, cell: Cell, doubts: Doubts) -> Any | None:
    if nature(held) in ("error", "uncalculated"):
        met = "an error value" if nature(held) == "error" else "a formula whose result is not stored in the file"
        _unusable(field, f"{met}", "a value", cell, doubts)
        return None
    if field in _TEXTS:
        return shown(held).strip() or None
    return _READERS[field](field, held, cell, doubts)


def _requirement(field: str, held: Held, cell: Cell, doubts: Doubts) -> float | None:
    number = _number(held)
    if number is not None and 0 < number < 10:
        return number
    _unusable(field, tidied(shown(held)), "a number above 0, such as 1.33", cell, doubts)
    return None


def _confidence(field: str, held: Held, cell: Cell, doubts: Doubts) -> float | None:
    number = _number(held)
    if number is not None and number > 1:
        number /= 100
    if number is not None and 0.5 <= number < 1:
        return number
    _unusable(field, tidied(shown(held)), "a share from 50 % to below 100 %, such as 95 %", cell, doubts)
    return None


def _requirement_on(field: str, held: Held, cell: Cell, doubts: Doubts) -> str | None:
    index = vocabulary.index_named(shown(held))
    if index is None:
        _unusable(field, tidied(shown(held)), "Ppk or Cpk", cell, doubts)
    return index


def _stage(field: str, held: Held, cell: Cell, doubts: Doubts) -> str | None:
    stage = vocabulary.stage_named(shown(held))
    if stage is None:
        _unusable(field, tidied(shown(held)), listed(vocabulary.STUDIES).replace(" and ", " or "), cell, doubts)
    return stage


_READERS: dict[str, Callable[[str, Held, Cell, Doubts], Any | None]] = {
    "requirement": _requirement,
    "requirement_on": _requirement_on,
    "confidence": _confidence,
    "stage": _stage,
}


def _number(held: Held) -> float | None:
    number = number_in(held)
    if number is not None or nature(held) != "text":
        return number
    figure = figure_in(_BEFORE_NUMBER.sub("", tidied(shown(held))))
    usable = figure.sense == "number" and figure.rest in ("", "%") and not figure.mark
    if usable and figure.rest == "%":
        return figure.number / 100
    return figure.number if usable or figure.sense == "ambiguous" else None


def _unusable(field: str, met: str, expected: str, cell: Cell, doubts: Doubts) -> None:
    title = next(h.title for h in vocabulary.headings("study") if h.field == field)
    doubts.add(
        "unusable-entry",
        "caution",
        f"{title} ({cell}) holds {met}; expected {expected}. It was not used. Correct it.",
        (cell,),
    )
