"""The model in use along the axis of the values: share of values per bar, and normal score of its distribution."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from sheetqc.assessment import ModelFit
from sheetqc.sheets.axis import Axis, decimals_within
from sheetqc.sheets.cells import Column, Placed
from sheetqc.sheets.expressions import choice, constant
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.candidates import Candidates
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.reach import drawn_as

EVENLY, WITHIN = 16, 34
"""Points spread evenly over the axis, and points where the models have their body."""

LEAST = 1e-6
"""Probabilities are held between this and one minus it, so that every score is drawn."""

HEADS = ("x", "share", "score")


@dataclass(frozen=True, slots=True, kw_only=True)
class Curve:
    """Points of the curve: place, share of values per bar, normal score."""

    x: Column
    share: Column
    score: Column


def write_curve(job: Job, ground: Ground, candidates: Candidates, selector: Placed, axis: Axis, bar: Placed) -> Curve:
    """Writes the curve of the model in use. `bar` is the width of a bar of the histogram."""
    column = ground.block(job.say("work.curve"), tuple(job.say(f"work.curve.{k}") for k in HEADS))
    places = curve_places(candidates.fits, axis)
    pen = job.pen
    x = pen.numbers(FIRST, column, [float(p) for p in places])
    in_use = candidates.fits[int(selector.number) - 1]
    member, theta = drawn_as(in_use)
    # {x} is kept as a placeholder, so that the long expression is put together only once
    density = choice(selector.ref, candidates.expressions("density", x="\0"))
    cdf = choice(selector.ref, candidates.expressions("cdf", x="\0"))
    refs = [x.at(i).ref for i in range(len(places))]
    share = pen.formulas(
        FIRST,
        column + 1,
        [f"{bar.ref}*{density}".replace("\0", ref) for ref in refs],
        [float(v) for v in bar.number * member.density(places, theta)],
        "0.0000",
    )
    held = f"_xlfn.NORM.S.INV(MAX({constant(LEAST)},MIN(1-{constant(LEAST)},{cdf})))"
    score = pen.formulas(
        FIRST,
        column + 2,
        [held.replace("\0", ref) for ref in refs],
        [float(v) for v in ndtri(np.clip(member.cdf(places, theta), LEAST, 1 - LEAST))],
        "0.000",
    )
    return Curve(x=x, share=share, score=score)


def curve_places(fits: tuple[ModelFit, ...], axis: Axis) -> NDArray[np.float64]:
    """Places along the axis, close where any of the usable models has its body."""
    low = max(axis.minimum, min(f.quantiles.low for f in fits))
    high = min(axis.maximum, max(f.quantiles.high for f in fits))
    within = np.linspace(low, high, WITHIN) if high > low else np.array([])
    every = np.concatenate([np.linspace(axis.minimum, axis.maximum, EVENLY), within])
    every = np.unique(np.round(every, decimals_within(axis)))
    close = np.diff(every) < 1e-3 * axis.length
    return np.asarray(every[np.concatenate([[True], ~close])])
