"""What each column of a block of values holds."""

from __future__ import annotations

from dataclasses import dataclass, field

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.content import number_in
from sheetqc.intake.doubts import Doubts, listed, places
from sheetqc.intake.heading import HeadingRow
from sheetqc.intake.naming import Names
from sheetqc.intake.units import is_unit, unit_key


@dataclass(slots=True)
class Columns:
    """The columns of a block: values by characteristic, fields by name, and what stands beside.

    `streams` labels value columns that each belong to a stream; `units` holds units given below headings.
    """

    block: Block
    texts: dict[int, str]
    values: dict[str, list[int]] = field(default_factory=dict)
    fields: dict[str, int] = field(default_factory=dict)
    streams: dict[int, str] = field(default_factory=dict)
    units: dict[int, str] = field(default_factory=dict)
    beside: list[int] = field(default_factory=list)

    @property
    def long(self) -> bool:
        """Whether each row names its characteristic."""
        return "characteristic" in self.fields and "value" in self.fields


def columns_of(headings: HeadingRow, block_name: str, names: Names, doubts: Doubts) -> Columns:
    """The columns of a block with values, each doubt about a heading told."""
    columns = Columns(block=headings.block, texts=dict(headings.texts))
    unknown: list[int] = []
    unlisted: list[int] = []
    for column in sorted(_all_columns(headings)):
        text = headings.texts.get(column, "")
        identity = names.exact(text) if text else None
        name = vocabulary.field_of(block_name, text)
        if identity is None and (name is None or name == "aside") and _mostly_numbers(headings, column):
            identity = names.loose(text) if text else None
        if identity is not None:
            columns.values.setdefault(identity, []).append(column)
        elif name is not None and name != "aside" and name not in columns.fields:
            columns.fields[name] = column
        else:
            columns.beside.append(column)
            if name is None:
                (unlisted if _mostly_numbers(headings, column) else unknown).append(column)
    _streams(columns, headings)
    if columns.long:
        unknown, unlisted = sorted([*unknown, *unlisted]), []
    _tell_unknown(headings, unknown, doubts)
    _tell_unlisted(headings, unlisted, names, doubts)
    _tell_several(columns, headings, doubts)
    return columns


def _all_columns(headings: HeadingRow) -> set[int]:
    """Columns with a heading, and columns with numbers without one."""
    filled = {c for row in headings.data_rows()[:200] for c in headings.block.columns(row)}
    bare = {c for c in filled - set(headings.texts) if _mostly_numbers(headings, c)}
    return {c for c, text in headings.texts.items() if text} | bare


def _mostly_numbers(headings: HeadingRow, column: int) -> bool:
    sheet = headings.block.sheet
    contents = [held for row in headings.data_rows() if (held := sheet.at(row, column)) is not None]
    numbers = sum(1 for held in contents if number_in(held) is not None)
    return numbers > 0 and 2 * numbers >= len(contents)


def _streams(columns: Columns, headings: HeadingRow) -> None:
    """Second headings such as "Cavity 2" below a characteristic's heading name the stream of their column."""
    for own in columns.values.values():
        for column in own:
            word, _, label = headings.lower.get(column, "").strip().rpartition(" ")
            if len(own) > 1 and word and vocabulary.field_of("measurements", word) == "stream":
                columns.streams[column] = label
            unit = headings.units.get(column) or headings.lower.get(column, "")
            if is_unit(unit):
                columns.units[column] = unit_key(unit)


def _tell_unknown(headings: HeadingRow, unknown: list[int], doubts: Doubts) -> None:
    if not unknown:
        return
    one = len(unknown) == 1
    cells = [headings.cell(c) for c in unknown]
    words = listed([f"{headings.texts[c]} ({headings.cell(c)})" for c in unknown])
    doubts.add(
        "unknown-column",
        "caution",
        f"The heading{'' if one else 's'} {words} below {headings.block.at} {'is' if one else 'are'} not known; "
        f"{'its column was' if one else 'their columns were'} not used. Expected are Ids or names of characteristics "
        f"and {listed(_titles(headings.block.name))}.",
        cells,
    )


def _titles(block_name: str) -> list[str]:
    return [h.title for h in vocabulary.headings(block_name) if h.field != "aside"]


def _tell_unlisted(headings: HeadingRow, unlisted: list[int], names: Names, doubts: Doubts) -> None:
    for column in unlisted:
        text = headings.texts.get(column, "")
        cell = headings.cell(column)
        met = (
            f"is headed “{text}”, which is not the Id or Name of a listed characteristic" if text else "has no heading"
        )
        candidates = names.candidates(text)
        if candidates:
            met = f"is headed “{text}”, which may mean {listed(candidates).replace(' and ', ' or ')}"
        doubts.add(
            "value-column-without-characteristic",
            "caution",
            f"A column of values ({_extent(headings, column)}) {met}; it was not used. Listed are {listed(names.ids)}. "
            "Correct the heading or add the characteristic below qc:characteristics.",
            (cell,),
        )


def _extent(headings: HeadingRow, column: int) -> str:
    sheet = headings.block.sheet
    filled: list[Cell] = [sheet.cell(r, column) for r in headings.data_rows() if sheet.at(r, column) is not None]
    return (
        places([headings.cell(column), *filled[:1]])
        if len(filled) < 2
        else f"{headings.cell(column)} to " + (filled[-1].address)
    )


def _tell_several(columns: Columns, headings: HeadingRow, doubts: Doubts) -> None:
    for identity, own in columns.values.items():
        if len(own) < 2:
            continue
        cells = [headings.block.sheet.cell(headings.last, c) for c in own]
        if columns.streams:
            text = f"{len(own)} columns of {identity} ({places(cells)}) were read as its streams."
        else:
            text = (
                f"{len(own)} columns belong to {identity} ({places(cells)}): the values of a row were read as a "
                f"subgroup of {len(own)}. If that is wrong, give each column a heading of its own."
            )
        same = len({vocabulary.key(headings.upper(c)) for c in own}) == 1
        doubts.add("values-across", "note" if same or columns.streams else "caution", text, cells, of=identity)
