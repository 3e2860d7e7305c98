"""The measured values: rows of qc:measurements, wide or long."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.columns import Columns, columns_of
from sheetqc.intake.content import Held, is_text, shown
from sheetqc.intake.doubts import Doubts, counted, listed, places
from sheetqc.intake.figures import decimal_mark
from sheetqc.intake.heading import heading_row
from sheetqc.intake.naming import Names, without_unit
from sheetqc.intake.remarks import tell
from sheetqc.intake.rows import Row, sorted_rows
from sheetqc.intake.scale import reference_size
from sheetqc.intake.taking import Scale, Taking
from sheetqc.study import Characteristic, LeftOut


@dataclass(slots=True)
class Piece:
    """What one block gives for one characteristic; the lists run in step."""

    block: Block
    characteristic: str
    values: list[float] = field(default_factory=list)
    cells: list[Cell] = field(default_factory=list)
    marks: list[str] = field(default_factory=list)
    copied: list[bool] = field(default_factory=list)
    subgroups: list[str] | None = None
    times: list[str] | None = None
    streams: list[str] | None = None
    left_out: list[LeftOut] = field(default_factory=list)


Raw = tuple[Row, int, Held]
"""A cell that should hold a value: its row, its column, what it holds."""


def pieces_of(block: Block, characteristics: Sequence[Characteristic], doubts: Doubts) -> list[Piece]:
    """What a qc:measurements block gives, a piece for each characteristic with a column or rows in it."""
    names = Names(characteristics)
    headings = heading_row(block, lambda text: _known(text, names))
    if headings is None:
        _no_known_heading(block, names, doubts)
        return []
    columns = columns_of(headings, "measurements", names, doubts)
    rows = sorted_rows(headings, columns, doubts)
    raw = _long(columns, rows, names, doubts) if columns.long else _wide(columns, rows)
    _tell_hidden(block, [(r.number, c) for entries in raw.values() for r, c, _ in entries], doubts)
    texts = (shown(h) for entries in raw.values() for _, _, h in entries if h.__class__ is not float and is_text(h))
    decimal = decimal_mark(texts)
    by_id = {c.id: c for c in characteristics}
    return [piece_of(columns, by_id[i], entries, decimal, doubts) for i, entries in raw.items()]


def _known(text: str, names: Names) -> bool:
    return vocabulary.field_of("measurements", text) not in (None, "aside") or names.loose(text) is not None


def _no_known_heading(block: Block, names: Names, doubts: Doubts) -> None:
    rows = block.filled
    cells = (block.at, *(block.sheet.cell(rows[0], c) for c in block.columns(rows[0]))) if rows else (block.at,)
    met = f"row {rows[0]} holds {listed([block.sheet.text(c.row, c.column) for c in cells[1:]])}" if rows else ""
    doubts.add(
        "no-heading-row",
        "stop",
        f"Below the tag {block.tag} ({block.at}) a row of headings is expected: the Id or Name of a characteristic "
        f"above each column of values (listed are {listed(names.ids)}); {met or 'nothing stands there'}. Add the "
        "heading row directly below the tag.",
        cells,
    )


def _wide(columns: Columns, rows: Sequence[Row]) -> dict[str, list[Raw]]:
    """Raw cells of each characteristic: row after row, within a row from left to right."""
    sheet = columns.block.sheet
    held = [(row, sheet.rows[row.number]) for row in rows]
    return {
        identity: [(row, c, contents[c]) for row, contents in held for c in own if c in contents]
        for identity, own in columns.values.items()
    }


def _long(columns: Columns, rows: Sequence[Row], names: Names, doubts: Doubts) -> dict[str, list[Raw]]:
    sheet = columns.block.sheet
    raw: dict[str, list[Raw]] = {}
    unlisted: dict[str, list[Cell]] = {}
    for row in rows:
        content = sheet.at(row.number, columns.fields["value"])
        text = sheet.spread_text(row.number, columns.fields["characteristic"])
        if content is None:
            continue
        identity = names.exact(text) or names.loose(text)
        if identity is None:
            unlisted.setdefault(text, []).append(sheet.cell(row.number, columns.fields["characteristic"]))
            continue
        raw.setdefault(identity, []).append((row, columns.fields["value"], content))
    for text, cells in unlisted.items():
        what = f"the characteristic {text}" if text else "no characteristic"
        doubts.add(
            "unlisted-characteristic",
            "caution",
            f"{counted(len(cells), 'row')} ({places(cells)}) {'name' if len(cells) > 1 else 'names'} {what}, which is "
            f"not listed below qc:characteristics; the values were not used. Listed are {listed(names.ids)}.",
            cells,
        )
    return raw


def _tell_hidden(block: Block, places_used: Sequence[tuple[int, int]], doubts: Doubts) -> None:
    sheet = block.sheet
    if sheet.hidden_rows:
        hidden = [sheet.cell(r, c) for r, c in places_used if r in sheet.hidden_rows]
        _tell_hidden_cells("row", len({c.row for c in hidden}), hidden, doubts)
    if sheet.hidden_columns:
        hidden = [sheet.cell(r, c) for r, c in places_used if sheet.column_hidden(c)]
        _tell_hidden_cells("column", len({c.column for c in hidden}), hidden, doubts)


def _tell_hidden_cells(what: str, count: int, hidden: Sequence[Cell], doubts: Doubts) -> None:
    if hidden:
        doubts.add(
            f"hidden-{what}s",
            "caution",
            f"{counted(count, what)} with measured values {'are' if count > 1 else 'is'} hidden or filtered away "
            f"({places(hidden)}) and {'were' if count > 1 else 'was'} used all the same. To keep values out, give a "
            "reason under Leave out.",
            hidden,
        )


def piece_of(columns: Columns, asked: Characteristic, raw: Sequence[Raw], decimal: str | None, doubts: Doubts) -> Piece:
    """The values of one characteristic with their labels; what is noteworthy in its cells is told."""
    piece = Piece(block=columns.block, characteristic=asked.id)
    takings = _takings(columns, asked, raw, decimal)
    unheard = {column: Taking(taking.scale) for column, taking in takings.items()}
    plain = {column for column, taking in takings.items() if taking.scale.heading_factor == 1.0}
    name = columns.block.sheet.name
    used: list[tuple[int, Row, int]] = []
    for position, (row, column, held) in enumerate(raw):
        cell = Cell(name, row.number, column)
        if held.__class__ is float and column in plain and not row.reason:
            value, mark, copied = held, "", False
        else:
            taken = (unheard if row.reason else takings)[column].value(held, cell)
            if row.reason:
                value_left = None if taken is None else taken.value
                piece.left_out.append(LeftOut(value=value_left, cell=cell, reason=row.reason))
                continue
            if taken is None:
                continue
            value, mark, copied = taken.value, taken.mark, taken.copied
        piece.values.append(value)
        piece.cells.append(cell)
        piece.marks.append(mark)
        piece.copied.append(copied)
        used.append((position, row, column))
    _label(piece, columns, asked, used)
    tell(_merged(takings.values()), asked.id, doubts)
    return piece


def _takings(columns: Columns, asked: Characteristic, raw: Sequence[Raw], decimal: str | None) -> dict[int, Taking]:
    """What takes the values of each column."""
    reference = reference_size((held for _, _, held in raw), asked)
    return {
        column: Taking(
            Scale(
                unit=asked.unit,
                typed_unit=columns.units.get(column) or without_unit(columns.texts.get(column, ""))[1],
                decimal=decimal,
                reference=reference,
            )
        )
        for column in sorted({column for _, column, _ in raw})
    }


def _label(piece: Piece, columns: Columns, asked: Characteristic, used: Sequence[tuple[int, Row, int]]) -> None:
    """Labels the values: subgroup by column, else by row where values run across, else by consecutive values."""
    across = len(columns.values.get(asked.id, ())) > 1 and not columns.streams
    if "subgroup" in columns.fields and any(row.subgroup for _, row, _ in used):
        piece.subgroups = [row.subgroup for _, row, _ in used]
    elif across:
        piece.subgroups = [str(row.place) for _, row, _ in used]
    elif asked.subgroup_size is not None:
        piece.subgroups = [str(position // asked.subgroup_size + 1) for position, _, _ in used]
    if any(row.time for _, row, _ in used):
        piece.times = [row.time for _, row, _ in used]
    streams = [columns.streams.get(column, "") or row.stream for _, row, column in used]
    piece.streams = streams if any(streams) else None


def _merged(takings: Iterable[Taking]) -> Taking:
    whole = Taking(Scale())
    for taking in takings:
        for what, met in taking.met.items():
            whole.met[what].extend(met)
    return whole
