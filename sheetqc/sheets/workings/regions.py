"""The likelihood regions as numbers, from which bounds follow a moved limit."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.index import Region

HEADS = ("model", "low", "median", "high")


@dataclass(frozen=True, slots=True, kw_only=True)
class Regions:
    """The region of every candidate (None without one), in their order, and that of all admitted ones together."""

    own: tuple[Region | None, ...]
    admitted: Region | None


def write_regions(job: Job, ground: Ground) -> Regions:
    """Writes the triples of every candidate, the admitted ones first, so that their rows stand together."""
    fits = job.assessment.models
    order = sorted(range(len(fits)), key=lambda i: not fits[i].admitted)
    rows = [(i + 1, *triple) for i in order for triple in fits[i].region]
    if not rows:
        return Regions(own=(None,) * len(fits), admitted=None)
    first = ground.block(job.say("work.region"), tuple(job.say(f"work.region.{k}") for k in HEADS))
    columns = [job.pen.numbers(FIRST, first + c, [row[c] for row in rows]) for c in range(4)]
    whole = Region(low=columns[1], median=columns[2], high=columns[3])
    own: dict[int, Region | None] = {}
    at = admitted = 0
    for i in order:
        count = len(fits[i].region)
        own[i] = whole.part(at, count) if count else None
        at += count
        admitted += count if fits[i].admitted else 0
    return Regions(own=tuple(own[i] for i in range(len(fits))), admitted=whole.part(0, admitted) if admitted else None)
