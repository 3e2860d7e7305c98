"""Control charts against the constants of the trade, and against what a steady process does."""

from __future__ import annotations

import numpy as np
import pytest

from sheetqc.stats import control_chart_constants, individuals_chart, mean_range_chart, mean_s_chart
from sheetqc.stats.errors import DataError
from sheetqc.stats.stability import places
from sheetqc.stats.stability.rules import beyond_the_limits

rng = np.random.default_rng(71)
ROWS = list(rng.normal(40, 0.2, (25, 5)))
UNEQUAL = [rng.normal(40, 0.2, size) for size in (3, 5, 2, 8, 4, 4)]


def test_individuals() -> None:
    x = [10.0, 12.0, 11.0, 11.0]
    found, k = individuals_chart(x), control_chart_constants(2)
    mean_range = (2 + 1 + 0) / 3
    assert found.location.points == pytest.approx(x)
    assert found.spread.points == pytest.approx([2, 1, 0])
    assert found.location.upper == pytest.approx([11 + k.E2 * mean_range] * 4)
    assert found.location.lower == pytest.approx([11 - k.E2 * mean_range] * 4)
    assert found.spread.centre == pytest.approx([mean_range] * 3)
    assert found.spread.upper == pytest.approx([k.D4 * mean_range] * 3)
    assert found.spread.lower == pytest.approx([0.0] * 3)
    assert found.sizes == (1, 1, 1, 1)


def test_mean_and_range_of_equal_subgroups_by_the_constants() -> None:
    found, k = mean_range_chart(ROWS), control_chart_constants(5)
    grand, mean_range = np.mean(ROWS), np.mean(np.ptp(ROWS, axis=1))
    assert found.location.points == pytest.approx(np.mean(ROWS, axis=1))
    assert found.location.centre == pytest.approx([grand] * 25)
    assert found.location.upper == pytest.approx([grand + k.A2 * mean_range] * 25)
    assert found.location.lower == pytest.approx([grand - k.A2 * mean_range] * 25)
    assert found.spread.centre == pytest.approx([mean_range] * 25)
    assert found.spread.upper == pytest.approx([k.D4 * mean_range] * 25)
    assert found.within.sigma == pytest.approx(mean_range / k.d2)


def test_mean_and_s_of_equal_subgroups_by_the_constants() -> None:
    found, k = mean_s_chart(ROWS), control_chart_constants(5)
    grand, mean_s = np.mean(ROWS), np.mean(np.std(ROWS, axis=1, ddof=1))
    assert found.location.upper == pytest.approx([grand + k.A3 * mean_s] * 25)
    assert found.spread.points == pytest.approx(np.std(ROWS, axis=1, ddof=1))
    assert found.spread.centre == pytest.approx([mean_s] * 25)
    assert found.spread.upper == pytest.approx([k.B4 * mean_s] * 25)
    assert found.spread.lower == pytest.approx([k.B3 * mean_s] * 25)


@pytest.mark.parametrize("chart", [mean_range_chart, mean_s_chart])
def test_unequal_subgroups(chart: object) -> None:
    found = chart(UNEQUAL)  # type: ignore[operator]
    assert found.sizes == (3, 5, 2, 8, 4, 4)
    assert found.location.centre == pytest.approx([np.mean(np.concatenate(UNEQUAL))] * 6)
    half = found.location.upper - found.location.centre
    assert half * np.sqrt(found.sizes) == pytest.approx([3 * found.within.sigma] * 6)
    # the spread that is expected of a subgroup grows with its size, each has its own centre
    assert np.argsort(found.spread.centre, kind="stable").tolist() == np.argsort(found.sizes, kind="stable").tolist()
    assert np.all(found.spread.lower <= found.spread.centre)


def test_limits_are_those_of_a_known_spread_when_there_is_plenty() -> None:
    rows = list(np.random.default_rng(72).normal(7, 2, (40_000, 4)))
    for chart in (mean_range_chart, mean_s_chart):
        found = chart(rows)
        assert found.within.sigma == pytest.approx(2, rel=0.01)
        # 2 P(Z > 3) = 0.0027 of the means
        assert len(found.location.beyond) / 40_000 == pytest.approx(0.0027, abs=0.0009)


def test_a_moved_subgroup_and_a_restless_one_are_named() -> None:
    rows = [row.copy() for row in ROWS]
    rows[6] += 0.6
    rows[11] = rows[11].mean() + 5 * (rows[11] - rows[11].mean())
    for chart in (mean_range_chart, mean_s_chart):
        found = chart(rows)
        assert found.location.beyond == (7,)
        assert found.spread.beyond == (12,)


def test_standardised_points_are_what_the_rules_take() -> None:
    found = mean_s_chart(UNEQUAL).location
    expected = (found.points - found.centre) / (mean_s_chart(UNEQUAL).within.sigma / np.sqrt([3, 5, 2, 8, 4, 4]))
    assert found.standardised == pytest.approx(expected)
    rows = [*UNEQUAL, np.array([42.0, 42.1, 41.9])]
    chart = mean_range_chart(rows)
    # the far group draws the centre towards it, which may leave others outside as well
    assert 7 in chart.location.beyond
    assert places(chart.location.standardised, beyond_the_limits) == chart.location.beyond


@pytest.mark.parametrize("chart", [mean_range_chart, mean_s_chart])
@pytest.mark.parametrize(
    ("rows", "why"),
    [
        ([[1.0, 2.0]], "two of them"),
        ([[1.0, 2.0], [3.0]], "at least 2"),
        ([[1.0, 1.0], [2.0, 2.0]], "any spread"),
        ([[1.0, float("nan")], [2.0, 3.0]], "missing"),
    ],
)
def test_bad_subgroups(chart: object, rows: list[list[float]], why: str) -> None:
    with pytest.raises(DataError, match=why):
        chart(rows)  # type: ignore[operator]


@pytest.mark.parametrize("x", [[1.0], [2.0, 2.0, 2.0], [1.0, float("inf")]])
def test_bad_individuals(x: list[float]) -> None:
    with pytest.raises(DataError):
        individuals_chart(x)
