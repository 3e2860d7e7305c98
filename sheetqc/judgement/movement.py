"""Evidence that a process moved: each look gives its probability when it did not."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from sheetqc.stats.change_point import change_point
from sheetqc.stats.comparison import brown_forsythe, one_way_anova
from sheetqc.stats.descriptive import lag_one_correlation
from sheetqc.stats.serial import linear_trend, rank_von_neumann
from sheetqc.stats.within import moving_range_spread, pooled_spread

Values = NDArray[np.float64]
Groups = tuple[tuple[int, ...], ...]


FEWEST_IN_A_ROW = 10
"""Points below which a movement along the row is not looked for."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Evidence:
    """One way a process may have moved.

    `p_value` holds when it did not; `points` of the chart count from 1; `sign` is what moved: place, trend, spread.
    """

    text: str
    p_value: float
    points: tuple[int, ...] = ()
    sign: str = "place"


def evidence_of_row(scores: Values) -> tuple[Evidence, ...]:
    """Evidence in single values in time order.

    Parameters
    ----------
    scores : shape (n,), n >= 3, normal scores of the values under the model in use
    """
    n = len(scores)
    if n < FEWEST_IN_A_ROW:
        return ()
    within = moving_range_spread(scores).sigma
    blocks = np.array_split(scores, max(2, min(8, n // 12)))
    return (
        _outermost(scores, np.full(n, within), "value"),
        _step(scores, "value"),
        _slope(scores, "value"),
        _memory(scores, "value"),
        Evidence(text="the spread changed on the way", p_value=brown_forsythe(blocks).p_value, sign="spread"),
    )


def evidence_of_groups(scores: Values, groups: Groups) -> tuple[Evidence, ...]:
    """Evidence in subgroups in time order.

    Parameters
    ----------
    scores : shape (n,), normal scores of the values under the model in use
    groups : places of the members of each subgroup
    """
    rows = [scores[list(group)] for group in groups]
    sizes = np.array([len(row) for row in rows])
    means = np.array([row.mean() for row in rows])
    within = pooled_spread(rows).sigma
    alike = (
        Evidence(text="the subgroup means differ more than their members do", p_value=one_way_anova(rows).p_value),
        Evidence(
            text="the spread differs from subgroup to subgroup", p_value=brown_forsythe(rows).p_value, sign="spread"
        ),
    )
    if len(groups) < FEWEST_IN_A_ROW or within == 0 or np.ptp(means) == 0:
        return alike
    return (
        *alike,
        _outermost(means, within / np.sqrt(sizes), "subgroup"),
        _step(means, "subgroup"),
        _slope(means, "subgroup"),
    )


def _outermost(points: Values, sigma: Values, word: str) -> Evidence:
    """The point farthest out, in its own standard deviations, among so many."""
    out = np.abs(points - points.mean()) / sigma
    place = int(np.argmax(out))
    return Evidence(
        text=f"{word} {place + 1} stands apart from the others",
        p_value=float(min(1.0, len(points) * 2 * ndtr(-out[place]))),
        points=(place + 1,),
    )


def _step(points: Values, word: str) -> Evidence:
    found = change_point(points)
    return Evidence(
        text=f"the level moved after {word} {found.after}", p_value=found.p_value, points=(found.after, found.after + 1)
    )


def _slope(points: Values, word: str) -> Evidence:
    found = linear_trend(points)
    way = "rises" if found.slope > 0 else "falls"
    return Evidence(text=f"the level {way} from {word} to {word}", p_value=found.p_value, sign="trend")


def _memory(points: Values, word: str) -> Evidence:
    return Evidence(
        text=f"each {word} resembles the one before it (lag-1 correlation {lag_one_correlation(points):.2f})",
        p_value=rank_von_neumann(points).p_value,
    )
