"""p-values of A-squared for fitted families: the tables, their interpolation, and the size of the test."""

from __future__ import annotations

import numpy as np
import pytest

from sheetqc.stats import anderson_darling
from sheetqc.stats.families import FAMILIES, family
from sheetqc.stats.goodness import simulated_p_value
from sheetqc.stats.null_distribution import critical_value, has_table, tabulated_p_value
from sheetqc.stats.null_points import PROBABILITIES, SAME_AS, TABLES, points
from sheetqc.stats.shape_coordinates import COORDINATES
from tests.calibration.goodness_size import SHAPES, rejected_share

TABLED = [name for name in SHAPES if has_table(name)]


@pytest.mark.parametrize("name", TABLES)
def test_tables_are_whole_and_in_order(name: str) -> None:
    grid, sizes, table = points(name)
    numbers = np.array(table)
    assert numbers.shape == (len(grid), len(sizes), len(PROBABILITIES))
    assert np.all(np.diff(numbers, axis=-1) > 0)
    assert np.all((numbers > 0.05) & (numbers < 50))
    axes = [sorted({place[i] for place in grid}) for i in range(len(grid[0]))]
    assert len(grid) == int(np.prod([len(axis) for axis in axes]))
    assert list(grid) == sorted(grid)


def test_every_family_has_a_way_to_a_p_value() -> None:
    by_simulation = {f.name for f in FAMILIES if not has_table(f.name)}
    assert by_simulation == {"normal", "lognormal", "beta", "truncated_normal", "normal_mixture"}
    assert set(TABLES) == set(COORDINATES)
    assert set(SAME_AS.values()) <= set(TABLES)


@pytest.mark.parametrize("name", TABLED)
def test_p_value_and_critical_value_are_inverse(name: str) -> None:
    theta = SHAPES[name][0]
    for n in (5, 12, 40, 1000):
        for p in (0.9, 0.3, 0.05, 0.002):
            assert tabulated_p_value(name, critical_value(name, p, theta, n), theta, n) == pytest.approx(p, rel=1e-9)


@pytest.mark.parametrize("name", TABLED)
def test_p_values_fall_from_one_towards_zero(name: str) -> None:
    theta = SHAPES[name][-1]
    p = [tabulated_p_value(name, a, theta, 50) for a in (0.0, 0.01, 0.1, 0.3, 0.6, 1.0, 2.0, 5.0, 20.0)]
    assert p[0] == 1.0
    assert np.all(np.diff(p) < 0)
    assert 0 < p[-1] < 1e-6


@pytest.mark.parametrize("name", TABLED)
def test_the_test_keeps_its_size(name: str) -> None:
    """A 5 % test of 50 values rejects 5 % of samples of its own family, give or take the noise of 1,500 samples.

    `python -m tests.calibration.goodness_size` measures it closer.
    """
    share = rejected_share(name, SHAPES[name][0], 50, 1500)
    assert 0.03 < share < 0.07


@pytest.mark.parametrize("name", ["gamma", "inverse_gaussian", "weibull_threshold"])
def test_the_table_agrees_with_fresh_simulation(name: str) -> None:
    f = family(name)
    x = f.sample(np.array(SHAPES[name][0]), 60, np.random.default_rng(3))
    found = anderson_darling(x, name)
    simulated = simulated_p_value(found.statistic, f, f.fit(x), 60, resamples=1999)
    assert found.p_value == pytest.approx(simulated, abs=0.05)


def test_a_family_and_its_transform_share_their_p_value() -> None:
    """The Weibull test is the smallest-value test of the logarithms, the loglogistic one the logistic one."""
    x = np.random.default_rng(4).weibull(1.7, 40) + 0.01
    assert anderson_darling(x, "weibull").p_value == pytest.approx(anderson_darling(np.log(x), "gumbel_min").p_value)
    assert anderson_darling(-x, "gumbel_min").p_value == pytest.approx(anderson_darling(x, "gumbel_max").p_value)
    assert anderson_darling(x, "loglogistic").p_value == pytest.approx(anderson_darling(np.log(x), "logistic").p_value)


@pytest.mark.parametrize("name", ["beta", "normal_mixture"])
def test_simulated_p_values_of_the_right_family_are_not_small(name: str) -> None:
    theta = {"beta": (2.0, 5.0), "normal_mixture": (0.5, 0.0, 1.0, 4.0, 1.0)}[name]
    x = family(name).sample(np.array(theta), 50, np.random.default_rng(2))
    assert 0.05 < anderson_darling(x, name).p_value <= 1
