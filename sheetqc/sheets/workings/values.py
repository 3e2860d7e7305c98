"""The values used, a row each, referred to where they stand; in order of size with their plotting positions."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from scipy.special import ndtri

from sheetqc.sheets.cells import Column
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground


@dataclass(frozen=True, slots=True, kw_only=True)
class Values:
    """Columns of the values: in time order, in order of size, with normal scores of their plotting positions."""

    number: Column
    value: Column
    sorted: Column
    score: Column

    @property
    def count(self) -> int:
        """How many there are."""
        return len(self.value.values)


def write_values(job: Job, ground: Ground) -> Values:
    """Writes a row per value. Plotting positions are those of Blom (1958): (i - 3/8) / (n + 1/4)."""
    column = ground.block(job.say("work.values"), tuple(job.say(f"work.values.{k}") for k in HEADS))
    pen, data, look = job.pen, job.values, job.decimals.value
    count = len(data)
    number = pen.numbers(FIRST, column, range(1, count + 1))
    value = _linked_values(job, column + 1)
    ordered = np.sort(data)
    rank = [number.at(i).ref for i in range(count)]
    by_size = pen.formulas(FIRST, column + 2, [f"SMALL({value.ref},{r})" for r in rank], list(ordered), look)
    position = (np.arange(1, count + 1) - 0.375) / (count + 0.25)
    score = pen.formulas(
        FIRST,
        column + 3,
        [f"_xlfn.NORM.S.INV(({r}-0.375)/({count}+0.25))" for r in rank],
        list(ndtri(position)),
        "0.000",
    )
    return Values(number=number, value=value, sorted=by_size, score=score)


HEADS = ("number", "value", "sorted", "score")


def _linked_values(job: Job, column: int) -> Column:
    pen, sample, look = job.pen, job.assessment.sample, job.decimals.value
    formats = pen.formats("small", look)
    for index, (value, reference) in enumerate(zip(sample.values, _references(job), strict=True)):
        if reference is None:
            pen.sheet.write_number(FIRST + index, column, value, formats)
        else:
            pen.sheet.stored_formula(FIRST + index, column, reference, formats, float(value))
    return Column(FIRST, column, tuple(float(v) for v in sample.values))


def _references(job: Job) -> Iterator[str | None]:
    """Reference of each value's cell; None where its cell holds no plain number."""
    sample = job.assessment.sample
    known = len(sample.cells) == len(sample.values) and not job.alone
    for index in range(len(sample.values)):
        copied = bool(sample.copied) and sample.copied[index]
        yield sample.cells[index].reference if known and not copied else None
