"""Samples: the pieces that all blocks give for a characteristic, put together in order."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import chain

from sheetqc.intake.doubts import Doubts, listed
from sheetqc.intake.measurements import Piece
from sheetqc.intake.order import first_backward
from sheetqc.study import Characteristic, Sample


def samples_of(
    characteristics: Sequence[Characteristic], pieces: Sequence[Piece], doubts: Doubts
) -> tuple[Sample, ...]:
    """A sample for each characteristic that has values, in the order of the characteristics."""
    samples: list[Sample] = []
    for asked in characteristics:
        own = [p for p in pieces if p.characteristic == asked.id and (p.values or p.left_out)]
        if not any(p.values for p in own):
            _tell_missing(asked, own, doubts)
        if own:
            samples.append(_in_order(_sample(asked, own), doubts))
        if len([p for p in own if p.values]) > 1:
            _tell_several(asked, own, doubts)
    return tuple(samples)


def _in_order(sample: Sample, doubts: Doubts) -> Sample:
    """The sample, with its order called unknown where its times run backward."""
    place = None if sample.times is None else first_backward(sample.times)
    if place is None or sample.times is None:
        return sample
    cell = sample.cells[place]
    doubts.add(
        "not-in-time-order",
        "caution",
        f"The rows of {sample.characteristic} do not stand in time order: beside {cell} stands {sample.times[place]}, "
        "earlier than the row above it. Sort the rows by time, the oldest first, so that it can be seen whether the "
        "process was steady.",
        (cell,),
        of=sample.characteristic,
    )
    return replace(sample, order_known=False)


def _tell_missing(asked: Characteristic, own: Sequence[Piece], doubts: Doubts) -> None:
    cell = asked.cell("id")
    why = "all its rows are left out" if own else f"no column below qc:measurements is headed {asked.id} or has values"
    doubts.add(
        "no-values",
        "stop",
        f"{asked.id} ({cell}) has no usable measured values: {why}. Send the values, or take the row out.",
        () if cell is None else (cell,),
        of=asked.id,
    )


def _tell_several(asked: Characteristic, own: Sequence[Piece], doubts: Doubts) -> None:
    ats = [p.block.at for p in own if p.values]
    doubts.add(
        "several-blocks",
        "note",
        f"The values of {asked.id} stand in {len(ats)} blocks ({listed([str(a) for a in ats])}) and were joined in "
        "this order.",
        ats,
        of=asked.id,
    )


def _sample(asked: Characteristic, own: Sequence[Piece]) -> Sample:
    marks = tuple(chain.from_iterable(p.marks for p in own))
    copied = tuple(chain.from_iterable(p.copied for p in own))
    return Sample(
        characteristic=asked.id,
        values=tuple(chain.from_iterable(p.values for p in own)),
        cells=tuple(chain.from_iterable(p.cells for p in own)),
        subgroups=_subgroups(own),
        times=_joined([p.times for p in own], own),
        streams=_joined([p.streams for p in own], own),
        censored=marks if any(marks) else (),
        copied=copied if any(copied) else (),
        left_out=tuple(place for p in own for place in p.left_out),
    )


def _joined(columns: Sequence[list[str] | None], own: Sequence[Piece]) -> tuple[str, ...] | None:
    if all(column is None for column in columns):
        return None
    joined: list[str] = []
    for column, piece in zip(columns, own, strict=True):
        joined.extend(column if column is not None else [""] * len(piece.values))
    return tuple(joined)


def _subgroups(own: Sequence[Piece]) -> tuple[str, ...] | None:
    """Labels of all pieces; where two blocks use the same label, the block's place is added to keep them apart."""
    columns = [p.subgroups for p in own]
    seen: set[str] = set()
    clash = False
    for column in columns:
        labels = set(column or ())
        clash = clash or bool(labels & seen)
        seen |= labels
    if clash:
        columns = [
            None if c is None else [f"{p.block.at.sheet} {p.block.at.address}: {label}" for label in c]
            for c, p in zip(columns, own, strict=True)
        ]
    return _joined(columns, own)
