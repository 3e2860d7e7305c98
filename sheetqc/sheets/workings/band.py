"""What the probability plot needs besides points and curve: the band of order statistics and the scale."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.special import betaincinv, ndtri

from sheetqc.sheets.axis import Axis
from sheetqc.sheets.cells import Column
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.curve import Curve
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.values import Values

SHARES = (0.001, 0.01, 0.05, 0.2, 0.5, 0.8, 0.95, 0.99, 0.999)
"""Probabilities marked on the scale."""

RANKS = 19
TWO_SIDED = 0.95

HEADS = ("rank", "score", "low_score", "low_x", "high_score", "high_x", "mark_x", "mark")


@dataclass(frozen=True, slots=True, kw_only=True)
class Band:
    """Places between which a value of each rank lies in 95 of 100 samples of the model, and the marks of the scale."""

    score: Column
    low: Column
    high: Column
    mark_x: Column
    mark: Column


def write_band(job: Job, ground: Ground, values: Values, curve: Curve, axis: Axis) -> Band:
    """Writes the band for some ranks. A value of rank i has a probability with a beta distribution (i, n + 1 - i).

    The place belonging to a probability is found on the curve by linear interpolation of its normal scores.
    """
    column = ground.block(job.say("work.band"), tuple(job.say(f"work.band.{k}") for k in HEADS))
    pen, n = job.pen, values.count
    ranks = some_ranks(n)
    rank = pen.numbers(FIRST, column, ranks)
    scores = [values.score.at(r - 1) for r in ranks]
    score = pen.formulas(FIRST, column + 1, [s.ref for s in scores], [s.number for s in scores], "0.000")
    ends = []
    for offset, p in ((2, (1 - TWO_SIDED) / 2), (4, (1 + TWO_SIDED) / 2)):
        z = pen.formulas(
            FIRST,
            column + offset,
            [
                f"_xlfn.NORM.S.INV(_xlfn.BETA.INV({p!r},{rank.at(i).ref},{n + 1}-{rank.at(i).ref}))"
                for i in range(len(ranks))
            ],
            [float(ndtri(betaincinv(r, n + 1 - r, p))) for r in ranks],
            "0.000",
        )
        places = [_place(curve, z.at(i).number) for i in range(len(ranks))]
        ends.append(
            pen.formulas(
                FIRST,
                column + offset + 1,
                [_place_formula(curve, z.at(i).ref) for i in range(len(ranks))],
                places,
                job.decimals.mean,
            )
        )
    return Band(
        score=score,
        low=ends[0],
        high=ends[1],
        mark_x=pen.numbers(FIRST, column + 6, [axis.minimum] * len(SHARES)),
        mark=pen.numbers(FIRST, column + 7, [float(ndtri(p)) for p in SHARES], "0.000"),
    )


def some_ranks(n: int) -> list[int]:
    """Ranks from 1 to n, close at both ends, where the band bends."""
    angles = np.linspace(0, np.pi, RANKS)
    return sorted({int(r) for r in np.round(1 + (n - 1) * (1 - np.cos(angles)) / 2)})


def _place_formula(curve: Curve, z: str) -> str:
    """Place of a score on the curve; before its first point the first one, behind its last the line is continued."""
    scores, x, last = curve.score.ref, curve.x.ref, len(curve.x.values) - 1
    k = f"MIN({last},MATCH({z},{scores},1))"
    x0, x1, z0, z1 = f"INDEX({x},{k})", f"INDEX({x},{k}+1)", f"INDEX({scores},{k})", f"INDEX({scores},{k}+1)"
    inside = f"{x0}+({z}-{z0})/({z1}-{z0})*({x1}-{x0})"
    return f"IF({z}<{curve.score.at(0).ref},{curve.x.at(0).ref},{inside})"


def _place(curve: Curve, z: float) -> float:
    scores = [float(v) for v in curve.score.values]
    x = [float(v) for v in curve.x.values]
    if z < scores[0]:
        return x[0]
    k = min(len(scores) - 1, int(np.searchsorted(scores, z, side="right")))
    return x[k - 1] + (z - scores[k - 1]) / (scores[k] - scores[k - 1]) * (x[k] - x[k - 1])
