"""Counts: limits, dispersion, ordered categories, chart limits."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import c_chart_limits, dispersion_test, pareto, poisson_interval
from sheetqc.stats.errors import DataError


@pytest.mark.parametrize("count", [0, 1, 7, 400])
@pytest.mark.parametrize("confidence", [0.9, 0.95, 0.99])
def test_the_ends_have_the_tails_that_define_them(count: int, confidence: float) -> None:
    found, tail = poisson_interval(count, confidence), (1 - confidence) / 2
    assert stats.poisson.cdf(count, found.upper) == pytest.approx(tail, rel=1e-10)
    if count:
        assert stats.poisson.sf(count - 1, found.lower) == pytest.approx(tail, rel=1e-10)
    else:
        assert found.lower == 0.0


def test_none_counted_one_sided() -> None:
    # exp(-upper) = 0.05: the rule of three
    assert poisson_interval(0, 0.95, sides=1).upper == pytest.approx(-np.log(0.05))


@pytest.mark.parametrize(
    ("count", "confidence", "sides"),
    [(-1, 0.95, 2), (2.5, 0.95, 2), (3, 1.0, 2), (3, 0.95, 3), (float("nan"), 0.95, 2)],
)
def test_no_interval(count: float, confidence: float, sides: int) -> None:
    with pytest.raises(DataError):
        poisson_interval(count, confidence, sides)


def test_dispersion_against_the_general_library() -> None:
    counts, sizes = np.array([4, 9, 3, 12, 7]), np.array([1.0, 2.0, 1.0, 2.5, 1.5])
    found = dispersion_test(counts, sizes)
    theirs = stats.chisquare(counts, counts.sum() * sizes / sizes.sum())
    assert found.statistic == pytest.approx(theirs.statistic)
    assert found.p_value == pytest.approx(theirs.pvalue)
    assert found.p_even == pytest.approx(1 - theirs.pvalue)
    even = dispersion_test(counts)
    assert even.index == pytest.approx(counts.var(ddof=1) / counts.mean())


def test_dispersion_has_its_size_and_sees_clusters() -> None:
    rng = np.random.default_rng(1)
    p = np.array([dispersion_test(row).p_value for row in rng.poisson(6, (3000, 25))])
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.013)
    clustered = rng.negative_binomial(3, 3 / 9, (200, 25))
    assert np.mean([dispersion_test(row).p_value < 0.05 for row in clustered]) > 0.9


@pytest.mark.parametrize(
    ("counts", "sizes"), [([0, 0, 0], None), ([1, 2], [1.0, 0.0]), ([1, 2], [1.0]), ([1.5, 2], None), ([3], None)]
)
def test_no_dispersion(counts: list[float], sizes: list[float] | None) -> None:
    with pytest.raises(DataError):
        dispersion_test(counts, sizes)


def test_pareto_adds_up_and_keeps_the_order_of_equals() -> None:
    found = pareto(["burr", "dent", "scratch", "burr", "stain", "none"], [3, 5, 8, 4, 5, 0])
    assert found.categories == ("scratch", "burr", "dent", "stain", "none")
    assert found.counts == (8, 7, 5, 5, 0)
    assert found.shares == pytest.approx((0.32, 0.28, 0.2, 0.2, 0.0))
    assert found.cumulative == pytest.approx((0.32, 0.6, 0.8, 1.0, 1.0))
    assert found.cumulative[-1] == 1.0


@pytest.mark.parametrize(
    ("categories", "counts"), [(["a"], [1, 2]), (["a", "b"], [0, 0]), (["a", "b"], [1, -1]), ([], []), (["a"], [0.5])]
)
def test_no_pareto(categories: list[str], counts: list[float]) -> None:
    with pytest.raises(DataError):
        pareto(categories, counts)


def test_c_chart_limits() -> None:
    found = c_chart_limits([14, 18, 16, 16])
    assert (found.centre, found.lower, found.upper) == pytest.approx((16.0, 4.0, 28.0))
    assert c_chart_limits([1, 3, 2]).lower == 0.0
    nothing = c_chart_limits([0, 0])
    assert (nothing.centre, nothing.upper) == (0.0, 0.0)
    with pytest.raises(DataError):
        c_chart_limits([1, -2])
