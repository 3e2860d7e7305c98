"""Plotting positions."""

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import plotting_positions
from sheetqc.stats.errors import DataError

RULES = ("median rank", "filliben", "benard", "blom", "hazen", "weibull")


@pytest.mark.parametrize("rule", RULES)
@pytest.mark.parametrize("n", [2, 9, 300])
def test_positions_rise_and_are_symmetric(rule: str, n: int) -> None:
    p = plotting_positions(n, rule)
    assert p.shape == (n,)
    assert np.all(np.diff(p) > 0)
    assert p + p[::-1] == pytest.approx(np.ones(n), abs=1e-12)


@pytest.mark.parametrize("n", [1, 5, 60])
def test_median_ranks_are_medians(n: int) -> None:
    i = np.arange(1, n + 1)
    assert stats.beta.cdf(plotting_positions(n, "median rank"), i, n - i + 1) == pytest.approx(np.full(n, 0.5))


@pytest.mark.parametrize(("rule", "within"), [("filliben", 3e-4), ("benard", 5e-3)])
def test_the_approximations_of_median_ranks_are_near_them(rule: str, within: float) -> None:
    for n in (2, 5, 50):
        assert np.max(np.abs(plotting_positions(n, rule) - plotting_positions(n, "median rank"))) < within


def test_blom_scores_are_near_the_expected_normal_scores() -> None:
    # means of 5 ordered standard normal values, by simulation
    drawn = np.sort(np.random.default_rng(1).normal(size=(200_000, 5)), axis=1).mean(axis=0)
    assert stats.norm.ppf(plotting_positions(5, "blom")) == pytest.approx(drawn, abs=0.02)


def test_no_positions() -> None:
    with pytest.raises(DataError):
        plotting_positions(0)
    with pytest.raises(DataError, match="nothing"):
        plotting_positions(5, "nothing")
