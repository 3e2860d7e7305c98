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
from sheetqc.intake.taking import Scale, Taken, Taking
from sheetqc.study import Characteristic, LeftOut


@dataclass(slots=True)
class Piece:
    """What one block gives for one characteristic; the lists run in step."""

    block: Block
    characteristic: str
    taken: list[Taken] = field(default_factory=list)
    subgroups: list[str] | None = None
    times: list[str] | None = None
    streams: list[str] | None = None
    left_out: list[LeftOut] = field(default_factory=list)


@dataclass(frozen=True, slots=True, kw_only=True)
class Raw:
    """A cell that should hold a value, with its row, its place across the row and the stream of its column."""

    row: Row
    cell: Cell
    held: Held
    column: int
    stream: str = ""


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
    _tell_hidden(block, [r for entries in raw.values() for r in entries], doubts)
    texts = (shown(r.held) for entries in raw.values() for r in entries if is_text(r.held))
    decimal = decimal_mark(texts)
    by_id = {c.id: c for c in characteristics}
    return [_piece(columns, by_id[i], entries, decimal, doubts) for i, entries in raw.items()]


def _known(text: str, names: Names) -> bool:
    return vocabulary.field_of("measurements", text) not in (None, "aside") or names.loose(text) is not None


def _no_known_heading(block: Block, names: Names, doubts: Doubts) -> None:
    rows = block.rows()
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
    raw: dict[str, list[Raw]] = {identity: [] for identity in columns.values}
    for row in rows:
        held = sheet.rows[row.number]
        for identity, own in columns.values.items():
            for column in own:
                content = held.get(column)
                if content is not None:
                    raw[identity].append(
                        Raw(
                            row=row,
                            cell=sheet.cell(row.number, column),
                            held=content,
                            column=column,
                            stream=columns.streams.get(column, ""),
                        )
                    )
    return raw


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
        cell = sheet.cell(row.number, columns.fields["value"])
        raw.setdefault(identity, []).append(Raw(row=row, cell=cell, held=content, column=cell.column))
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


def _tell_hidden(block: Block, raw: Sequence[Raw], doubts: Doubts) -> None:
    sheet = block.sheet
    hidden = [r.cell for r in raw if r.cell.row in sheet.hidden_rows]
    if hidden:
        rows = sorted({c.row for c in hidden})
        doubts.add(
            "hidden-rows",
            "caution",
            f"{counted(len(rows), 'row')} with measured values {'are' if len(rows) > 1 else 'is'} hidden or filtered "
            f"away ({places(hidden)}) and {'were' if len(rows) > 1 else 'was'} used all the same. To keep values out, "
            "give a reason under Leave out.",
            hidden,
        )
    columns = sorted({r.column for r in raw if sheet.column_hidden(r.column)})
    if columns:
        cells = [r.cell for r in raw if r.column in columns]
        doubts.add(
            "hidden-columns",
            "caution",
            f"{counted(len(columns), 'column')} with measured values {'are' if len(columns) > 1 else 'is'} hidden "
            f"({places(cells)}) and {'were' if len(columns) > 1 else 'was'} used all the same.",
            cells,
        )


def _piece(columns: Columns, asked: Characteristic, raw: Sequence[Raw], decimal: str | None, doubts: Doubts) -> Piece:
    piece = Piece(block=columns.block, characteristic=asked.id)
    takings: dict[int, Taking] = {}
    labels: list[tuple[str, str, str]] = []
    for position, entry in enumerate(raw):
        taking = takings.get(entry.column)
        if taking is None:
            taking = takings[entry.column] = Taking(_scale(columns, asked, raw, entry.column, decimal))
        taken = taking.value(entry.held, entry.cell)
        if entry.row.reason:
            value = None if taken is None else taken.value
            piece.left_out.append(LeftOut(value=value, cell=entry.cell, reason=entry.row.reason))
        elif taken is not None:
            piece.taken.append(taken)
            labels.append(
                (_subgroup(columns, asked, entry, position), entry.row.time, entry.stream or entry.row.stream)
            )
    if labels:
        subgroups, times, streams = (list(column) for column in zip(*labels, strict=True))
        piece.subgroups = subgroups if any(subgroups) else None
        piece.times = times if any(times) else None
        piece.streams = streams if any(streams) else None
    tell(_merged(takings.values()), asked.id, doubts)
    return piece


def _merged(takings: Iterable[Taking]) -> Taking:
    whole = Taking(Scale())
    for taking in takings:
        for what, met in taking.met.items():
            whole.met[what].extend(met)
    return whole


def _scale(columns: Columns, asked: Characteristic, raw: Sequence[Raw], column: int, decimal: str | None) -> Scale:
    return Scale(
        unit=asked.unit,
        typed_unit=columns.units.get(column) or without_unit(columns.texts.get(column, ""))[1],
        decimal=decimal,
        reference=reference_size((r.held for r in raw), asked),
    )


def _subgroup(columns: Columns, asked: Characteristic, entry: Raw, position: int) -> str:
    """The subgroup of a value: its row's label, else its row where values run across, else consecutive ones."""
    if entry.row.subgroup:
        return entry.row.subgroup
    if len(columns.values.get(asked.id, ())) > 1 and not columns.streams:
        return str(entry.row.place)
    if asked.subgroup_size is not None and "subgroup" not in columns.fields:
        return str(position // asked.subgroup_size + 1)
    return ""
