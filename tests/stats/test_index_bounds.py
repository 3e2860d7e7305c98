"""Further limits of Ppk."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import kushler_hurley, pearn_lin
from sheetqc.stats.errors import DataError
from sheetqc.stats.indices import bissell, one_sided_index_bound


def test_kushler_hurley() -> None:
    found = kushler_hurley(1.33, 51, 0.95)
    assert found.lower == pytest.approx(1.33 * (1 - stats.norm.ppf(0.975) / 10))
    assert found.upper == pytest.approx(1.33 * (1 + stats.norm.ppf(0.975) / 10))
    # without the uncertainty of the mean it lies inside Bissell's limits
    wider = bissell(1.33, 50, 51, 0.95)
    assert wider.lower is not None
    assert found.lower is not None
    assert wider.lower < found.lower


@pytest.mark.parametrize("off_centre", [0.0, 0.3, 1.0])
def test_pearn_lin_is_exact(off_centre: float) -> None:
    """With a true index at the bound, so high an estimate comes up in 5 % of studies."""
    index, n = 1.2, 30
    true = pearn_lin(index, n, off_centre, 0.95)
    rng, repetitions = np.random.default_rng(1), 60_000
    half = 3 * true + off_centre
    mean = off_centre + rng.normal(size=repetitions) / np.sqrt(n)
    s = np.sqrt(rng.chisquare(n - 1, repetitions) / (n - 1))
    estimate = (half - np.abs(mean)) / (3 * s)
    assert np.mean(estimate > index) == pytest.approx(0.05, abs=0.0036)


def test_far_off_centre_it_is_the_one_sided_bound() -> None:
    for n in (10, 50):
        root, found = 3 * np.sqrt(n), pearn_lin(1.33, n, 3.0)
        assert stats.nct.cdf(root * 1.33, n - 1, root * found) == pytest.approx(0.95, abs=1e-10)
        # the inverse noncentral t stops its search at about 1e-8
        assert found == pytest.approx(one_sided_index_bound(1.33, n - 1, n, 0.95), rel=1e-7)


def test_the_side_does_not_matter_and_more_values_raise_it() -> None:
    assert pearn_lin(1.33, 40, -0.2) == pytest.approx(pearn_lin(1.33, 40, 0.2))
    bounds = [pearn_lin(1.33, n, 0.0) for n in (5, 20, 100, 1000)]
    assert bounds == sorted(bounds)
    assert bounds[-1] < 1.33


def test_an_estimate_near_zero_shows_nothing() -> None:
    assert pearn_lin(0.05, 5, 1.0) == 0.0


def test_a_low_confidence_is_answered_too() -> None:
    # with 1 per cent confidence the bound lies far above the estimate
    assert pearn_lin(1.0, 2, 1.0, 0.01) > 2.0


@pytest.mark.parametrize(("index", "n", "confidence"), [(0.0, 20, 0.95), (1.0, 1, 0.95), (1.0, 20, 1.0)])
def test_refusals(index: float, n: int, confidence: float) -> None:
    with pytest.raises(DataError):
        pearn_lin(index, n, 0.0, confidence)


@pytest.mark.parametrize(("n", "confidence"), [(1, 0.95), (20, 0.0)])
def test_refusals_of_kushler_hurley(n: int, confidence: float) -> None:
    with pytest.raises(DataError):
        kushler_hurley(1.0, n, confidence)
