"""Do the streams (cavities, spindles, heads) make the same parts?"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from sheetqc.finding import Finding
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.wording import listed, number, probability
from sheetqc.stats.comparison import brown_forsythe, one_way_anova

DIFFER = 0.01
"""Probability below which the streams are taken to differ (both comparisons together)."""

FEWEST_EACH = 3


def stream_view(
    values: NDArray[np.float64], streams: Sequence[str] | None, unit: str
) -> tuple[tuple[Condition, ...], tuple[Finding, ...]]:
    """What the streams say: a condition when they differ, else a note.

    Parameters
    ----------
    values : shape (n,)
    streams : a label per value, None when there is no such column
    """
    if streams is None:
        return (), ()
    labels = np.asarray(streams)
    groups = {name: values[labels == name] for name in dict.fromkeys(streams)}
    if len(groups) < 2 or min(len(g) for g in groups.values()) < FEWEST_EACH:
        return (), ()
    rows = list(groups.values())
    p_value = min(one_way_anova(rows).p_value, brown_forsythe(rows).p_value) * 2
    each = listed([f"{name}: mean {number(g.mean())}, s {number(g.std(ddof=1))}" for name, g in groups.items()])
    unit = f" ({unit})" if unit else ""
    if p_value >= DIFFER:
        text = f"The {len(groups)} streams do not differ visibly (p {probability(min(p_value, 1))}). {each}{unit}."
        return (), (Finding(code="streams-alike", level="note", text=text),)
    condition = Condition(
        code="streams-differ",
        reason=f"The {len(groups)} streams make different parts (p {probability(p_value)}): {each}{unit}. Taken "
        "together they are a mixture that no single model describes.",
        remedy="Bring the streams in line, or send each stream as a characteristic of its own.",
    )
    return (condition,), ()
