"""Comparisons of groups against the general library."""

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.comparison import brown_forsythe, levene, one_way_anova
from sheetqc.stats.errors import DataError

rng = np.random.default_rng(31)
GROUPS = [rng.normal(m, s, n) for m, s, n in ((10, 1, 12), (10.5, 2, 9), (9, 1, 20))]


def test_anova() -> None:
    ours, theirs = one_way_anova(GROUPS), stats.f_oneway(*GROUPS)
    assert ours.statistic == pytest.approx(theirs.statistic, rel=1e-10)
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-10)


def test_brown_forsythe() -> None:
    ours, theirs = brown_forsythe(GROUPS), stats.levene(*GROUPS, center="median")
    assert ours.statistic == pytest.approx(theirs.statistic, rel=1e-10)
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-10)


def test_levene() -> None:
    ours, theirs = levene(GROUPS), stats.levene(*GROUPS, center="mean")
    assert ours.statistic == pytest.approx(theirs.statistic, rel=1e-10)
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-10)


def test_a_large_common_level_costs_no_digits() -> None:
    # the design of NIST StRD SmLs07: values of three digits on a level of 1e12 are known to 1e-4 only
    small = [np.array([0.25, 0.5, 0.75]) + k for k in range(3)]
    large = [group + 2.0**30 for group in small]
    assert one_way_anova(large).statistic == pytest.approx(one_way_anova(small).statistic, rel=1e-12)


def test_equal_values() -> None:
    assert one_way_anova([[1.0, 1.0], [1.0, 1.0]]).p_value == 1.0
    assert one_way_anova([[1.0, 1.0], [2.0, 2.0]]).p_value == 0.0


@pytest.mark.parametrize("groups", [[[1.0, 2.0]], [[1.0], [2.0]], [[], [1.0, 2.0]]])
def test_too_little(groups: list[list[float]]) -> None:
    with pytest.raises(DataError):
        one_way_anova(groups)
