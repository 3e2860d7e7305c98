"""Numbers of values: each is the smallest that keeps its promise."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import (
    mean_precision_size,
    sigma_precision_size,
    success_run_size,
    two_mean_size,
    two_proportion_size,
)
from sheetqc.stats.errors import DataError
from sheetqc.stats.tolerance import distribution_free_size


@pytest.mark.parametrize(("sigma", "half", "confidence"), [(2.0, 0.5, 0.95), (1.0, 0.01, 0.9), (0.3, 5.0, 0.99)])
def test_mean_precision(sigma: float, half: float, confidence: float) -> None:
    n = mean_precision_size(sigma, half, confidence)
    z = stats.norm.ppf((1 + confidence) / 2)
    assert z * sigma / np.sqrt(n) <= half * (1 + 1e-9)
    assert n == 1 or z * sigma / np.sqrt(n - 1) > half


@pytest.mark.parametrize(("excess", "confidence", "sides"), [(0.1, 0.95, 2), (0.5, 0.9, 1), (3.0, 0.95, 2)])
def test_sigma_precision(excess: float, confidence: float, sides: int) -> None:
    n = sigma_precision_size(excess, confidence, sides)
    tail = (1 - confidence) / sides

    def limit(size: int) -> float:
        return float(np.sqrt((size - 1) / stats.chi2.ppf(tail, size - 1)))

    assert limit(n) <= 1 + excess
    assert n == 2 or limit(n - 1) > 1 + excess


@pytest.mark.parametrize("reliability", [0.9, 0.95, 0.99, 0.5])
@pytest.mark.parametrize("confidence", [0.9, 0.95, 0.5])
def test_success_run(reliability: float, confidence: float) -> None:
    n = success_run_size(reliability, confidence)
    assert 1 - reliability**n >= confidence - 1e-12
    assert n == 1 or 1 - reliability ** (n - 1) < confidence
    # the same question as for the smallest value to lie below a share of the process
    assert n == distribution_free_size(reliability, confidence)


@pytest.mark.parametrize(("difference", "power"), [(0.5, 0.8), (-1.0, 0.9), (2.0, 0.95), (0.1, 0.8)])
def test_two_means_have_the_power(difference: float, power: float) -> None:
    found = two_mean_size(difference, 1.0, 0.05, power)

    def reached(n: int) -> float:
        limit = stats.t.ppf(0.975, 2 * n - 2)
        return float(stats.nct.sf(limit, 2 * n - 2, abs(difference) * np.sqrt(n / 2)))

    assert reached(found.n) >= power - 1e-9
    assert reached(found.n - 1) < power
    assert found.n - 1 < found.exact <= found.n


def test_two_means_by_simulation() -> None:
    n = two_mean_size(0.8, 1.0, 0.05, 0.9).n
    rng = np.random.default_rng(3)
    p = stats.ttest_ind(rng.normal(0.8, 1, (4000, n)), rng.normal(0, 1, (4000, n)), axis=1).pvalue
    assert np.mean(p < 0.05) == pytest.approx(0.9, abs=0.015)


def test_a_huge_difference_needs_two_each() -> None:
    assert two_mean_size(50.0, 1.0).n == 2


def test_two_proportions_by_simulation() -> None:
    n = two_proportion_size(0.1, 0.2, 0.05, 0.8).n
    rng = np.random.default_rng(4)
    first, second = rng.binomial(n, 0.1, 6000) / n, rng.binomial(n, 0.2, 6000) / n
    mean = (first + second) / 2
    z = np.abs(first - second) / np.sqrt(2 * mean * (1 - mean) / n)
    assert np.mean(z > stats.norm.ppf(0.975)) == pytest.approx(0.8, abs=0.02)
    assert two_proportion_size(0.2, 0.1).exact == pytest.approx(two_proportion_size(0.1, 0.2).exact)


@pytest.mark.parametrize(
    "asked",
    [
        lambda: mean_precision_size(0.0, 1.0),
        lambda: mean_precision_size(1.0, -1.0),
        lambda: mean_precision_size(1.0, 1.0, 1.0),
        lambda: sigma_precision_size(0.0),
        lambda: sigma_precision_size(1e-9),
        lambda: success_run_size(1.0),
        lambda: success_run_size(0.9, 0.0),
        lambda: two_mean_size(0.0, 1.0),
        lambda: two_mean_size(float("nan"), 1.0),
        lambda: two_mean_size(1e-6, 1.0),
        lambda: two_proportion_size(0.1, 0.1),
        lambda: two_proportion_size(0.0, 0.1),
    ],
)
def test_what_no_number_answers(asked: Callable[[], object]) -> None:
    with pytest.raises(DataError):
        asked()
