"""Runs, trend and resemblance of neighbours."""

import math
from itertools import permutations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import serial
from sheetqc.stats.errors import DataError

rng = np.random.default_rng(41)


def runs_up_down(values: tuple[int, ...]) -> int:
    up = np.diff(values) > 0
    return 1 + int(np.sum(up[1:] != up[:-1]))


@pytest.mark.parametrize("n", [3, 5, 7])
def test_runs_up_and_down_by_counting_every_order(n: int) -> None:
    counted = np.array([runs_up_down(p) for p in permutations(range(n))])
    expected = [np.mean(counted <= r) for r in range(1, n)]
    assert serial.runs_up_and_down_cdf(n) == pytest.approx(expected, rel=1e-12)


def test_runs_about_the_median_by_simulation() -> None:
    x = rng.normal(size=(20_000, 16))
    high = x > np.median(x, axis=1, keepdims=True)
    runs = 1 + np.sum(high[:, 1:] != high[:, :-1], axis=1)
    for r in (5, 8, 11):
        assert serial.runs_probability_at_most(r, 8, 8) == pytest.approx(np.mean(runs <= r), abs=0.012)


def test_too_few_runs_have_a_small_probability() -> None:
    found = serial.runs_test(np.concatenate([rng.normal(0, 1, 20), rng.normal(6, 1, 20)]))
    assert found.statistic == 2
    assert found.p_at_most < 1e-9
    assert found.p_value == pytest.approx(2 * found.p_at_most)


def test_one_side_only_is_refused() -> None:
    with pytest.raises(DataError):
        serial.runs_test([1.0, 1.0, 1.0, 2.0])


def test_trend_against_the_general_library() -> None:
    x = rng.normal(size=40) + 0.02 * np.arange(40)
    ours, theirs = serial.linear_trend(x), stats.linregress(np.arange(40), x)
    assert ours.slope == pytest.approx(theirs.slope, rel=1e-10)
    assert ours.p_value == pytest.approx(theirs.pvalue, rel=1e-9)


def test_a_perfect_line() -> None:
    found = serial.linear_trend(np.arange(10) * 0.5)
    assert found.slope == pytest.approx(0.5)
    assert found.p_value == 0.0


@pytest.mark.parametrize("n", [20, 60])
def test_von_neumann_has_its_size(n: int) -> None:
    p = np.array([serial.von_neumann(row).p_value for row in rng.normal(size=(3000, n))])
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.012)


def test_von_neumann_sees_a_memory() -> None:
    x = np.zeros(100)
    for i in range(1, 100):
        x[i] = 0.7 * x[i - 1] + rng.normal()
    assert serial.von_neumann(x).p_value < 1e-4


def test_effective_count() -> None:
    assert serial.effective_count(100, 0.0) == pytest.approx(100)
    assert serial.effective_count(1000, 0.5) == pytest.approx(1000 / 3, rel=0.01)


@pytest.mark.parametrize("n", [5, 8, 30])
def test_both_tails_of_runs_up_and_down(n: int) -> None:
    found = serial.runs_up_and_down(rng.normal(size=n))
    cdf = serial.runs_up_and_down_cdf(n)
    exactly = cdf[found.statistic - 1] - (cdf[found.statistic - 2] if found.statistic > 1 else 0)
    assert found.p_at_most + found.p_at_least == pytest.approx(1 + exactly)
    assert found.p_value == pytest.approx(min(1, 2 * min(found.p_at_most, found.p_at_least)))


@pytest.mark.parametrize("n", [20, 200])
def test_runs_up_and_down_keep_their_size(n: int) -> None:
    p = np.array([serial.runs_up_and_down(row).p_value for row in rng.normal(size=(2000, n))])
    # the number of runs is whole: the size falls short of 5 per cent, never far beyond it
    assert 0.015 < np.mean(p <= 0.05) < 0.065


@pytest.mark.parametrize("n", [12, 30, 60])
def test_the_smallest_probabilities_of_runs_up_and_down(n: int) -> None:
    # a climb or a fall: 2 of n! orders
    climb = serial.runs_up_and_down(np.arange(n))
    assert climb.p_at_most == pytest.approx(2 / math.factorial(n), rel=1e-10)
    # a zigzag: Andre (1879), the alternating permutations; the series 4 (2 / pi)^(n + 1) (1 +- 1 / 3^(n + 1) ...)
    zigzag = serial.runs_up_and_down(np.tile([0.0, 1.0], n // 2))
    assert zigzag.p_at_least == pytest.approx(4 * (2 / math.pi) ** (n + 1), rel=2 * 3.0 ** -(n + 1) + 1e-10)


def test_the_smallest_probabilities_of_runs_about_the_median() -> None:
    # 40 values, 20 on each side: two orders keep the sides apart, two take them in turn
    ways = math.comb(40, 20)
    apart = serial.runs_test(np.arange(40))
    turns = serial.runs_test(np.arange(40) * np.tile([1, -1], 20))
    assert (apart.statistic, turns.statistic) == (2, 40)
    assert apart.p_at_most == pytest.approx(2 / ways, rel=1e-10)
    assert turns.p_at_least == pytest.approx(2 / ways, rel=1e-10)


def test_the_normal_approximation_of_runs_about_the_median() -> None:
    found = serial.runs_test(rng.normal(size=200))
    assert found.p_normal == pytest.approx(2 * stats.norm.sf(abs(found.z)))
    assert found.p_normal == pytest.approx(found.p_value, abs=0.15)


def test_two_values_say_nothing_of_runs() -> None:
    found = serial.runs_up_and_down([1.0, 2.0])
    assert (found.statistic, found.p_value) == (1, 1.0)


@pytest.mark.parametrize("n", [10, 30, 100])
@pytest.mark.parametrize("shape", ["normal", "wild", "rounded"])
def test_von_neumann_of_ranks_keeps_its_size_whatever_the_shape(n: int, shape: str) -> None:
    drawn = rng.standard_t(1, size=(3000, n)) if shape == "wild" else rng.normal(size=(3000, n))
    rows = np.round(drawn * 2) if shape == "rounded" else drawn
    p = np.array([serial.rank_von_neumann(row).p_value for row in rows])
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.014)


def test_one_wild_value_at_the_end_is_no_memory() -> None:
    x = np.append(np.random.default_rng(42).normal(10, 0.1, 50), 100.0)
    # a jump that is met once where any other is met twice halves the ratio of the values, not that of the ranks
    assert serial.von_neumann(x).p_value < 1e-3
    assert serial.rank_von_neumann(x).p_value > 0.05


def test_von_neumann_of_ranks_by_hand_and_by_the_order() -> None:
    x = np.array([3.0, 1.0, 2.0, 2.0, 9.0, 8.0, 7.0, 4.0, 5.0, 6.0])
    ranks = stats.rankdata(x)
    ratio = np.sum(np.diff(ranks) ** 2) / np.sum((ranks - ranks.mean()) ** 2)
    assert serial.rank_von_neumann(x).statistic == pytest.approx(ratio, rel=1e-12)
    assert serial.rank_von_neumann(np.exp(x)) == serial.rank_von_neumann(x)
    assert serial.rank_von_neumann(np.arange(30)).p_value < 1e-12
