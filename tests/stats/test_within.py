"""Estimators of the spread within: unbiased, with honest degrees of freedom."""

from collections.abc import Callable

import numpy as np
import pytest

from sheetqc.stats.errors import DataError
from sheetqc.stats.within import (
    Spread,
    mean_range_spread,
    mean_s_spread,
    median_moving_range_spread,
    moving_range_spread,
    pooled_spread,
)

rng = np.random.default_rng(21)


@pytest.mark.parametrize("estimator", [mean_range_spread, mean_s_spread])
@pytest.mark.parametrize("sizes", [(5,) * 20, (3, 4, 5, 6, 2) * 4])
def test_centred_with_the_spread_its_degrees_promise(
    estimator: Callable[[list[np.ndarray]], Spread], sizes: tuple[int, ...]
) -> None:
    found = [estimator([rng.normal(0, 2, n) for n in sizes]) for _ in range(600)]
    sigma = np.array([f.sigma for f in found])
    assert sigma.mean() == pytest.approx(2.0, abs=4 * sigma.std() / 600**0.5)
    # relative variance of an estimate with v degrees of freedom is 1 / (2 v)
    assert np.var(sigma / 2) == pytest.approx(1 / (2 * found[0].degrees), rel=0.2)


def test_the_moving_range_is_centred_with_the_spread_its_degrees_promise() -> None:
    found = [moving_range_spread(rng.normal(0, 1, 60)) for _ in range(3000)]
    sigma = np.array([f.sigma for f in found])
    assert sigma.mean() == pytest.approx(1.0, abs=0.01)
    assert np.var(sigma) == pytest.approx(1 / (2 * found[0].degrees), rel=0.1)


def test_the_median_moving_range_shrugs_off_a_jump() -> None:
    x = rng.normal(0, 1, 200)
    x[100:] += 50
    assert median_moving_range_spread(x) == pytest.approx(1.0, abs=0.25)


def test_pooled() -> None:
    rows = [np.array([1.0, 2.0, 3.0]), np.array([10.0, 14.0])]
    found = pooled_spread(rows)
    assert found.sigma == pytest.approx(((2 + 8) / 3) ** 0.5)
    assert found.degrees == 3


@pytest.mark.parametrize("estimator", [mean_range_spread, mean_s_spread, pooled_spread])
def test_single_values_carry_no_spread_within(estimator: Callable[[list[np.ndarray]], Spread]) -> None:
    with pytest.raises(DataError):
        estimator([np.array([1.0]), np.array([2.0])])
