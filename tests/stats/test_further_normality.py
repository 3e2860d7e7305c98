"""Lilliefors and Shapiro-Francia."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import ArrayLike
from scipy import stats

from sheetqc.stats import lilliefors, shapiro_francia, shapiro_wilk
from sheetqc.stats.errors import DataError
from sheetqc.stats.further_normality import _distance_p_value
from sheetqc.stats.normality import NormalityTest

Test = Callable[[ArrayLike], NormalityTest]


def test_the_distance_is_that_of_the_general_library() -> None:
    x = np.random.default_rng(1).gamma(4, size=80)
    theirs = stats.kstest((x - x.mean()) / x.std(ddof=1), "norm")
    assert lilliefors(x).statistic == pytest.approx(theirs.statistic, rel=1e-12)


def test_the_p_value_of_the_distance_falls_and_stays_a_probability() -> None:
    for n in (5, 30, 100, 400):
        p = np.array([_distance_p_value(d, n) for d in np.linspace(0.001, 1.2 / np.sqrt(n), 400)])
        assert p[0] == 1.0
        assert p.min() >= 0
        # two published approximations meet at 0.1, with a step of under 0.01 there
        assert np.max(np.diff(p)) < 0.01


@pytest.mark.parametrize("test", [lilliefors, shapiro_francia])
@pytest.mark.parametrize("n", [10, 50, 200])
def test_size(test: Test, n: int) -> None:
    rng = np.random.default_rng(n)
    p = np.array([test(row).p_value for row in rng.normal(size=(2000, n))])
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.016)
    assert np.mean(p < 0.01) == pytest.approx(0.01, abs=0.008)


@pytest.mark.parametrize("test", [lilliefors, shapiro_francia])
def test_power_and_invariance(test: Test) -> None:
    x = np.random.default_rng(3).exponential(size=60)
    assert test(x).p_value < 0.01
    assert test(1e3 + 25.4 * x[::-1]).p_value == pytest.approx(test(x).p_value, rel=1e-6)


def test_shapiro_francia_is_near_shapiro_wilk() -> None:
    x = np.random.default_rng(4).normal(size=100)
    assert shapiro_francia(x).statistic == pytest.approx(shapiro_wilk(x).statistic, abs=0.01)


def test_a_perfect_row() -> None:
    scores = stats.norm.ppf((np.arange(1, 31) - 0.375) / 30.25)
    found = shapiro_francia(scores)
    assert found.statistic == pytest.approx(1.0, abs=1e-12)
    assert found.p_value > 0.999


@pytest.mark.parametrize("test", [lilliefors, shapiro_francia])
@pytest.mark.parametrize("x", [[1.0, 2.0, 3.0, 4.0], [2.0] * 9, [1.0, 2.0, 3.0, 4.0, float("nan")]])
def test_refusals(test: Test, x: list[float]) -> None:
    with pytest.raises(DataError):
        test(x)


def test_too_many() -> None:
    with pytest.raises(DataError, match="5000"):
        shapiro_francia(np.random.default_rng(5).normal(size=5001))
