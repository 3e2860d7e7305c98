"""The characteristics to be judged: rows of qc:characteristics."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

from sheetqc import vocabulary
from sheetqc.errors import NothingToAnswer
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.content import Content, Held, is_text, nature, shown
from sheetqc.intake.doubts import Doubts, counted, listed, places
from sheetqc.intake.entry import EntryReader
from sheetqc.intake.figures import decimal_mark
from sheetqc.intake.heading import HeadingRow, heading_row
from sheetqc.intake.naming import folded
from sheetqc.study import Characteristic, Limits

LIMITS = ("lower", "upper", "nominal", "natural_lower", "natural_upper")
Entries = dict[str, tuple[Held, Cell]]
"""What was entered for a characteristic, by field, with its cell."""

_NUMBERS = (*LIMITS, "requirement", "resolution", "claimed_value", "subgroup_size")
_TEXTS = ("name", "unit", "critical_class", "claimed_index", "note")


def characteristics_of(blocks: Sequence[Block], doubts: Doubts) -> tuple[Characteristic, ...]:
    """The characteristics of all qc:characteristics blocks, in reading order."""
    found: dict[str, Characteristic] = {}
    for block in blocks:
        for characteristic in _of_block(block, doubts):
            _admit(characteristic, found, doubts)
    return tuple(found.values())


def _admit(new: Characteristic, found: dict[str, Characteristic], doubts: Doubts) -> None:
    same = next((c for c in found.values() if folded(c.id) == folded(new.id)), None)
    if same is None:
        found[new.id] = new
        return
    cells = [c for c in (same.cell("id"), new.cell("id")) if c is not None]
    doubts.add(
        "duplicate-id",
        "caution",
        f"The Id {new.id} stands in {listed([str(c) for c in cells])}; the row of {cells[0]} was used. "
        "Give every characteristic an Id of its own.",
        cells,
        of=same.id,
    )


def _of_block(block: Block, doubts: Doubts) -> Iterator[Characteristic]:
    headings = heading_row(block, lambda text: vocabulary.field_of("characteristics", text) is not None)
    if headings is None:
        no_heading_row(block, doubts)
        return
    columns = _columns(headings, doubts)
    if "id" not in columns:
        if "name" not in columns:
            no_heading_row(block, doubts)
            return
        doubts.add(
            "names-as-ids",
            "caution",
            f"Below {block.at} there is no column headed Id; the names ({headings.cell(columns['name'])}) were taken "
            "as Ids. Add a column Id.",
            (headings.cell(columns["name"]),),
        )
        columns["id"] = columns.pop("name")
    texts = [shown(h) for r in headings.data_rows() for h in block.sheet.rows[r].values() if is_text(h)]
    entries = EntryReader(decimal_mark(texts), doubts)
    _tell_hidden(headings, columns, doubts)
    for row in headings.data_rows():
        held = {
            field: (content, block.sheet.cell(row, column))
            for field, column in columns.items()
            if (content := block.sheet.at(row, column)) is not None
        }
        if "id" in held and not _repeats_heading(held, columns, headings):
            yield characteristic_of(held, entries, doubts)
        elif "id" not in held and any(field in LIMITS or field == "name" for field in held):
            cell = block.sheet.cell(row, columns["id"])
            doubts.add(
                "missing-id",
                "caution",
                f"Row {row} of sheet '{block.sheet.name}' describes a characteristic without an Id ({cell} is empty); "
                "it was not used. Give it an Id.",
                (cell,),
            )


def _tell_hidden(headings: HeadingRow, columns: dict[str, int], doubts: Doubts) -> None:
    sheet = headings.block.sheet
    hidden = [
        sheet.cell(row, columns["id"])
        for row in headings.data_rows()
        if row in sheet.hidden_rows and sheet.at(row, columns["id"]) is not None
    ]
    if hidden:
        doubts.add(
            "hidden-characteristics",
            "caution",
            f"{counted(len(hidden), 'characteristic')} ({places(hidden)}) on hidden rows, judged all the same. Delete "
            "the rows if they do not belong to the study.",
            hidden,
        )


def no_heading_row(block: Block, doubts: Doubts) -> None:
    """Adds the finding that a tag has no heading row below it."""
    titles = listed([h.title for h in vocabulary.headings(block.name) if h.field != "aside"])
    rows = block.filled
    cells = (block.at, *(block.sheet.cell(rows[0], c) for c in block.columns(rows[0]))) if rows else (block.at,)
    met = f"the first filled row, {rows[0]}, holds none" if rows else "nothing stands there"
    doubts.add(
        "no-heading-row",
        "stop",
        f"Below the tag {block.tag} ({block.at}) a row of headings is expected ({titles}); {met}. Add the heading row "
        "directly below the tag.",
        cells,
    )


def _repeats_heading(held: Entries, columns: dict[str, int], headings: HeadingRow) -> bool:
    same = [f for f, (content, _) in held.items() if shown(content).strip() == headings.texts.get(columns[f])]
    return len(same) == len(held)


def _columns(headings: HeadingRow, doubts: Doubts) -> dict[str, int]:
    """The column of each field; unknown headings and second columns of a field are told."""
    columns: dict[str, int] = {}
    unknown: list[tuple[str, Cell]] = []
    for column in sorted(headings.texts):
        text = headings.texts[column]
        field = vocabulary.field_of("characteristics", text)
        if field is None:
            unknown.append((text, headings.cell(column)))
        elif field in columns:
            if headings.block.sheet.merge_at(headings.first, column) is None:
                cells = (headings.cell(columns[field]), headings.cell(column))
                doubts.add(
                    "heading-twice",
                    "caution",
                    f"{cells[0]} ({headings.texts[columns[field]]}) and {cells[1]} ({text}) mean the same; the first "
                    "was used. Leave one.",
                    cells,
                )
        else:
            columns[field] = column
    if unknown:
        one = len(unknown) == 1
        doubts.add(
            "unknown-column",
            "caution",
            f"The heading{'' if one else 's'} {listed([f'{t} ({c})' for t, c in unknown])} "
            f"{'is' if one else 'are'} not known among the characteristics; "
            f"{'its column was' if one else 'their columns were'} not used. Known headings are "
            f"{listed([h.title for h in vocabulary.headings('characteristics')], most=20)}.",
            [c for _, c in unknown],
        )
    return columns


def characteristic_of(held: Entries, entries: EntryReader, doubts: Doubts, unit: str = "") -> Characteristic:
    """The characteristic that entries describe; `unit` is its unit where the entries do not hold one."""
    identity = " ".join(shown(held["id"][0]).split())
    values: dict[str, Any] = {f: shown(held[f][0]).strip() for f in _TEXTS if f in held and _readable(held[f][0])}
    unit = values.get("unit", unit)
    numbers: dict[str, Any] = {}
    for field in _NUMBERS:
        if field in held:
            number = entries.number(field, held[field][0], held[field][1], identity, unit if field in LIMITS else "")
            if number is not None:
                numbers[field] = number
    for field in ("kind", "model"):
        if field in held:
            values[field] = entries.word(field, held[field][0], held[field][1], identity)
    size = entries.size(numbers.pop("subgroup_size", None), held.get("subgroup_size"), identity)
    characteristic = Characteristic(
        id=identity,
        limits=Limits(**{f: numbers.pop(f) for f in LIMITS if f in numbers}),
        subgroup_size=size,
        cells=tuple((field, cell) for field, (_, cell) in held.items()),
        **values,
        **numbers,
    )
    _check_limits(characteristic, doubts)
    return characteristic


def _readable(held: Held) -> bool:
    return not (isinstance(held, Content) and nature(held) in ("error", "uncalculated"))


def _check_limits(asked: Characteristic, doubts: Doubts) -> None:
    limits = asked.limits
    if limits.lower is not None and limits.upper is not None and limits.lower >= limits.upper:
        cells = _cells(asked, "lower", "upper")
        doubts.add(
            "limits-crossed",
            "stop",
            f"LSL {limits.lower:g} ({cells[0]}) is not below USL {limits.upper:g} ({cells[-1]}) for {asked.id}. "
            "Correct the limits.",
            cells,
            of=asked.id,
        )
    elif limits.nominal is not None and not _between(limits.nominal, limits.lower, limits.upper):
        doubts.add(
            "nominal-outside",
            "caution",
            f"The nominal value {limits.nominal:g} of {asked.id} lies outside its limits. Check them: limits are "
            "expected as values, not as deviations from the nominal.",
            _cells(asked, "nominal", "lower", "upper"),
            of=asked.id,
        )
    if limits.natural_lower is not None and limits.lower is not None and limits.lower <= limits.natural_lower:
        doubts.add(
            "limit-at-natural-bound",
            "caution",
            f"LSL {limits.lower:g} of {asked.id} is not above its natural lower bound {limits.natural_lower:g}: no "
            "value can fail it. Leave LSL empty if only the upper limit is a specification.",
            _cells(asked, "lower", "natural_lower"),
            of=asked.id,
        )


def _between(value: float, lower: float | None, upper: float | None) -> bool:
    return (lower is None or value >= lower) and (upper is None or value <= upper)


def _cells(asked: Characteristic, *names: str) -> tuple[Cell, ...]:
    return tuple(cell for name in names if (cell := asked.cell(name)) is not None)


def require(characteristics: Sequence[Characteristic], blocks: Sequence[Block], doubts: Doubts) -> None:
    """Raises where no characteristic can be answered.

    Raises
    ------
    NothingToAnswer : with the place and the reason
    """
    if characteristics:
        return
    if not blocks:
        raise NothingToAnswer(
            "no cell holds the tag qc:characteristics",
            expected="the characteristics with their limits below such a tag",
            advice="Write qc:characteristics into a cell, and below it a row of headings (Id, LSL, USL, ...) and a row "
            "for each characteristic.",
        )
    stop = next((f for f in doubts.study if f.code == "no-heading-row" and f.cells[0] in [b.at for b in blocks]), None)
    raise NothingToAnswer(
        f"no usable characteristic stands below the tag {blocks[0].tag}",
        expected="a row of headings with Id, and below it a row for each characteristic with an Id",
        advice=stop.text if stop is not None else "Give every characteristic an Id and its limits.",
        cell=blocks[0].at,
    )
