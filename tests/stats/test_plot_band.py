"""Bands of the probability plot."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import fitted_normal_band, pointwise_band, simultaneous_band
from sheetqc.stats.errors import DataError
from sheetqc.stats.plot_band import PlotBand, staying_probability

BANDS = (pointwise_band, simultaneous_band, fitted_normal_band)


def share_within(band: PlotBand, ordered: np.ndarray[tuple[int, int], np.dtype[np.float64]]) -> float:
    return float(np.mean(np.all((ordered >= band.lower) & (ordered <= band.upper), axis=1)))


@pytest.mark.parametrize("n", [1, 7, 60])
def test_each_value_for_itself(n: int) -> None:
    band, i = pointwise_band(n, 0.9), np.arange(1, n + 1)
    assert stats.beta.cdf(band.lower, i, n + 1 - i) == pytest.approx(np.full(n, 0.05))
    assert stats.beta.sf(band.upper, i, n + 1 - i) == pytest.approx(np.full(n, 0.05))
    assert band.each == 0.9


@pytest.mark.parametrize("band", BANDS)
@pytest.mark.parametrize("n", [3, 25, 125])
def test_shape(band: object, n: int) -> None:
    found = band(n, 0.95)  # type: ignore[operator]
    assert found.lower.shape == found.upper.shape == (n,)
    assert np.all(np.diff(found.lower) > 0)
    assert np.all(found.lower < found.upper)
    # turned upside down it is the same band
    assert found.lower == pytest.approx(1 - found.upper[::-1], abs=1e-12)


@pytest.mark.parametrize("n", [2, 10, 50])
@pytest.mark.parametrize("confidence", [0.8, 0.95])
def test_all_values_at_once_by_simulation(n: int, confidence: float) -> None:
    drawn = np.sort(np.random.default_rng(3).random((20_000, n)), axis=1)
    error = 4 * np.sqrt(confidence * (1 - confidence) / 20_000)
    assert share_within(simultaneous_band(n, confidence), drawn) == pytest.approx(confidence, abs=error)


@pytest.mark.parametrize("n", [10, 50])
def test_all_values_about_a_fitted_line_by_fresh_simulation(n: int) -> None:
    drawn = np.sort(np.random.default_rng(4).normal(25, 0.3, (8000, n)), axis=1)
    z = (drawn - drawn.mean(axis=1, keepdims=True)) / drawn.std(axis=1, ddof=1, keepdims=True)
    # 4000 drawings behind the band and 8000 here: a standard error of 0.004
    assert share_within(fitted_normal_band(n), stats.norm.cdf(z)) == pytest.approx(0.95, abs=0.015)


def test_a_fit_draws_the_values_to_the_line() -> None:
    known, fitted = simultaneous_band(50), fitted_normal_band(50)
    assert 0.95 < fitted.each < known.each < 1 - 0.05 / 50
    assert np.all(fitted.upper - fitted.lower < known.upper - known.lower)


def test_one_value_is_all_values() -> None:
    assert simultaneous_band(1, 0.9).lower == pytest.approx(pointwise_band(1, 0.9).lower)


def test_staying_probability_of_two_values_by_hand() -> None:
    # the smaller one above a and the larger one below b: both between a and b
    assert staying_probability(np.array([0.2, 0.2]), np.array([0.7, 0.7])) == pytest.approx(0.25)
    # the smaller one below 1/2 and the larger one above it: one on each side
    assert staying_probability(np.array([0.0, 0.5]), np.array([0.5, 1.0])) == pytest.approx(0.5)
    assert staying_probability(np.array([0.0, 0.0]), np.array([1.0, 1.0])) == pytest.approx(1.0)
    assert staying_probability(np.array([0.6, 0.6]), np.array([0.5, 0.5])) == 0.0


@pytest.mark.parametrize("n", [5, 20])
def test_staying_probability_against_the_distribution_of_kolmogorov(n: int) -> None:
    i = np.arange(1, n + 1)
    for d in (0.2, 0.3):
        band = np.clip(i / n - d, 0, 1), np.clip((i - 1) / n + d, 0, 1)
        assert staying_probability(*band) == pytest.approx(stats.kstwo.cdf(d, n), rel=1e-10)


def test_many_values() -> None:
    found = simultaneous_band(2000, 0.95)
    assert staying_probability(found.lower, found.upper) == pytest.approx(0.95, abs=1e-8)


@pytest.mark.parametrize("band", BANDS)
@pytest.mark.parametrize(("n", "confidence"), [(0, 0.95), (10, 0.0), (10, 1.0)])
def test_bad_input(band: object, n: int, confidence: float) -> None:
    with pytest.raises(DataError):
        band(n, confidence)  # type: ignore[operator]


def test_a_fitted_line_goes_through_two_values() -> None:
    with pytest.raises(DataError, match="at least 3"):
        fitted_normal_band(2)
