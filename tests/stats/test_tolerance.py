"""Tolerance factors and distribution-free intervals."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate, optimize, stats

from sheetqc.stats import tolerance_factor
from sheetqc.stats.errors import DataError
from sheetqc.stats.tolerance import distribution_free_confidence, distribution_free_size, howe_factor


# Natrella (1963), Experimental Statistics, tables; Odeh & Owen (1980), from memory
@pytest.mark.parametrize(
    ("n", "coverage", "confidence", "sides", "printed", "within"),
    [
        (20, 0.95, 0.95, 1, 2.396, 5e-4),
        (50, 0.99, 0.95, 1, 2.863, 1e-3),
        (10, 0.90, 0.90, 1, 2.066, 3e-3),
        (20, 0.95, 0.95, 2, 2.760, 1e-3),
        (30, 0.99, 0.95, 2, 3.355, 6e-3),
        (2, 0.90, 0.95, 2, 31.092, 1e-3),
    ],
)
def test_printed_factors(n: int, coverage: float, confidence: float, sides: int, printed: float, within: float) -> None:
    assert tolerance_factor(n, coverage, confidence, sides) == pytest.approx(printed, rel=within)


@pytest.mark.parametrize(("n", "coverage", "confidence"), [(5, 0.9, 0.9), (30, 0.9973, 0.95), (125, 0.99, 0.99)])
def test_one_sided_is_a_noncentral_t(n: int, coverage: float, confidence: float) -> None:
    expected = stats.nct.ppf(confidence, n - 1, np.sqrt(n) * stats.norm.ppf(coverage)) / np.sqrt(n)
    assert tolerance_factor(n, coverage, confidence, 1) == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(("n", "coverage", "confidence"), [(3, 0.9, 0.9), (12, 0.9973, 0.95), (60, 0.95, 0.99)])
def test_two_sided_by_adaptive_integration(n: int, coverage: float, confidence: float) -> None:
    k = tolerance_factor(n, coverage, confidence)

    def holds(z: float) -> float:
        shift = z / np.sqrt(n)
        r = optimize.brentq(lambda r: stats.norm.cdf(shift + r) - stats.norm.cdf(shift - r) - coverage, 0, shift + 10)
        return float(2 * stats.norm.pdf(z) * stats.chi2.sf((n - 1) * (r / k) ** 2, n - 1))

    reached = integrate.quad(holds, 0, 9, epsabs=1e-11)[0]
    assert reached == pytest.approx(confidence, abs=1e-8)


@pytest.mark.parametrize("sides", [1, 2])
def test_the_promise_is_kept(sides: int) -> None:
    n, coverage, confidence, repetitions = 15, 0.95, 0.9, 40_000
    k = tolerance_factor(n, coverage, confidence, sides)
    x = np.random.default_rng(1).normal(size=(repetitions, n))
    mean, s = x.mean(axis=1), x.std(axis=1, ddof=1)
    held = stats.norm.cdf(mean + k * s) - (stats.norm.cdf(mean - k * s) if sides == 2 else 0)
    assert np.mean(held >= coverage) == pytest.approx(confidence, abs=0.005)


def test_howe_is_near_and_large_samples_end_at_the_normal_quantile() -> None:
    assert howe_factor(40, 0.95, 0.95) == pytest.approx(tolerance_factor(40, 0.95, 0.95), rel=0.002)
    assert tolerance_factor(10**6, 0.9, 0.95) == pytest.approx(stats.norm.ppf(0.95), rel=2e-3)


@pytest.mark.parametrize(
    ("n", "coverage", "confidence", "sides"),
    [(1, 0.9, 0.9, 2), (10, 0.0, 0.9, 2), (10, 1.0, 0.9, 1), (10, 0.9, 1.0, 2), (10, 0.9, 0.9, 3)],
)
def test_refusals(n: int, coverage: float, confidence: float, sides: int) -> None:
    with pytest.raises(DataError):
        tolerance_factor(n, coverage, confidence, sides)


@pytest.mark.parametrize(("rank", "sides"), [(1, 1), (2, 1), (1, 2), (3, 2)])
def test_distribution_free_by_simulation(rank: int, sides: int) -> None:
    n, coverage = 60, 0.9
    u = np.sort(np.random.default_rng(2).random((40_000, n)), axis=1)
    held = u[:, n - rank] - u[:, rank - 1] if sides == 2 else 1 - u[:, rank - 1]
    expected = np.mean(held >= coverage)
    assert distribution_free_confidence(n, coverage, rank, sides) == pytest.approx(expected, abs=0.008)


# Wilks (1941): 59 and 93 values for 95 % coverage with 95 % confidence, one- and two-sided; 299 and 473 for 99 %
@pytest.mark.parametrize(("coverage", "sides", "n"), [(0.95, 1, 59), (0.95, 2, 93), (0.99, 1, 299), (0.99, 2, 473)])
def test_sizes_of_wilks(coverage: float, sides: int, n: int) -> None:
    assert distribution_free_size(coverage, 0.95, sides) == n
    assert distribution_free_confidence(n, coverage, 1, sides) >= 0.95
    assert distribution_free_confidence(n - 1, coverage, 1, sides) < 0.95


@pytest.mark.parametrize(("n", "rank", "sides"), [(10, 0, 1), (10, 11, 1), (10, 6, 2)])
def test_no_such_rank(n: int, rank: int, sides: int) -> None:
    with pytest.raises(DataError):
        distribution_free_confidence(n, 0.9, rank, sides)


@pytest.mark.parametrize(("coverage", "confidence", "sides"), [(1.0, 0.95, 1), (0.9, 0.0, 2), (0.9, 0.95, 3)])
def test_sizes_that_nobody_can_reach(coverage: float, confidence: float, sides: int) -> None:
    with pytest.raises(DataError):
        distribution_free_size(coverage, confidence, sides)
