"""The Anderson-Darling test of every family."""

from __future__ import annotations

import numpy as np
import pytest

from sheetqc.stats import DataError, a_squared, anderson_darling, fit
from sheetqc.stats.families import FAMILIES, Family, family
from sheetqc.stats.goodness import normal_p_value
from tests.stats.family_cases import MEMBERS, case_of, label

ALL = [f for f, _ in MEMBERS]


def _by_definition(x: np.ndarray, f: Family, theta: np.ndarray) -> float:
    """n times the integral of (F_n - F)^2 / (F (1 - F)) dF (Anderson & Darling 1954), in closed form between values.

    With F_n constant at c on (a, b) the integrand has the antiderivative
    -u + c^2 log u - (1 - c)^2 log(1 - u).
    """
    u = np.concatenate([[0.0], np.sort(f.cdf(x, theta)), [1.0]])
    n = len(x)
    total = 0.0
    for i in range(n + 1):
        a, b, c = u[i], u[i + 1], i / n
        part = a - b
        if c > 0:
            part += c**2 * np.log(b / a)
        if c < 1:
            part -= (1 - c) ** 2 * np.log((1 - b) / (1 - a))
        total += part
    return n * total


@pytest.mark.parametrize("f", ALL, ids=label)
def test_the_statistic_is_the_integral_of_its_definition(f: Family) -> None:
    rng = np.random.default_rng(8)
    theta = np.array(case_of(f).thetas[0])
    x = f.sample(theta, 30, rng)
    assert float(a_squared(x, f, theta)) == pytest.approx(_by_definition(x, f, theta), rel=1e-10)


@pytest.mark.parametrize("f", ALL, ids=label)
def test_batches_of_statistics_are_the_single_ones(f: Family) -> None:
    theta = np.array(case_of(f).thetas)
    x = f.sample(theta, 25, np.random.default_rng(9))
    batch = a_squared(x, f, theta)
    assert batch.shape == (len(theta),)
    np.testing.assert_allclose(batch, [float(a_squared(a, f, t)) for a, t in zip(x, theta, strict=True)], rtol=1e-13)


def test_far_values_give_neither_infinity_nor_nan() -> None:
    x = np.concatenate([np.linspace(1, 2, 40), [1e6]])
    for f in FAMILIES:
        if not f.refusal(x):
            theta = f.fit(x[:-1])
            if np.isfinite(float(f.support(theta)[1])):
                continue
            assert np.isfinite(a_squared(x, f, theta))
            assert a_squared(x, f, theta) > a_squared(x[:-1], f, theta) + 2


def test_normal_statistic_uses_the_divisor_n_minus_1() -> None:
    x = np.random.default_rng(4).normal(size=30)
    expected = float(a_squared(x, "normal", np.array([x.mean(), x.std(ddof=1)])))
    assert anderson_darling(x).statistic == pytest.approx(expected, rel=1e-14)
    assert anderson_darling(x).statistic != pytest.approx(
        float(a_squared(x, "normal", fit(x, "normal").theta)), rel=1e-6
    )


def test_normal_p_value_is_continuous_and_falls() -> None:
    """The published pieces join to within a hundredth of the p-value; the last piece is held where it would rise."""
    z = np.concatenate([np.linspace(0.02, 12, 4000), [20.0, 100.0]])
    p = np.array([normal_p_value(v, 10**9) for v in z])
    assert np.all((p > 0) & (p <= 1))
    assert np.all(np.diff(p) <= 0.01 * p[:-1])


def test_lognormal_p_value_is_that_of_the_logarithms() -> None:
    x = np.random.default_rng(5).lognormal(1, 0.4, 40)
    assert anderson_darling(x, "lognormal").p_value == pytest.approx(anderson_darling(np.log(x)).p_value, rel=1e-12)


@pytest.mark.parametrize("f", ALL, ids=label)
def test_p_values_are_small_for_the_wrong_shape_and_repeatable(f: Family) -> None:
    rng = np.random.default_rng(10)
    two_lumps = np.concatenate([rng.uniform(1.0, 1.1, 40), rng.uniform(5.0, 5.1, 40)])
    if f.refusal(two_lumps) or f.name == "normal_mixture":
        return
    first, second = anderson_darling(two_lumps, f), anderson_darling(two_lumps.tolist(), f)
    assert first == second
    assert first.p_value < 0.01


def test_what_cannot_be_fitted_cannot_be_tested() -> None:
    with pytest.raises(DataError, match="needs values above 0"):
        anderson_darling([-1.0, 2.0, 3.0], "weibull")
    with pytest.raises(DataError, match="all values are equal"):
        anderson_darling([2.0, 2.0, 2.0])


def test_known_parameters_follow_the_case_0_distribution() -> None:
    """Upper 5 % point 2.492, 10 % point 1.933 of A-squared with known parameters (Stephens 1974, case 0)."""
    rng = np.random.default_rng(21)
    theta = np.array([1.7, 3.0])
    statistic = a_squared(family("weibull").sample(np.tile(theta, (20000, 1)), 20, rng), "weibull", theta)
    assert abs(np.mean(statistic > 2.492) - 0.05) < 0.006
    assert abs(np.mean(statistic > 1.933) - 0.10) < 0.008
