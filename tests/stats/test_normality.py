"""Shapiro-Wilk and the correlation of the probability plot."""

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.errors import DataError
from sheetqc.stats.normality import ppcc, ppcc_p_value, shapiro_wilk, shapiro_wilk_rows

rng = np.random.default_rng(51)


@pytest.mark.parametrize("n", [3, 4, 5, 6, 11, 12, 50, 500, 5000])
def test_shapiro_wilk_against_the_general_library(n: int) -> None:
    x = rng.gamma(4.0, size=n)
    ours, theirs = shapiro_wilk(x), stats.shapiro(x)
    # the library's own scores are accurate to about 1e-9
    assert ours.statistic == pytest.approx(theirs.statistic, rel=1e-8)
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-5, abs=1e-12)


@pytest.mark.parametrize("n", [10, 40, 120])
@pytest.mark.parametrize("test", [shapiro_wilk, ppcc])
def test_size(test: object, n: int) -> None:
    p = np.array([test(row).p_value for row in rng.normal(size=(2000, n))])  # type: ignore[operator]
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.0155)


def test_printed_critical_values() -> None:
    # Filliben (1975), table 1, n = 95 (printed to 3 decimals): the probability of r is in between those of r +- 0.0005
    for r, p in ((0.977, 0.005), (0.983, 0.025), (0.986, 0.05), (0.989, 0.1)):
        assert ppcc_p_value(r - 0.001, 95) < p < ppcc_p_value(r + 0.001, 95)


def test_p_rises_with_r_and_stays_between_0_and_1() -> None:
    p = [ppcc_p_value(r, 60) for r in np.linspace(0.5, 0.9999, 200)]
    assert np.all(np.diff(p) >= 0)
    assert 0 <= p[0] <= p[-1] <= 1


@pytest.mark.parametrize("bad", [[1.0, 2.0], [1.0, 1.0, 1.0], [1.0, 2.0, float("inf")]])
def test_bad_input(bad: list[float]) -> None:
    for test in (shapiro_wilk, ppcc):
        with pytest.raises(DataError):
            test(bad)


def test_too_many_for_shapiro_wilk() -> None:
    with pytest.raises(DataError, match="5000"):
        shapiro_wilk(np.arange(5001.0))


@pytest.mark.parametrize("n", [3, 4, 8, 11, 12, 60])
def test_rows_are_samples_of_their_own(n: int) -> None:
    x = rng.normal(size=(2, 3, n)) ** 3
    found = shapiro_wilk_rows(x)
    assert found.statistic.shape == found.p_value.shape == (2, 3)
    for place in np.ndindex(2, 3):
        alone = stats.shapiro(x[place])
        assert found.statistic[place] == pytest.approx(alone.statistic, rel=1e-8)
        assert found.p_value[place] == pytest.approx(alone.pvalue, rel=1e-5, abs=1e-12)


def test_the_ends_of_w() -> None:
    # three evenly spaced values, and the scores themselves, leave nothing to object to
    assert shapiro_wilk([1.0, 2.0, 3.0]).p_value == pytest.approx(1.0, abs=1e-7)
    assert shapiro_wilk([0.0, 0.0, 0.0, 1.0, 1e9]).p_value < 1e-3
    for n in (5, 20):
        assert shapiro_wilk(stats.norm.ppf((np.arange(1, n + 1) - 0.375) / (n + 0.25))).p_value > 0.95


@pytest.mark.parametrize(
    "bad", [1.0, [[1.0, 2.0]], [[1.0, 2.0, 3.0], [2.0, 2.0, 2.0]], [[1.0, 2.0, float("nan")]], np.zeros((2, 5001))]
)
def test_rows_that_cannot_be_tested(bad: object) -> None:
    with pytest.raises(DataError):
        shapiro_wilk_rows(bad)  # type: ignore[arg-type]
