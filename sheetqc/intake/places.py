"""Workbooks whose own layout stays: rows of qc:places say what stands where."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.characteristics import LIMITS, Entries, characteristic_of, no_heading_row
from sheetqc.intake.columns import Columns
from sheetqc.intake.content import Held, formula_in, is_text, nature, number_in, shown
from sheetqc.intake.doubts import Doubts, listed
from sheetqc.intake.entry import EntryReader
from sheetqc.intake.figures import decimal_mark
from sheetqc.intake.heading import heading_row
from sheetqc.intake.measurements import Piece, Raw, piece_of
from sheetqc.intake.naming import Names, folded
from sheetqc.intake.references import Place, References
from sheetqc.intake.rows import Row
from sheetqc.study import Characteristic

_LABELS = ("subgroup", "time", "stream", "leave_out")


@dataclass(slots=True)
class Placed:
    """What the rows of one characteristic say: single entries, places of values, places of labels."""

    entries: Entries
    values: list[Place] = field(default_factory=list)
    labels: dict[str, list[Place]] = field(default_factory=dict)
    block: Block | None = None


def placed_in(blocks: Sequence[Block], references: References, doubts: Doubts) -> list[Placed]:
    """What all qc:places blocks say, one record for each characteristic, in reading order."""
    found: dict[str, Placed] = {}
    for block in blocks:
        headings = heading_row(block, lambda text: vocabulary.field_of("places", text) is not None)
        columns = {} if headings is None else {vocabulary.field_of("places", t): c for c, t in headings.texts.items()}
        if headings is None or not {"characteristic", "what", "where"} <= set(columns):
            no_heading_row(block, doubts)
            continue
        own, what, where = (columns[name] for name in ("characteristic", "what", "where"))
        for row in headings.data_rows():
            identity = " ".join(block.sheet.spread_text(row, own).split())
            held = block.sheet.at(row, where)
            if identity and held is not None:
                id_entry: Entries = {"id": (identity, block.sheet.cell(row, own))}
                placed = found.setdefault(folded(identity), Placed(entries=id_entry, block=block))
                target = _Target(block, block.sheet.text(row, what), held, block.sheet.cell(row, where))
                _add(placed, target, references, doubts)
    return list(found.values())


@dataclass(frozen=True, slots=True)
class _Target:
    """One row: its block, what it places, the entry under Where with its cell."""

    block: Block
    what: str
    held: Held
    cell: Cell

    @property
    def text(self) -> str:
        """The reference; a formula under Where refers by itself."""
        return formula_in(self.held) or shown(self.held).strip()


def _add(placed: Placed, target: _Target, references: References, doubts: Doubts) -> None:
    name = _field(target.what)
    identity = shown(placed.entries["id"][0])
    if name is None:
        known = [h.title for b in ("characteristics", "measurements") for h in vocabulary.headings(b)]
        doubts.add(
            "unknown-place",
            "caution",
            f"What of {identity} ({target.block.sheet.name}, row {target.cell.row}) is “{target.what}”, which is not "
            f"known; it was not used. Known are Values and {listed(sorted(set(known)), most=40)}.",
            (target.cell,),
            of=identity,
        )
        return
    places = (
        None
        if number_in(target.held) is not None and not formula_in(target.held)
        else (references.places(target.text, target.block.sheet))
    )
    if places is None and name not in ("value", *_LABELS):
        placed.entries.setdefault(name, (target.held, target.cell))
    elif places is None:
        doubts.add(
            "unknown-reference",
            "stop" if name == "value" else "caution",
            f"Where of {identity}, {target.what} ({target.cell}), is “{target.text}”, which refers to nothing in this "
            "workbook. A reference such as 'Run 1'!C12:C136 or a defined name is expected.",
            (target.cell,),
            of=identity,
        )
    elif name == "value":
        placed.values.extend(places)
    elif name in _LABELS:
        placed.labels.setdefault(name, []).extend(places)
    else:
        _add_entry(placed, name, places[0])


def _add_entry(placed: Placed, name: str, place: Place) -> None:
    held = place.sheet.at(place.area.top, place.area.left)
    if held is not None:
        placed.entries.setdefault(name, (held, place.sheet.cell(place.area.top, place.area.left)))


def _field(what: str) -> str | None:
    """The field that What names: of the measurements, else of the characteristics."""
    if vocabulary.key(what) in ("values", "messwerte", "werte"):
        return "value"
    measured = vocabulary.field_of("measurements", what)
    if measured in ("value", *_LABELS):
        return measured
    return vocabulary.field_of("characteristics", what)


def with_placed(
    characteristics: Sequence[Characteristic], placed: Sequence[Placed], doubts: Doubts
) -> tuple[Characteristic, ...]:
    """The characteristics with what is placed elsewhere filled in, and those that are only placed added."""
    names = Names(characteristics)
    known = {c.id: c for c in characteristics}
    for entry in placed:
        texts = [shown(held) for held, _ in entry.entries.values() if is_text(held)]
        identity = names.exact(shown(entry.entries["id"][0]))
        if identity is not None:
            entry.entries["id"] = (identity, entry.entries["id"][1])
        unit = {} if identity is None or "unit" in entry.entries else {"unit": known[identity].unit}
        new = characteristic_of(entry.entries, EntryReader(decimal_mark(texts), doubts), doubts, **unit)
        known[new.id] = new if identity is None else _filled_in(known[identity], new)
    return tuple(known.values())


def _filled_in(listed_one: Characteristic, placed: Characteristic) -> Characteristic:
    """The listed characteristic; fields it leaves empty come from the places."""
    missing = {name for name, _ in placed.cells} - {name for name, _ in listed_one.cells}
    limits = {name: getattr(placed.limits, name) for name in missing if name in LIMITS}
    other = {name: getattr(placed, name) for name in missing if name not in LIMITS}
    return replace(
        listed_one,
        limits=replace(listed_one.limits, **limits),
        cells=(*listed_one.cells, *((n, c) for n, c in placed.cells if n in missing)),
        **other,
    )


def placed_pieces(placed: Sequence[Placed], characteristics: Sequence[Characteristic], doubts: Doubts) -> list[Piece]:
    """The values that stand at the places named, a piece for each place."""
    by_id = {folded(c.id): c for c in characteristics}
    pieces: list[Piece] = []
    for entry in placed:
        asked = by_id[folded(shown(entry.entries["id"][0]))]
        for number, place in enumerate(entry.values):
            if entry.block is not None:
                labels = {name: own[number] for name, own in entry.labels.items() if number < len(own)}
                pieces.append(_piece(entry.block, place, labels, asked, doubts))
    return pieces


def _piece(block: Block, place: Place, labels: dict[str, Place], asked: Characteristic, doubts: Doubts) -> Piece:
    area = place.area
    numbers = [n for n in place.sheet.row_numbers() if area.top <= n <= area.bottom]
    raw: list[Raw] = []
    for number in numbers:
        for column in sorted(c for c in place.sheet.rows[number] if area.left <= c <= area.right):
            held = place.sheet.rows[number][column]
            if place.whole and not raw and nature(held) == "text":
                continue
            texts = {name: _beside(own, number - area.top, column - area.left) for name, own in labels.items()}
            reason = texts.pop("leave_out", "")
            raw.append((Row(number=number, place=number - area.top + 1, reason=reason, **texts), column, held))
    decimal = decimal_mark(shown(held) for _, _, held in raw if is_text(held))
    across = area.bottom > area.top and area.right > area.left
    columns = Columns(
        block=replace(block, sheet=place.sheet),
        texts={},
        values={asked.id: list(range(area.left, area.right + 1)) if across else [area.left]},
        fields=dict.fromkeys(labels, 0),
    )
    return piece_of(columns, asked, raw, decimal, doubts)


def _beside(label: Place, down: int, across: int) -> str:
    """The label that runs in step with a value, by its distance from the first cell of the place."""
    row = label.area.top + (down if label.area.bottom > label.area.top else 0)
    column = label.area.left + (across if label.area.right > label.area.left else 0)
    return label.sheet.spread_text(row, column) if label.area.holds(row, column) else ""
