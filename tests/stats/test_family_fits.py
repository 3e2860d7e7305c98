"""Maximum likelihood of every family: against a general-purpose optimiser, in batches, and at its own optimum."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import optimize

from sheetqc.stats.families import Family, family
from tests.stats.family_cases import MEMBERS, case_of, label

ALL = [f for f, _ in MEMBERS]

SAMPLES = 4


def _samples(f: Family, n: int, seed: int) -> list[np.ndarray]:
    """Values of the family itself at each test parameter, and of a gamma, so that the fit also meets what it is not."""
    rng = np.random.default_rng(seed)
    own = [f.sample(np.array(t), n, rng) for t in case_of(f).thetas]
    foreign = rng.gamma(6.0, 0.5, size=n)
    return [*own, foreign] if not f.refusal(foreign) else own


def best_by_search(f: Family, x: np.ndarray, near: np.ndarray, seed: int = 0) -> float:
    """The best log-likelihood a general simplex search finds from several starts.

    The density is checked against the general library elsewhere.
    """
    rng = np.random.default_rng(seed)
    allowed = case_of(f).allowed

    def loss(phi: np.ndarray) -> float:
        theta = f.external(phi)
        if not allowed(x, theta):
            return 1e300
        with np.errstate(all="ignore"):
            value = -float(f.log_likelihood(x, theta))
        return value if np.isfinite(value) else 1e300

    centre = f.internal(near)
    scale = np.where([name in f.positive for name in f.parameter_names], 0.5, 0.5 * x.std())
    starts = [centre + scale * rng.normal(size=len(centre)) for _ in range(SAMPLES)]
    options = {"xatol": 1e-8, "fatol": 1e-9, "maxiter": 4000, "maxfev": 8000}
    return max(-optimize.minimize(loss, s, method="Nelder-Mead", options=options).fun for s in starts)


@pytest.mark.parametrize("f", ALL, ids=label)
@pytest.mark.parametrize("n", [12, 50])
def test_likelihood_is_never_below_a_multi_start_search(f: Family, n: int) -> None:
    for i, x in enumerate(_samples(f, n, seed=100 + n)):
        theta = f.fit(x)
        own = float(f.log_likelihood(x, theta))
        assert own >= best_by_search(f, x, theta, seed=i) - 1e-6


@pytest.mark.parametrize("f", ALL, ids=label)
def test_a_batch_is_the_single_fits(f: Family) -> None:
    rng = np.random.default_rng(3)
    theta = np.array(case_of(f).thetas[-1])
    x = f.sample(np.broadcast_to(theta, (24, len(theta))), 40, rng)
    batch = f.fit(x.reshape(4, 6, 40))
    assert batch.shape == (4, 6, len(theta))
    singles = np.array([f.fit(row) for row in x])
    likelihood = f.log_likelihood(x, singles)
    np.testing.assert_allclose(f.log_likelihood(x, batch.reshape(24, -1)), likelihood, atol=1e-9)
    np.testing.assert_allclose(batch.reshape(24, -1), singles, rtol=1e-6)


@pytest.mark.parametrize("f", ALL, ids=label)
def test_the_likelihood_is_stationary_at_the_fit(f: Family) -> None:
    """The vertex of a parabola through three points of each coordinate lies at the fit, in standard errors."""
    for x in _samples(f, 60, seed=5):
        theta = f.fit(x)
        information = f.information(x, theta)
        for i in range(len(theta)):
            if not np.isfinite(information[i, i]) or theta[i] == 0:
                continue
            h = 0.02 / np.sqrt(abs(information[i, i]))
            step = h * np.eye(len(theta))[i]
            if not all(case_of(f).allowed(x, theta + s * step) for s in (-1, 1)):
                continue
            left, centre, right = (float(f.log_likelihood(x, theta + s * step)) for s in (-1, 0, 1))
            assert left <= centre + 1e-9
            assert right <= centre + 1e-9
            vertex = 0.5 * h * (right - left) / (2 * centre - left - right)
            assert abs(vertex) * np.sqrt(abs(information[i, i])) < 2e-3


@pytest.mark.parametrize("f", ALL, ids=label)
def test_fits_follow_a_change_of_unit(f: Family) -> None:
    """Millimetres or metres: the log-likelihood differs by n log of the factor and by nothing else."""
    if np.isfinite(getattr(f, "lower", np.inf)) or np.isfinite(getattr(f, "upper", np.inf)):
        pytest.skip("the given bounds would have to follow")
    rng = np.random.default_rng(11)
    x = f.sample(np.array(case_of(f).thetas[0]), 50, rng)
    for factor in (1e-6, 1e5):
        if f.refusal(factor * x):
            continue
        first = float(f.log_likelihood(x, f.fit(x)))
        second = float(f.log_likelihood(factor * x, f.fit(factor * x)))
        assert second + len(x) * np.log(factor) == pytest.approx(first, abs=1e-6)


@pytest.mark.parametrize("f", ALL, ids=label)
def test_two_values_and_an_outlier_are_survived(f: Family) -> None:
    for x in ([1.0, 2.0], [1.0, 1.1, 1.2, 1.15, 1.05, 40.0], [5.0, 5.0, 5.0, 5.0, 5.1], np.linspace(1, 2, 30)):
        values = np.asarray(x)
        if f.refusal(values):
            continue
        theta = f.fit(values)
        assert np.all(np.isfinite(theta))
        assert np.isfinite(f.log_likelihood(values, theta))


def test_information_of_the_normal_family_is_the_textbook_one() -> None:
    """n / sd^2 and 2 n / sd^2, no cross term (any text on likelihood)."""
    x = np.random.default_rng(1).normal(5, 2, 80)
    theta = family("normal").fit(x)
    expected = np.diag([80 / theta[1] ** 2, 160 / theta[1] ** 2])
    np.testing.assert_allclose(family("normal").information(x, theta), expected, rtol=1e-5, atol=1e-4)


def test_information_of_the_gamma_family_is_the_textbook_one() -> None:
    """n trigamma(shape), n / scale, n shape / scale^2 at the maximum-likelihood fit."""
    from scipy.special import polygamma

    x = np.random.default_rng(2).gamma(3, 2, 60)
    shape, scale = theta = family("gamma").fit(x)
    expected = 60 * np.array([[polygamma(1, shape), 1 / scale], [1 / scale, shape / scale**2]])
    np.testing.assert_allclose(family("gamma").information(x, theta), expected, rtol=1e-5)


def test_folded_normal_border_is_not_settled_by_the_fourth_moment() -> None:
    """At least one sample has a fourth moment above 3 and yet a better optimum inside than at mu = 0."""
    rng = np.random.default_rng(12)
    f = family("folded_normal")
    x = np.abs(rng.normal(size=(4000, 12)))
    x[:, 0] = np.abs(1.6 + 0.2 * rng.normal(size=4000)) * 2.2
    x[:, 1:] = np.abs(1.0 + 0.15 * rng.normal(size=(4000, 11)))
    fourth = np.mean(x**4, axis=-1) / np.mean(x**2, axis=-1) ** 2
    theta = f.fit(x)
    half = np.stack([np.zeros(4000), np.sqrt(np.mean(x**2, axis=-1))], axis=-1)
    gain = f.log_likelihood(x, theta) - f.log_likelihood(x, half)
    assert np.all(gain > -1e-9)
    assert np.any((fourth >= 3) & (gain > 0.5))
