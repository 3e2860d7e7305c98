"""Shapiro-Wilk and the correlation of the probability plot."""

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.errors import DataError
from sheetqc.stats.normality import ppcc, ppcc_p_value, shapiro_wilk

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
