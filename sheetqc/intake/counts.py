"""Counts of defects: rows of qc:counts."""

from __future__ import annotations

from collections.abc import Sequence

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.characteristics import no_heading_row
from sheetqc.intake.content import Held, is_text, shown
from sheetqc.intake.doubts import Doubts, counted, places
from sheetqc.intake.figures import decimal_mark
from sheetqc.intake.heading import HeadingRow, heading_row
from sheetqc.intake.taking import Scale, Taking
from sheetqc.study import DefectCounts


def counts_of(blocks: Sequence[Block], doubts: Doubts) -> tuple[DefectCounts, ...]:
    """The counts of each qc:counts block, in reading order."""
    found = (_of_block(block, doubts) for block in blocks)
    return tuple(counts for counts in found if counts is not None)


def _of_block(block: Block, doubts: Doubts) -> DefectCounts | None:
    headings = heading_row(block, lambda text: vocabulary.field_of("counts", text) is not None)
    fields = {} if headings is None else _fields(headings)
    if headings is None or "category" not in fields or "count" not in fields:
        no_heading_row(block, doubts)
        return None
    if not headings.data_rows():
        return None
    rows = [r for r in headings.data_rows() if not _is_total(block, r, fields["category"])]
    sheet = block.sheet
    texts = [shown(h) for r in rows for f in _NUMBERS if f in fields and is_text(h := sheet.at(r, fields[f])) and h]
    taking = Taking(Scale(decimal=decimal_mark(texts)))
    kept: list[int] = []
    counts: list[float] = []
    refused: list[Cell] = []
    for row in rows:
        category, held = sheet.spread_text(row, fields["category"]), sheet.at(row, fields["count"])
        cell = sheet.cell(row, fields["count"])
        count = None if held is None else _count(taking, held, cell)
        if category and count is not None:
            kept.append(row)
            counts.append(count)
        elif category or held is not None:
            refused.append(cell)
    if refused:
        doubts.add(
            "count-not-usable",
            "caution",
            f"{counted(len(refused), 'row')} of counts ({places(refused)}) without a category or a count of 0 or more; "
            "not used. Fill in both.",
            refused,
        )
    optional = {name: _numbers(block, fields, name, kept, taking) for name in ("inspected", "cost")}
    return DefectCounts(
        categories=tuple(sheet.spread_text(r, fields["category"]) for r in kept),
        counts=tuple(counts),
        periods=tuple(sheet.spread_text(r, fields["period"]) for r in kept) if "period" in fields else None,
        inspected=optional["inspected"],
        costs=optional["cost"],
        cells=tuple(sheet.cell(r, fields["count"]) for r in kept),
    )


_NUMBERS = ("count", "inspected", "cost")


def _fields(headings: HeadingRow) -> dict[str, int]:
    fields: dict[str, int] = {}
    for column in sorted(headings.texts):
        field = vocabulary.field_of("counts", headings.texts[column])
        if field is not None:
            fields.setdefault(field, column)
    return fields


def _is_total(block: Block, row: int, column: int) -> bool:
    return vocabulary.word_in("summary_row", block.sheet.text(row, column))


def _count(taking: Taking, held: Held, cell: Cell) -> float | None:
    taken = taking.value(held, cell)
    return taken.value if taken is not None and not taken.mark and taken.value >= 0 else None


def _numbers(
    block: Block, fields: dict[str, int], name: str, rows: Sequence[int], taking: Taking
) -> tuple[float, ...] | None:
    """An optional column of numbers; None where it is missing or not filled in for every row."""
    if name not in fields:
        return None
    numbers: list[float] = []
    for row in rows:
        held = block.sheet.at(row, fields[name])
        taken = None if held is None else taking.value(held, block.sheet.cell(row, fields[name]))
        if taken is None:
            return None
        numbers.append(taken.value)
    return tuple(numbers)
