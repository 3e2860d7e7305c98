"""The likelihood regions as numbers, from which bounds follow a moved limit."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.index import Region

HEADS = ("model", "low", "median", "high")


@dataclass(frozen=True, slots=True, kw_only=True)
class Regions:
    """The region of everything admitted, and that of every candidate alone; None where there is none."""

    whole: Region | None
    own: tuple[Region | None, ...]


def write_regions(job: Job, ground: Ground) -> Regions:
    """Writes the triples: those of the answer first, marked 0, then those of each candidate by its number."""
    found = job.assessment
    parts = [found.region, *(fit.region for fit in job.models)]
    rows = [(place, *triple) for place, part in enumerate(parts) for triple in part]
    if not rows:
        return Regions(whole=None, own=(None,) * len(job.models))
    first = ground.block(job.say("work.region"), tuple(job.say(f"work.region.{k}") for k in HEADS))
    columns = [job.pen.numbers(FIRST, first + c, [row[c] for row in rows]) for c in range(4)]
    every = Region(low=columns[1], median=columns[2], high=columns[3])
    regions: list[Region | None] = []
    at = 0
    for part in parts:
        regions.append(every.part(at, len(part)) if part else None)
        at += len(part)
    return Regions(whole=regions[0], own=tuple(regions[1:]))
