"""Grubbs and Rosner: they flag, in the right place, as often as they say."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import outliers
from sheetqc.stats.errors import DataError
from sheetqc.stats.outlying import grubbs, grubbs_critical

# Rosner (1983), Technometrics 25, the 54 values of his example, as the NIST/SEMATECH e-Handbook 1.3.5.17.3 gives
# them, from memory; it prints 3 outliers at 5 % for up to 10, R of 3.118, 2.942, 3.179, 2.810, critical 3.158, 3.151,
# 3.143, 3.136
ROSNER = [
    *(-0.25, 0.68, 0.94, 1.15, 1.20, 1.26, 1.26, 1.34, 1.38, 1.43, 1.49, 1.49, 1.55, 1.56, 1.58, 1.65, 1.69, 1.70),
    *(1.76, 1.77, 1.81, 1.91, 1.94, 1.96, 1.99, 2.06, 2.09, 2.10, 2.14, 2.15, 2.23, 2.24, 2.26, 2.35, 2.37, 2.40),
    *(2.47, 2.54, 2.62, 2.64, 2.90, 2.92, 2.92, 2.93, 3.21, 3.26, 3.30, 3.59, 3.68, 4.30, 4.64, 5.34, 5.42, 6.01),
]


def test_rosners_example() -> None:
    found = outliers(ROSNER, 0.05, 10)
    assert found.count == 3
    assert found.places == (54, 53, 52)
    assert found.removed[:3] == (6.01, 5.42, 5.34)
    assert found.statistics[:4] == pytest.approx((3.118, 2.942, 3.179, 2.810), abs=1e-3)
    assert found.critical[:4] == pytest.approx((3.158, 3.151, 3.143, 3.136), abs=1e-3)
    assert len(found.statistics) == len(found.critical) == len(found.removed) == 10


def test_one_hides_behind_another() -> None:
    """The first statistic is not significant, a later one is: all three are outliers."""
    x = [*np.linspace(-1, 1, 17), 8.0, 8.1, 8.2]
    found = outliers(x, 0.05, 4)
    assert found.statistics[0] < found.critical[0]
    assert sorted(found.places) == [18, 19, 20]
    assert found.grubbs.p_value > 0.05


@pytest.mark.parametrize("n", [4, 20, 100])
def test_grubbs_critical_by_the_general_library(n: int) -> None:
    for sides in (1, 2):
        t = stats.t.ppf(1 - 0.05 / (sides * n), n - 2)
        expected = (n - 1) / np.sqrt(n) * np.sqrt(t**2 / (n - 2 + t**2))
        assert grubbs_critical(n, 0.05, sides) == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("n", [8, 30])
def test_size_of_grubbs(n: int) -> None:
    rng = np.random.default_rng(n)
    p = np.array([grubbs(row).p_value for row in rng.normal(size=(4000, n))])
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.011)


def test_size_of_rosner() -> None:
    """Rosner (1983): the size is kept from 25 values on."""
    rng = np.random.default_rng(1)
    flagged = [outliers(row, 0.05, 3).count > 0 for row in rng.normal(size=(1500, 40))]
    assert np.mean(flagged) == pytest.approx(0.05, abs=0.017)


def test_p_value_and_critical_value_agree() -> None:
    rng = np.random.default_rng(2)
    for row in rng.standard_t(3, size=(300, 15)):
        found = grubbs(row)
        assert (found.p_value < 0.05) == (found.statistic > found.critical)


def test_the_place_is_counted_from_one_and_low_values_count() -> None:
    x = [5.1, 5.0, 4.9, 0.0, 5.2, 5.0, 4.95, 5.05]
    found = grubbs(x)
    assert (found.place, found.value) == (4, 0.0)
    assert outliers(x).places == (4,)


def test_order_and_unit() -> None:
    rng = np.random.default_rng(3)
    x = rng.normal(size=30)
    x[7] = 9.0
    order = rng.permutation(30)
    plain, moved = outliers(x), outliers(-25.4 * x[order] + 7)
    assert moved.statistics == pytest.approx(plain.statistics)
    assert [int(order[p - 1]) + 1 for p in moved.places] == list(plain.places)


def test_all_but_one_equal() -> None:
    found = outliers([2.0] * 9 + [3.0], most=4)
    assert found.places == (10,)
    assert len(found.statistics) == 1
    assert found.grubbs.p_value < 1e-50


def test_nothing_is_changed() -> None:
    x = np.array([1.0, 2.0, 3.0, 99.0, 2.5, 1.5])
    before = x.copy()
    outliers(x)
    assert np.array_equal(x, before)


@pytest.mark.parametrize("x", [[1.0, 2.0], [4.0, 4.0, 4.0], [1.0, float("inf"), 2.0]])
def test_refusals(x: list[float]) -> None:
    with pytest.raises(DataError):
        outliers(x)
    with pytest.raises(DataError):
        grubbs(x)


def test_too_few_for_a_critical_value() -> None:
    with pytest.raises(DataError):
        grubbs_critical(2)
