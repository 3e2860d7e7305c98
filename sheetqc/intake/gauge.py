"""Gauge studies: rows of qc:gauge."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence

from sheetqc import vocabulary
from sheetqc.finding import Cell
from sheetqc.intake.blocks import Block
from sheetqc.intake.characteristics import no_heading_row
from sheetqc.intake.columns import Columns, columns_of
from sheetqc.intake.content import Held, is_text, shown
from sheetqc.intake.doubts import Doubts, counted, listed, places
from sheetqc.intake.figures import decimal_mark
from sheetqc.intake.heading import HeadingRow, heading_row
from sheetqc.intake.naming import Names, without_unit
from sheetqc.intake.remarks import tell
from sheetqc.intake.scale import reference_size
from sheetqc.intake.taking import Scale, Taking
from sheetqc.study import Characteristic, GaugeStudy

Entry = tuple[int, Cell, Held]


def gauge_studies_of(
    blocks: Sequence[Block], characteristics: Sequence[Characteristic], doubts: Doubts
) -> tuple[GaugeStudy, ...]:
    """The gauge studies of all qc:gauge blocks, in reading order."""
    return tuple(study for block in blocks for study in _of_block(block, characteristics, doubts))


def _of_block(block: Block, characteristics: Sequence[Characteristic], doubts: Doubts) -> list[GaugeStudy]:
    names = Names(characteristics)
    headings = heading_row(block, lambda text: vocabulary.field_of("gauge", text) is not None)
    if headings is None:
        no_heading_row(block, doubts)
        return []
    if not headings.data_rows():
        return []
    columns = columns_of(headings, "gauge", names, doubts)
    missing = [name for name in ("part", "appraiser") if name not in columns.fields]
    if missing:
        titles = [h.title for h in vocabulary.headings("gauge") if h.field in missing]
        doubts.add(
            "gauge-incomplete",
            "caution",
            f"The gauge study below {block.at} has no column headed {listed(titles)} and was not used. Add "
            f"{'it' if len(titles) == 1 else 'them'}.",
            (block.at,),
        )
        return []
    entries = _long(columns, headings, names, doubts) if columns.long else _wide(columns, headings)
    decimal = decimal_mark(shown(h) for own in entries.values() for _, _, h in own if is_text(h))
    by_id = {c.id: c for c in characteristics}
    return [_study(columns, by_id[i], own, decimal, doubts) for i, own in entries.items() if own]


def _wide(columns: Columns, headings: HeadingRow) -> dict[str, list[Entry]]:
    sheet = columns.block.sheet
    return {
        identity: [
            (row, sheet.cell(row, column), held)
            for row in headings.data_rows()
            for column in own
            if (held := sheet.at(row, column)) is not None
        ]
        for identity, own in columns.values.items()
    }


def _long(columns: Columns, headings: HeadingRow, names: Names, doubts: Doubts) -> dict[str, list[Entry]]:
    sheet = columns.block.sheet
    entries: dict[str, list[Entry]] = {}
    unlisted: list[Cell] = []
    for row in headings.data_rows():
        held = sheet.at(row, columns.fields["value"])
        text = sheet.spread_text(row, columns.fields["characteristic"])
        identity = names.exact(text) or names.loose(text)
        if held is not None and identity is None:
            unlisted.append(sheet.cell(row, columns.fields["characteristic"]))
        elif held is not None and identity is not None:
            entries.setdefault(identity, []).append((row, sheet.cell(row, columns.fields["value"]), held))
    if unlisted:
        doubts.add(
            "unlisted-characteristic",
            "caution",
            f"{counted(len(unlisted), 'row')} of the gauge study ({places(unlisted)}) name no listed characteristic; "
            f"the values were not used. Listed are {listed(names.ids)}.",
            unlisted,
        )
    return entries


def _study(
    columns: Columns, asked: Characteristic, entries: Iterable[Entry], decimal: str | None, doubts: Doubts
) -> GaugeStudy:
    entries = list(entries)
    typed = without_unit(columns.texts.get(entries[0][1].column, ""))[1]
    reference = reference_size((h for _, _, h in entries), asked)
    taking = Taking(Scale(unit=asked.unit, typed_unit=typed, decimal=decimal, reference=reference))
    values: list[float] = []
    cells: list[Cell] = []
    labels: list[tuple[str, str, str]] = []
    unlabelled: list[Cell] = []
    for row, cell, held in entries:
        part, appraiser, trial = (_label(columns, f, row) for f in ("part", "appraiser", "trial"))
        if not part or not appraiser:
            unlabelled.append(cell)
            continue
        taken = taking.value(held, cell)
        if taken is not None and not taken.mark:
            values.append(taken.value)
            cells.append(cell)
            labels.append((part, appraiser, trial))
    tell(taking, asked.id, doubts)
    if unlabelled:
        doubts.add(
            "gauge-unlabelled",
            "caution",
            f"{counted(len(unlabelled), 'value')} of the gauge study of {asked.id} ({places(unlabelled)}) without part "
            "or appraiser; not used. Fill in both.",
            unlabelled,
            of=asked.id,
        )
    return GaugeStudy(
        characteristic=asked.id,
        values=tuple(values),
        parts=tuple(p for p, _, _ in labels),
        appraisers=tuple(a for _, a, _ in labels),
        trials=_trials(labels),
        cells=tuple(cells),
    )


def _label(columns: Columns, field: str, row: int) -> str:
    column = columns.fields.get(field)
    return "" if column is None else columns.block.sheet.spread_text(row, column)


def _trials(labels: Sequence[tuple[str, str, str]]) -> tuple[str, ...]:
    """The trial of each value; counted per part and appraiser where the column is not filled in."""
    if all(trial for _, _, trial in labels):
        return tuple(trial for _, _, trial in labels)
    seen: Counter[tuple[str, str]] = Counter()
    trials: list[str] = []
    for part, appraiser, _ in labels:
        seen[part, appraiser] += 1
        trials.append(str(seen[part, appraiser]))
    return tuple(trials)
