"""The record of a fit, and what is refused at the door."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from sheetqc.stats import DataError, fit
from sheetqc.stats.families import FAMILIES, family


def test_a_fit_answers_for_its_family() -> None:
    x = [4.1, 4.5, 3.9, 4.4, 4.2, 4.8, 4.0]
    r = fit(x, "normal")
    assert r.family == "normal"
    assert r.n == 7
    assert r.parameters["mean"] == pytest.approx(np.mean(x))
    assert r.parameters["sd"] == pytest.approx(np.std(x))
    assert r.log_likelihood == pytest.approx(float(family("normal").log_likelihood(x, r.theta)))
    assert r.aicc == pytest.approx(-2 * r.log_likelihood + 4 + 12 / 4)
    assert float(r.cdf(r.quantile(0.01))) == pytest.approx(0.01)
    assert float(r.survival(r.upper_quantile(1e-9))) == pytest.approx(1e-9)
    assert float(r.density(r.quantile(0.5))) == pytest.approx(1 / (r.parameters["sd"] * np.sqrt(2 * np.pi)))
    assert r.standard_errors["mean"] == pytest.approx(np.std(x) / np.sqrt(7), rel=1e-5)


def test_a_fit_is_frozen_and_keeps_its_values() -> None:
    x = np.array([1.0, 2.0, 3.5])
    r = fit(x, "weibull")
    with pytest.raises(dataclasses.FrozenInstanceError):
        r.family = "normal"  # type: ignore[misc]
    with pytest.raises(TypeError):
        r.parameters["shape"] = 1.0  # type: ignore[index]
    with pytest.raises(ValueError, match="read-only"):
        r.theta[0] = 1.0
    x[0] = 99.0
    assert r.x[0] == 1.0


@pytest.mark.parametrize(
    ("x", "message"),
    [
        ([1.0], "at least 2 values"),
        ([], "at least 2 values"),
        ([1.0, np.nan, 2.0], "missing or infinite"),
        ([1.0, np.inf], "missing or infinite"),
        ([3.0, 3.0, 3.0], "all values are equal"),
        (["a", "b"], "not all numbers"),
        ([[1.0, 2.0], [3.0, 4.0]], "one row"),
    ],
)
def test_values_that_carry_no_fit_are_refused(x: list[object], message: str) -> None:
    for f in FAMILIES:
        with pytest.raises(DataError, match=message):
            fit(x, f.name)  # type: ignore[arg-type]
    assert issubclass(DataError, ValueError)


@pytest.mark.parametrize("name", ["weibull", "gamma", "lognormal", "loglogistic", "rayleigh"])
def test_families_above_zero_refuse_zero(name: str) -> None:
    with pytest.raises(DataError, match="needs values above 0"):
        fit([0.0, 1.0, 2.0], name)


@pytest.mark.parametrize("name", ["exponential", "folded_normal"])
def test_families_from_zero_take_zero_and_refuse_below(name: str) -> None:
    assert np.isfinite(fit([0.0, 1.0, 2.0], name).log_likelihood)
    with pytest.raises(DataError, match="needs values of at least 0"):
        fit([-0.1, 1.0, 2.0], name)


def test_an_unknown_family_is_named() -> None:
    with pytest.raises(DataError, match="no family is called 'cauchy'"):
        fit([1.0, 2.0], "cauchy")


def test_aicc_is_infinite_when_there_are_too_few_values() -> None:
    assert fit([1.0, 2.0, 4.0], "normal").aicc == np.inf


def test_natural_bounds_reach_the_families_that_use_them() -> None:
    x = [6.1, 7.4, 5.9, 6.6, 8.1, 6.9, 7.7]
    assert fit(x, "beta", natural_lower=5.0, natural_upper=9.0).model.support([1.0, 1.0]) == (5.0, 9.0)
    with pytest.raises(DataError, match="needs values between 0 and 1"):
        fit(x, "beta")
    plain, cut = fit(x, "truncated_normal"), fit(x, "truncated_normal", natural_lower=5.8)
    assert plain.parameters["mean"] == pytest.approx(np.mean(x))
    assert cut.parameters["mean"] < plain.parameters["mean"]
    assert len(fit(x, "johnson_sb", natural_lower=5.0, natural_upper=9.0).theta) == 2
    assert fit(x, "weibull", natural_lower=0.0).log_likelihood == fit(x, "weibull").log_likelihood
    with pytest.raises(DataError, match="needs values between 6 and 9"):
        fit(x, "truncated_normal", natural_lower=6.0, natural_upper=9.0)


def test_a_border_fit_has_no_standard_error_of_that_parameter() -> None:
    x = np.abs(np.random.default_rng(1).standard_t(4, 60))
    r = fit(x, "folded_normal")
    assert r.parameters["mu"] == 0
    assert all(e is None or e > 0 for e in r.standard_errors.values())
