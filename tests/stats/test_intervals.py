"""Clopper-Pearson and limits of sigma."""

import pytest
from scipy import stats

from sheetqc.stats.errors import DataError
from sheetqc.stats.intervals import proportion_interval, sigma_factors


@pytest.mark.parametrize(("count", "n"), [(0, 125), (3, 500), (10, 10), (17, 60)])
@pytest.mark.parametrize("confidence", [0.9, 0.95, 0.99])
def test_the_ends_have_the_tails_that_define_them(count: int, n: int, confidence: float) -> None:
    found, tail = proportion_interval(count, n, confidence), (1 - confidence) / 2
    if count > 0:
        assert stats.binom.sf(count - 1, n, found.lower) == pytest.approx(tail, rel=1e-11)
    if count < n:
        assert stats.binom.cdf(count, n, found.upper) == pytest.approx(tail, rel=1e-11)
    # the library finds its ends by a search that stops at about 1e-9
    theirs = stats.binomtest(count, n).proportion_ci(confidence, method="exact")
    assert (found.lower, found.upper) == pytest.approx((theirs.low, theirs.high), rel=1e-8, abs=1e-12)


def test_none_of_125() -> None:
    # the upper bound for 0 of n is 1 - (1 - confidence)^(1/n) exactly
    assert proportion_interval(0, 125, 0.95, sides=1).upper == pytest.approx(1 - 0.05 ** (1 / 125), rel=1e-12)


def test_sigma_factors_are_chi_square() -> None:
    lower, upper = sigma_factors(19, 0.95)
    assert lower == pytest.approx((19 / stats.chi2.ppf(0.975, 19)) ** 0.5, rel=1e-12)
    assert upper == pytest.approx((19 / stats.chi2.ppf(0.025, 19)) ** 0.5, rel=1e-12)


@pytest.mark.parametrize(
    ("count", "n", "confidence", "sides"),
    [(5, 4, 0.95, 2), (-1, 4, 0.95, 2), (0, 0, 0.95, 2), (1, 4, 1.0, 2), (1, 4, 0.95, 3)],
)
def test_bad_input(count: int, n: int, confidence: float, sides: int) -> None:
    with pytest.raises(DataError):
        proportion_interval(count, n, confidence, sides)
