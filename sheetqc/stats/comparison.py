"""Are several groups alike, in place and in spread?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError


@dataclass(frozen=True, slots=True, kw_only=True)
class Anova:
    """One-way analysis of variance; `statistic` is F, infinite where groups differ without any spread within."""

    statistic: float
    p_value: float
    ss_between: float
    ss_within: float
    df_between: int
    df_within: int

    @property
    def ms_between(self) -> float:
        """Mean square between the groups."""
        return self.ss_between / self.df_between

    @property
    def ms_within(self) -> float:
        """Mean square within the groups."""
        return self.ss_within / self.df_within


def one_way_anova(groups: Sequence[ArrayLike]) -> Anova:
    """One-way analysis of variance of groups of any sizes.

    Sums of squares are taken of deviations from the grand mean, so that a large common level costs no digits.

    Parameters
    ----------
    groups : each of shape (n_i,)

    Raises
    ------
    DataError : fewer than two groups, an empty one, no group with two values, or as for every statistic at the door

    Reference: Fisher (1925), Statistical Methods for Research Workers.
    """
    rows = [measured_values(group, at_least=1, varying=False) for group in groups]
    count = sum(len(row) for row in rows)
    if len(rows) < 2 or count <= len(rows):
        raise DataError("a comparison needs at least two groups, and more values than groups")
    grand = float(np.concatenate(rows).mean())
    shifted = [row - grand for row in rows]
    grand_rest = float(np.concatenate(shifted).mean())
    means = [float(row.mean()) for row in shifted]
    between = sum(len(row) * (mean - grand_rest) ** 2 for row, mean in zip(shifted, means, strict=True))
    within = sum(float(np.sum((row - mean) ** 2)) for row, mean in zip(shifted, means, strict=True))
    df_between, df_within = len(rows) - 1, count - len(rows)
    if within == 0:
        statistic, p_value = (np.inf, 0.0) if between > 0 else (0.0, 1.0)
    else:
        statistic = between / df_between / (within / df_within)
        p_value = float(special.fdtrc(df_between, df_within, statistic))
    return Anova(
        statistic=float(statistic),
        p_value=p_value,
        ss_between=float(between),
        ss_within=float(within),
        df_between=df_between,
        df_within=df_within,
    )


def brown_forsythe(groups: Sequence[ArrayLike]) -> Anova:
    """Are the spreads alike: analysis of variance of the distances from each group's median.

    Reference: Brown & Forsythe (1974), J. Amer. Statist. Assoc. 69, 364-367.
    """
    rows = [measured_values(group, at_least=1, varying=False) for group in groups]
    return one_way_anova([np.abs(row - np.median(row)) for row in rows])


def levene(groups: Sequence[ArrayLike]) -> Anova:
    """The same by the distances from each group's mean: sees more in normal values, trusts less in skewed ones.

    Reference: Levene (1960), in Contributions to Probability and Statistics, ed. Olkin, 278-292.
    """
    rows = [measured_values(group, at_least=1, varying=False) for group in groups]
    return one_way_anova([np.abs(row - row.mean()) for row in rows])
