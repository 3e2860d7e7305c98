"""The bars of the histogram: shares of the values, and the points that draw them on a numeric axis."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from sheetqc.sheets.axis import Axis, decimals_within, nice_step
from sheetqc.sheets.cells import Column, Placed
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.values import Values

STRIPE = 6.0
"""Width of a stripe of the filling, in pixels: narrow, so that its end does not show above the bar."""

HEADS = ("from", "to", "share", "stripe_x", "stripe_y", "outline_x", "outline_y")


@dataclass(frozen=True, slots=True, kw_only=True)
class Bars:
    """Width of a bar, shares, stripes that fill the bars, and their outline."""

    width: Placed
    share: Column
    stripe_x: Column
    stripe_y: Column
    outline_x: Column
    outline_y: Column
    stripe: float
    """Width of a stripe in pixels."""

    @property
    def highest(self) -> float:
        """The largest share."""
        return max(float(v) for v in self.share.values)


def write_bars(job: Job, ground: Ground, values: Values, axis: Axis, pixels: float) -> Bars:
    """Writes the bars; `pixels` is the length of the axis on the screen."""
    column = ground.block(job.say("work.bars"), tuple(job.say(f"work.bars.{k}") for k in HEADS))
    pen, look = job.pen, job.decimals
    start, size, count = bar_edges(job)
    width = pen.number(FIRST, column + 1, size, "small", look.mean)
    pen.text(FIRST, column, job.say("work.bars.width"), "small")
    top = FIRST + 1
    low = pen.numbers(top, column, [start + i * size for i in range(count)], look.mean)
    high = pen.numbers(top, column + 1, [start + (i + 1) * size for i in range(count)], look.mean)
    data, x = job.values, values.value.ref
    inside = [int(((data >= low.at(i).number) & (data < high.at(i).number)).sum()) for i in range(count)]
    share = pen.formulas(
        top,
        column + 2,
        [f"SUMPRODUCT(({x}>={low.at(i).ref})*({x}<{high.at(i).ref}))/{len(data)}" for i in range(count)],
        [c / len(data) for c in inside],
        "0.000",
    )
    each = max(1, math.ceil(size / axis.length * pixels / STRIPE))
    digits = decimals_within(axis)
    stripes = [
        (i, round(start + (i + (j + 0.5) / each) * size, digits))
        for i in range(count)
        if inside[i]
        for j in range(each)
    ]
    outline = [(None, start)] + [(i, start + (i + e) * size) for i in range(count) for e in (0, 1)]
    outline.append((None, start + count * size))
    return Bars(
        width=width,
        share=share,
        stripe_x=pen.numbers(FIRST, column + 3, [s[1] for s in stripes]),
        stripe_y=pen.formulas(
            FIRST, column + 4, [share.at(s[0]).ref for s in stripes], [share.at(s[0]).number for s in stripes], "0.000"
        ),
        outline_x=pen.numbers(FIRST, column + 5, [o[1] for o in outline]),
        outline_y=pen.formulas(
            FIRST,
            column + 6,
            ["0" if o[0] is None else share.at(o[0]).ref for o in outline],
            [0.0 if o[0] is None else share.at(o[0]).number for o in outline],
            "0.000",
        ),
        stripe=size / axis.length * pixels / each,
    )


def bar_edges(job: Job) -> tuple[float, float, int]:
    """Start, width and number of bars: a width of whole reading steps, edges between readings."""
    data = job.values
    step = job.assessment.characteristic.resolution or 10.0**-job.decimals.reading
    size = nice_step(float(np.ptp(data)), max(6, round(2.4 * len(data) ** (1 / 3))))
    size = max(1, round(size / step)) * step
    start = math.floor(float(data.min()) / size + 1e-9) * size - step / 2
    count = math.floor((float(data.max()) - start) / size) + 1
    return start, size, count
