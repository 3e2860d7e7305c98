"""A step is found where it is; without one the p-value is honest."""

import numpy as np
import pytest

from sheetqc.stats.change_point import change_point, kolmogorov_survival


def test_the_step_is_found_where_it_is() -> None:
    rng = np.random.default_rng(7)
    values = rng.normal(10, 0.1, 100)
    values[60:] += 0.2
    found = change_point(values)
    assert abs(found.after - 60) <= 3
    assert found.step == pytest.approx(0.2, abs=0.06)
    assert found.p_value < 1e-4


def test_the_size_is_at_most_nominal_without_a_step() -> None:
    rng = np.random.default_rng(8)
    p = np.array([change_point(row).p_value for row in rng.normal(size=(2000, 60))])
    assert 0.02 < np.mean(p < 0.05) <= 0.06


def test_kolmogorov_critical_value() -> None:
    # Massey (1951), J. Amer. Statist. Assoc. 46, 68-78, table 1: 1.36 at 5 %, 1.63 at 1 % (from memory)
    assert kolmogorov_survival(1.358) == pytest.approx(0.05, abs=5e-4)
    assert kolmogorov_survival(1.628) == pytest.approx(0.01, abs=2e-4)
