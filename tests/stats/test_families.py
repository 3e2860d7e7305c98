"""Every family of the register: tails against exact arithmetic, shapes, support, sampling."""

from __future__ import annotations

import itertools

import mpmath as mp
import numpy as np
import pytest

import sheetqc.stats
from sheetqc.stats import families
from sheetqc.stats.families import FAMILIES, Family
from tests.stats.family_cases import CASES, MEMBERS, case_of, label

TAILS = (1e-15, 1e-12, 1e-9, 1e-6, 1e-3, 0.00135, 0.02, 0.2, 0.5)
ALL = [f for f, _ in MEMBERS]
PAIRS = [pytest.param(f, t, id=f"{label(f)}-{i}") for f, case in MEMBERS for i, t in enumerate(case.thetas)]


def test_every_family_has_a_case_and_words() -> None:
    assert set(CASES) == {f.name for f in FAMILIES}
    for f in FAMILIES:
        assert f.use.endswith(".")
        assert f.title
        assert set(f.positive) <= set(f.parameter_names)


def test_the_package_is_callable_and_lists_its_names() -> None:
    assert sheetqc.stats.families() == families.names() == tuple(f.name for f in FAMILIES)
    assert families.family("weibull").name == "weibull"
    with pytest.raises(KeyError, match="no family is called 'cauchy'"):
        families.family("cauchy")


def _exact(function: object, x: float, theta: tuple[float, ...]) -> mp.mpf:
    assert callable(function)
    with mp.workdps(60):
        return function(mp.mpf(x), *(mp.mpf(t) for t in theta))


def _relative(got: float, exact: mp.mpf) -> float:
    return abs(float(mp.mpf(got) / exact - 1))


def _allowance(f: Family, theta: tuple[float, ...], x: float, probability: mp.mpf) -> float:
    """1e-12 relative, and what rounding x or an end of the support to a double does by itself."""
    return 1e-12 + 4e-16 * abs(x) * float(f.density(x, theta) / probability)


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_tails_agree_with_exact_arithmetic(f: Family, theta: tuple[float, ...]) -> None:
    """1e-12 relative down to probabilities of 1e-15, in both tails and their logarithms."""
    case = case_of(f)
    for p in TAILS:
        for x in (float(f.quantile(p, theta)), float(f.upper_quantile(p, theta))):
            for exact, plain, logarithm in (
                (_exact(case.cdf, x, theta), f.cdf, f.log_cdf),
                (_exact(case.survival, x, theta), f.survival, f.log_survival),
            ):
                allowed = _allowance(f, theta, x, exact)
                assert _relative(float(plain(x, theta)), exact) < allowed
                # log(exact) from its distance to 1 where it is close to 1
                expected = float(mp.log(exact))
                assert abs(float(logarithm(x, theta)) - expected) < allowed * max(1.0, -expected)


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_quantiles_give_back_their_probability(f: Family, theta: tuple[float, ...]) -> None:
    """1e-12 relative in the probability, beyond what rounding x to a double does by itself."""
    case = case_of(f)
    for p in TAILS:
        for x, function in (
            (float(f.quantile(p, theta)), case.cdf),
            (float(f.upper_quantile(p, theta)), case.survival),
        ):
            assert _relative(p, _exact(function, x, theta)) < _allowance(f, theta, x, mp.mpf(p))


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_density_is_the_slope_of_the_distribution(f: Family, theta: tuple[float, ...]) -> None:
    case = case_of(f)
    x = f.quantile([1e-9, 0.01, 0.3, 0.5, 0.8, 0.999], theta)
    with mp.workdps(60):
        parameters = [mp.mpf(t) for t in theta]
        for value, got in zip(x, f.density(x, theta), strict=True):
            at = mp.mpf(float(value))
            h = (abs(at) or 1) * mp.mpf("1e-20")
            slope = (case.cdf(at + h, *parameters) - case.cdf(at - h, *parameters)) / (2 * h)
            assert _relative(float(got), slope) < 1e-11


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_density_agrees_with_the_general_library(f: Family, theta: tuple[float, ...]) -> None:
    x = f.quantile(np.linspace(0.01, 0.99, 25), theta)
    general = case_of(f).general(*theta)
    np.testing.assert_allclose(f.log_density(x, theta), general.logpdf(x), rtol=1e-9, atol=1e-9)  # type: ignore[attr-defined]


@pytest.mark.parametrize("f", ALL, ids=label)
def test_shapes_broadcast(f: Family) -> None:
    theta = np.array(case_of(f).thetas[:2])
    x = f.quantile([0.1, 0.5, 0.9], theta)
    assert x.shape == (2, 3)
    assert f.cdf(x, theta).shape == (2, 3)
    assert f.log_likelihood(x, theta).shape == (2,)
    assert np.ndim(f.cdf(1.5, theta[0])) == 0
    np.testing.assert_allclose(f.cdf(x, theta), np.tile([0.1, 0.5, 0.9], (2, 1)), rtol=1e-12)
    np.testing.assert_allclose(f.cdf(x, theta)[1], f.cdf(x[1], theta[1]), rtol=1e-14)
    with pytest.raises(ValueError, match="has the parameters"):
        f.cdf(x, theta[:, :-1] if theta.shape[1] > 1 else np.ones((2, 3)))


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_outside_the_support(f: Family, theta: tuple[float, ...]) -> None:
    low, high = (float(v) for v in f.support(theta))
    for end, cdf in ((low, 0.0), (high, 1.0)):
        if np.isfinite(end):
            beyond = end - 1.0 if cdf == 0 else end + 1.0
            assert f.cdf(beyond, theta) == cdf
            assert f.survival(beyond, theta) == 1 - cdf
            assert f.density(beyond, theta) == 0
            assert f.log_density(beyond, theta) == -np.inf
    assert float(f.quantile(0.0, theta)) == low
    assert float(f.upper_quantile(0.0, theta)) == high
    assert float(f.quantile(1.0, theta)) == high
    assert float(f.upper_quantile(1.0, theta)) == low


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_logarithms_stay_finite_far_out(f: Family, theta: tuple[float, ...]) -> None:
    """Where the probabilities underflow their logarithms still order the values."""
    low, high = float(f.quantile(1e-15, theta)), float(f.upper_quantile(1e-15, theta))
    bottom, top = (float(v) for v in f.support(theta))
    width = high - low
    if top == np.inf:
        far = f.log_survival([high, high + 5 * width, high + 18 * width], theta)
        assert np.all(np.isfinite(far))
        assert np.all(np.diff(far) < 0)
    near_bottom = [low, low - 5 * width] if bottom == -np.inf else [low, bottom + 1e-3 * (low - bottom)]
    far = f.log_cdf(near_bottom, theta)
    assert np.all(np.diff(far) < 0)


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_coordinates_go_there_and_back(f: Family, theta: tuple[float, ...]) -> None:
    np.testing.assert_allclose(f.external(f.internal(theta)), theta, rtol=1e-14)
    assert np.all(np.isfinite(f.internal(theta)))


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_interval_probabilities(f: Family, theta: tuple[float, ...]) -> None:
    """Also of intervals so narrow or far out that a difference of probabilities would lose its digits."""
    case = case_of(f)
    edges = f.quantile([1e-9, 1e-8, 0.3, 0.300001, 0.7], theta)
    edges = np.append(edges, f.upper_quantile([1e-8, 1e-9], theta))
    for low, high in itertools.pairwise(edges):
        exact = _exact(case.cdf, float(high), theta) - _exact(case.cdf, float(low), theta)
        got = float(f.log_interval(low, high, theta))
        assert abs(got - float(mp.log(exact))) < 1e-8
    assert float(f.log_interval(-np.inf, edges[2], theta)) == pytest.approx(float(f.log_cdf(edges[2], theta)))
    assert float(f.log_interval(edges[2], np.inf, theta)) == pytest.approx(float(f.log_survival(edges[2], theta)))


@pytest.mark.parametrize(("f", "theta"), PAIRS)
def test_samples_follow_the_family(f: Family, theta: tuple[float, ...]) -> None:
    """Shares below five quantiles, each within 5 standard errors."""
    rng = np.random.default_rng(7)
    x = f.sample(np.broadcast_to(theta, (40, len(theta))), 500, rng)
    assert x.shape == (40, 500)
    for p in (0.01, 0.2, 0.5, 0.8, 0.99):
        share = np.mean(x <= f.quantile(p, theta))
        assert abs(share - p) < 5 * np.sqrt(p * (1 - p) / x.size)


def test_a_folded_normal_far_from_zero_is_normal() -> None:
    p = np.array([1e-12, 0.00135, 0.5, 0.99865])
    theta = np.array([25.0, 0.004])
    folded, normal = families.family("folded_normal"), families.family("normal")
    assert folded.quantile(p, theta) == pytest.approx(normal.quantile(p, theta), rel=1e-14)
    assert folded.upper_quantile(p, theta) == pytest.approx(normal.upper_quantile(p, theta), rel=1e-14)
