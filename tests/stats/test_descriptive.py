"""Moments to the last digit, and the order statistics."""

import numpy as np
import pytest

from sheetqc.stats.descriptive import describe, lag_one_correlation
from sheetqc.stats.errors import DataError


def log_relative_error(got: float, certified: float) -> float:
    """Number of right digits, 15 at most."""
    return 15.0 if got == certified else -np.log10(abs(got - certified) / abs(certified))


def test_numerical_accuracy_1_to_4() -> None:
    # NIST StRD univariate NumAcc1 to NumAcc4: certified mean and standard deviation
    sets = [
        ([10000001.0, 10000003.0, 10000002.0], 10000002.0, 1.0),
        ([1.2] + [1.1, 1.3] * 500, 1.2, 0.1),
        ([1000000.2] + [1000000.1, 1000000.3] * 500, 1000000.2, 0.1),
        ([10000000.2] + [10000000.1, 10000000.3] * 500, 10000000.2, 0.1),
    ]
    for values, mean, s in sets:
        found = describe(values)
        assert log_relative_error(found.mean, mean) >= 15
        # the values themselves carry their rounding: 1e7 + 0.1 is known to 1e-9, so s to about 8 digits
        assert log_relative_error(found.s, s) >= (13 if mean < 10 or s == 1 else 8.2)


def test_against_an_exact_computation() -> None:
    from fractions import Fraction

    values = [10000000.2] + [10000000.1, 10000000.3] * 500
    exact = [Fraction(v) for v in values]
    mean = sum(exact) / len(exact)
    variance = sum((v - mean) ** 2 for v in exact) / (len(exact) - 1)
    assert describe(values).s == pytest.approx(float(variance) ** 0.5, rel=1e-15)


def test_against_the_general_library() -> None:
    from scipy import stats

    x = np.random.default_rng(5).gamma(2.0, size=80)
    found = describe(x)
    assert found.skewness == pytest.approx(stats.skew(x, bias=False), rel=1e-12)
    assert found.kurtosis == pytest.approx(stats.kurtosis(x, bias=False), rel=1e-12)
    assert found.g1 == pytest.approx(stats.skew(x), rel=1e-12)
    assert found.median == np.median(x)


def test_small_and_flat_samples() -> None:
    assert describe([1.0, 2.0]).skewness is None
    assert describe([1.0, 2.0, 4.0]).kurtosis is None
    flat = describe([3.0, 3.0, 3.0, 3.0])
    assert (flat.s, flat.skewness, flat.kurtosis) == (0.0, None, None)


def test_lag_one_correlation() -> None:
    # NIST StRD NumAcc1: certified -0.5
    assert lag_one_correlation([10000001.0, 10000003.0, 10000002.0]) == pytest.approx(-0.5, rel=1e-14)


@pytest.mark.parametrize("bad", [[1.0], [1.0, float("nan")], [[1.0, 2.0]], ["a", "b"]])
def test_bad_input(bad: object) -> None:
    with pytest.raises(DataError):
        describe(bad)  # type: ignore[arg-type]
