"""A random study written in a random permitted layout reads back as the same study."""

from __future__ import annotations

import random
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import pytest

from sheetqc import intake, vocabulary
from tests.intake.building import Page, write

Rows = list[list[Any]]


@dataclass
class Asked:
    """A characteristic as it was made up."""

    id: str
    name: str
    lower: float | None
    upper: float | None
    kind: str
    subgroup_size: int | None
    values: list[float] = field(default_factory=list)
    left_out: list[float] = field(default_factory=list)


@dataclass
class Made:
    """A study as it was made up."""

    characteristics: list[Asked]
    subgroups: list[str] | None
    streams: list[str] | None
    reasons: list[str]
    part_number: str
    requirement: float


def _made(chance: random.Random) -> Made:
    rows = chance.randint(3, 40)
    reasons = ["" if chance.random() < 0.9 else "tool broke" for _ in range(rows)]
    characteristics = []
    for number in range(chance.randint(1, 6)):
        centre, spread = chance.choice([(12.0, 0.1), (0.02, 0.005), (-40.0, 6.0), (25000.0, 300.0)])
        values = [round(chance.gauss(centre, spread), 4) for _ in range(rows)]
        asked = Asked(
            id=f"{chance.choice('ABCXYZ')}{number}{chance.choice(['', '.1', '-b', ' x'])}",
            name=chance.choice(["", f"Bore no {number}", f"Länge {number}"]),
            lower=round(centre - 5 * spread, 4) if chance.random() < 0.7 else None,
            upper=round(centre + 5 * spread, 4),
            kind=chance.choice(["", *(k.name for k in vocabulary.KINDS)]),
            subgroup_size=chance.choice([None, None, 2, 3]),
        )
        asked.values = [v for v, reason in zip(values, reasons, strict=True) if not reason]
        asked.left_out = [v for v, reason in zip(values, reasons, strict=True) if reason]
        characteristics.append(asked)
    return Made(
        characteristics=characteristics,
        subgroups=[f"g{i // 3}" for i in range(rows)] if chance.random() < 0.4 else None,
        streams=[f"s{i % 2}" for i in range(rows)] if chance.random() < 0.3 else None,
        reasons=reasons,
        part_number=f"P-{chance.randint(100, 999)}",
        requirement=chance.choice([1.33, 1.67, 2.0]),
    )


def _word(chance: random.Random, block: str, name: str) -> str:
    """One of the words for a heading, in some language, case and dress."""
    heading = next(h for h in vocabulary.headings(block) if h.field == name)
    word = chance.choice(heading.words)
    dressed = chance.choice([word, word, word.upper(), f" {word} ", f"{word}:"])
    return dressed if vocabulary.field_of(block, dressed) == name else word


def _typed(chance: random.Random, value: float, comma: bool) -> Any:
    """A value as a number or, now and then, as a text that shows its decimal mark beyond doubt."""
    text = f"{value:.4f}"
    if chance.random() < 0.9 or abs(value) < 1e-4:
        return value
    return text.replace(".", ",") if comma else text


def _study_table(chance: random.Random, made: Made) -> Rows:
    rows = [
        [_word(chance, "study", "part_number"), made.part_number],
        [_word(chance, "study", "requirement"), made.requirement],
    ]
    chance.shuffle(rows)
    return [["qc:study"], *rows]


def _characteristics_table(chance: random.Random, made: Made) -> Rows:
    columns = ["id", "name", "lower", "upper", "kind", "subgroup_size"]
    chance.shuffle(columns)
    rows = [[getattr(c, name) if getattr(c, name) != "" else None for name in columns] for c in made.characteristics]
    return [["qc:characteristics"], [_word(chance, "characteristics", name) for name in columns], *rows]


def _values_in_order(made: Made) -> list[list[float]]:
    """The value of each row for each characteristic, left-out rows in their places."""
    columns = []
    for asked in made.characteristics:
        kept, out = iter(asked.values), iter(asked.left_out)
        columns.append([next(out) if reason else next(kept) for reason in made.reasons])
    return columns


def _labels(made: Made) -> dict[str, list[Any]]:
    labels: dict[str, list[Any]] = {}
    if made.subgroups is not None:
        labels["subgroup"] = list(made.subgroups)
    if made.streams is not None:
        labels["stream"] = list(made.streams)
    if any(made.reasons):
        labels["leave_out"] = [reason or None for reason in made.reasons]
    return labels


def _wide_table(chance: random.Random, made: Made, comma: bool) -> Rows:
    columns: list[list[Any]] = [
        [chance.choice([c.id, c.id.lower(), c.name or c.id]), *(_typed(chance, v, comma) for v in values)]
        for c, values in zip(made.characteristics, _values_in_order(made), strict=True)
    ]
    columns += [[_word(chance, "measurements", name), *entries] for name, entries in _labels(made).items()]
    chance.shuffle(columns)
    rows = [list(row) for row in zip(*columns, strict=True)]
    if chance.random() < 0.5:
        rows.insert(chance.randint(1, len(rows)), [])
    return [["qc:measurements"], *rows]


def _long_table(chance: random.Random, made: Made, comma: bool) -> Rows:
    labels = _labels(made)
    headings = ["characteristic", "value", *labels]
    rows: Rows = []
    for place in range(len(made.reasons)):
        for asked, values in zip(made.characteristics, _values_in_order(made), strict=True):
            rows.append([asked.id, _typed(chance, values[place], comma), *(labels[name][place] for name in labels)])
    return [["qc:measurements"], [_word(chance, "measurements", name) for name in headings], *rows]


def _put(cells: dict[str, Any], table: Rows, row: int, column: int) -> tuple[int, int]:
    """Writes a table and gives the first free row below and the first free column beside it."""
    from xlsxwriter.utility import xl_rowcol_to_cell

    for i, entries in enumerate(table):
        for j, value in enumerate(entries):
            if value is not None:
                cells[xl_rowcol_to_cell(row + i, column + j)] = value
    return row + len(table), column + max(len(entries) for entries in table)


def _pages(chance: random.Random, tables: list[Rows]) -> dict[str, Page | dict[str, Any]]:
    """The tables on sheets of their own, below each other, or side by side."""
    manner = chance.choice(["sheets", "below", "beside"])
    row, column = chance.randint(0, 5), chance.randint(0, 5)
    pages: dict[str, Page | dict[str, Any]] = {"Cover": {"B2": "Capability study"}}
    cells: dict[str, Any] = {}
    for number, table in enumerate(tables):
        if manner == "sheets":
            cells = {}
            _put(cells, table, row, column)
            pages[f"Sheet of {number}"] = cells
        elif manner == "below":
            row = _put(cells, table, row, column)[0] + chance.randint(0, 3)
        else:
            column = _put(cells, table, row, column)[1] + chance.randint(1, 2)
    if manner != "sheets":
        pages["All"] = cells
    return pages


@pytest.mark.parametrize("seed", range(60))
def test_reads_back_as_it_was_made_up(tmp_path: Path, seed: int) -> None:
    chance = random.Random(seed)
    made = _made(chance)
    comma = chance.random() < 0.5
    measurements = chance.choice([_wide_table, _long_table])(chance, made, comma)
    tables = [_study_table(chance, made), _characteristics_table(chance, made), measurements]
    study = intake.read(write(tmp_path / "study.xlsx", _pages(chance, tables)))
    assert (study.header.part_number, study.header.requirement) == (made.part_number, made.requirement)
    assert [c.id for c in study.characteristics] == [c.id for c in made.characteristics]
    kept = [i for i, reason in enumerate(made.reasons) if not reason]
    for asked, found, sample in zip(made.characteristics, study.characteristics, study.samples, strict=True):
        assert (found.name, found.kind, found.subgroup_size) == (asked.name, asked.kind, asked.subgroup_size)
        assert (found.limits.lower, found.limits.upper) == (asked.lower, asked.upper)
        assert list(sample.values) == asked.values
        assert [p.value for p in sample.left_out] == asked.left_out
        assert sample.streams == (None if made.streams is None else tuple(made.streams[i] for i in kept))
        if made.subgroups is not None:
            assert sample.subgroups == tuple(made.subgroups[i] for i in kept)
        elif asked.subgroup_size is not None:
            assert sample.subgroups == tuple(str(i // asked.subgroup_size + 1) for i in kept)
        else:
            assert sample.subgroups is None
        assert len(sample.cells) == len(set(sample.cells)) == len(kept)
    known = {"number-as-text", "number-read-by-size", "no-values", "limit-at-natural-bound"}
    met = {f.code for f in study.findings} | {f.code for _, f in study.findings_of}
    assert met <= known, met - known
