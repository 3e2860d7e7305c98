"""Box-Cox and Yeo-Johnson: lambda, its interval, there and back."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import box_cox, yeo_johnson
from sheetqc.stats.errors import DataError
from sheetqc.stats.transforms import (
    PowerTransform,
    _fitted,
    box_cox_backward,
    box_cox_forward,
    yeo_johnson_backward,
    yeo_johnson_forward,
)

LAMBDAS = (-2.0, -1.0, -0.5, 0.0, 1e-9, 0.3, 1.0, 2.0, 3.0)
SAMPLES = {
    "gamma": np.random.default_rng(1).gamma(2, 3, 80),
    "lognormal": np.random.default_rng(2).lognormal(1, 0.4, 125),
    "left": 20 - np.random.default_rng(3).gamma(2, 2, 60),
    "far": 1e4 + np.random.default_rng(4).gamma(2, 100, 60),
    "small": 1e-6 * np.random.default_rng(5).weibull(1.4, 50),
}
Fit = Callable[..., PowerTransform]


@pytest.mark.parametrize("name", ["gamma", "lognormal", "left"])
def test_box_cox_against_the_general_library(name: str) -> None:
    x, found = SAMPLES[name], box_cox(SAMPLES[name])
    theirs, lam, (low, high) = stats.boxcox(x, alpha=0.05)
    assert found.lambda_ == pytest.approx(lam, abs=1e-5)
    assert found.log_likelihood == pytest.approx(stats.boxcox_llf(lam, x), abs=1e-8)
    assert (found.lower, found.upper) == pytest.approx((low, high), abs=1e-5)
    assert found.transform(x) == pytest.approx(theirs, rel=1e-4)


@pytest.mark.parametrize("shift", [0.0, 12.0])
def test_yeo_johnson_against_the_general_library(shift: float) -> None:
    x = SAMPLES["gamma"] - shift
    found, (theirs, lam) = yeo_johnson(x), stats.yeojohnson(x)
    assert found.lambda_ == pytest.approx(lam, abs=1e-5)
    assert found.log_likelihood == pytest.approx(stats.yeojohnson_llf(lam, x), abs=1e-8)
    assert found.transform(x) == pytest.approx(theirs, rel=1e-4, abs=1e-4)


@pytest.mark.parametrize("name", SAMPLES)
def test_box_cox_is_at_the_top_and_its_ends_lie_a_fixed_way_down(name: str) -> None:
    x, found = SAMPLES[name], box_cox(SAMPLES[name], 0.9)
    logs = np.log(x / stats.gmean(x))

    def height(lam: float) -> float:
        scaled = logs if lam == 0 else np.expm1(lam * logs) / lam
        return float(-0.5 * len(x) * np.log(np.var(scaled)) - np.log(x).sum())

    assert found.log_likelihood == pytest.approx(height(found.lambda_), rel=1e-12)
    for step in (-0.01, 0.01):
        assert height(found.lambda_ + step) < found.log_likelihood
    for end in (found.lower, found.upper):
        if end is not None:
            assert found.log_likelihood - height(end) == pytest.approx(stats.chi2.ppf(0.9, 1) / 2, abs=1e-6)


def test_values_far_from_zero_have_a_large_power() -> None:
    """Far from 0 a power is all but an exponential: lambda over the level stays what it is nearer by."""
    at = {level: box_cox(level + SAMPLES["gamma"]).lambda_ / level for level in (3e3, 3e4, 3e5)}
    assert abs(at[3e3]) * 3e3 > 30
    assert at[3e4] == pytest.approx(at[3e3], rel=0.02)
    assert at[3e5] == pytest.approx(at[3e4], rel=0.002)


def test_a_heap_and_one_value_far_off() -> None:
    """However tight the heap, the best power and its interval are within what is looked at."""
    for gap in (1e-14, 1e-10, 1e-6):
        found = box_cox([1.0, 1 + gap, 1 + 2 * gap, 1 + 3 * gap, 1 + 4 * gap, 2.0])
        assert found.lambda_ == pytest.approx(-8.516, abs=1e-3)
        assert found.lower is not None
        assert found.upper is not None


def test_a_profile_without_a_top_is_refused() -> None:
    for slope in (-1.0, 1.0):
        with pytest.raises(DataError, match="no power"):
            _fitted(lambda lam, slope=slope: slope * lam, box_cox_forward, box_cox_backward, 0.95, 30.0)  # type: ignore[misc]


def test_the_interval_covers() -> None:
    rng = np.random.default_rng(6)
    hits = 0
    for row in rng.normal(5, 0.7, size=(300, 60)):
        found = box_cox(row**2)
        assert found.lower is not None
        assert found.upper is not None
        hits += found.lower <= 0.5 <= found.upper
    assert hits / 300 == pytest.approx(0.95, abs=0.04)


@pytest.mark.parametrize("lam", LAMBDAS)
def test_box_cox_keeps_order_and_comes_back(lam: float) -> None:
    x = np.geomspace(1e-3, 1e3, 200)
    y = box_cox_forward(x, lam)
    assert np.all(np.diff(y) > 0)
    # 1 + lambda y is x^lambda: where that is tiny beside 1 the digits are gone for good
    kept = x**lam > 1e-6
    assert box_cox_backward(y, lam)[kept] == pytest.approx(x[kept], rel=1e-6)
    assert box_cox_forward(np.array([1.0]), lam)[0] == 0.0


@pytest.mark.parametrize("lam", LAMBDAS)
def test_yeo_johnson_keeps_order_and_comes_back(lam: float) -> None:
    x = np.concatenate([-np.geomspace(20, 1e-3, 100), [0.0], np.geomspace(1e-3, 20, 100)])
    y = yeo_johnson_forward(x, lam)
    assert np.all(np.diff(y) > 0)
    assert yeo_johnson_backward(y, lam) == pytest.approx(x, rel=1e-6)
    assert y == pytest.approx(stats.yeojohnson(x, lam), rel=1e-9, abs=1e-9)


def test_lambda_zero_is_the_limit() -> None:
    x = np.linspace(0.1, 5, 50)
    assert box_cox_forward(x, 1e-10) == pytest.approx(box_cox_forward(x, 0.0), rel=1e-8)
    assert yeo_johnson_forward(-x, 2 - 1e-10) == pytest.approx(yeo_johnson_forward(-x, 2.0), rel=1e-8)


@pytest.mark.parametrize("fit", [box_cox, yeo_johnson])
def test_a_fit_comes_back_and_says_where_nothing_is(fit: Fit) -> None:
    found = fit(SAMPLES["gamma"])
    x = SAMPLES["gamma"]
    assert found.back(found.transform(x)) == pytest.approx(x, rel=1e-9)
    assert np.array_equal(np.argsort(found.transform(x)), np.argsort(x))


def test_outside_the_domain_is_nan() -> None:
    found = box_cox(SAMPLES["gamma"])
    assert np.isnan(found.transform([-1.0, 0.0])).all()
    assert np.isnan(found.back([-2 / found.lambda_]))


def test_box_cox_scales() -> None:
    """lambda does not depend on the unit; the log-likelihood moves by n log of the factor."""
    x = SAMPLES["lognormal"]
    plain, scaled = box_cox(x), box_cox(25.4 * x)
    assert scaled.lambda_ == pytest.approx(plain.lambda_, abs=1e-6)
    assert plain.log_likelihood - scaled.log_likelihood == pytest.approx(len(x) * np.log(25.4), rel=1e-9)


@pytest.mark.parametrize("x", [[1.0, 2.0, 0.0], [1.0, -2.0, 3.0]])
def test_box_cox_refuses_values_at_or_below_zero(x: list[float]) -> None:
    with pytest.raises(DataError, match="threshold"):
        box_cox(x)


@pytest.mark.parametrize("fit", [box_cox, yeo_johnson])
@pytest.mark.parametrize("x", [[1.0, 2.0], [3.0, 3.0, 3.0], [1.0, float("nan"), 2.0]])
def test_refusals(fit: Fit, x: list[float]) -> None:
    with pytest.raises(DataError):
        fit(x)


@pytest.mark.parametrize("fit", [box_cox, yeo_johnson])
def test_values_that_hardly_differ_beside_their_size(fit: Fit) -> None:
    with pytest.raises(DataError, match="differ too little"):
        fit(1e9 + np.arange(20) * 1e-6)
    assert fit(1e9 + np.arange(20.0) ** 2).confidence == 0.95
