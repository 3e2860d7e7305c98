"""Johnson's system by moments: the member found has the moments asked for."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate, stats

from sheetqc.stats import johnson_by_moments
from sheetqc.stats.errors import DataError
from sheetqc.stats.johnson_moments import johnson_of_moments
from sheetqc.stats.johnson_system import Johnson

CASES = [
    # skewness, kurtosis, form
    (0.0, 1.9, "SB"),
    (0.0, 2.6, "SB"),
    (0.5, 2.4, "SB"),
    (-0.7, 3.1, "SB"),
    (0.83, 4.08, "SB"),
    (2.0, 7.0, "SB"),
    (0.0, 3.5, "SU"),
    (0.0, 9.0, "SU"),
    (0.8, 5.0, "SU"),
    (-1.5, 9.0, "SU"),
    (2.0, 20.0, "SU"),
    (1.0, 4.8296, "SL"),
]


def moments(curve: Johnson) -> tuple[float, float, float, float]:
    """Mean, standard deviation, skewness and kurtosis, by adaptive integration."""

    def over(power: int, about: float) -> float:
        def f(z: float) -> float:
            return (float(curve.back(z)) - about) ** power * float(stats.norm.pdf(z))

        return float(sum(integrate.quad(f, a, a + 5, epsabs=1e-13, limit=200)[0] for a in (-15, -10, -5, 0, 5, 10)))

    mean = over(1, 0.0)
    sd = over(2, mean) ** 0.5
    return mean, sd, over(3, mean) / sd**3, over(4, mean) / sd**4


@pytest.mark.parametrize(("skewness", "kurtosis", "form"), CASES)
def test_the_member_has_the_moments(skewness: float, kurtosis: float, form: str) -> None:
    found = johnson_of_moments(10.0, 0.2, skewness, kurtosis)
    assert found.form == form
    mean, sd, b1, b2 = moments(found)
    assert (mean, sd, b1) == pytest.approx((10.0, 0.2, skewness), rel=1e-6, abs=1e-6)
    # on the lognormal line the kurtosis follows from the skewness
    assert b2 == pytest.approx(kurtosis, rel=1e-3 if form == "SL" else 1e-6)


@pytest.mark.parametrize("form", ["SB", "SU"])
def test_a_known_member_is_found_again(form: str) -> None:
    made = Johnson(form=form, gamma=0.8, delta=1.7, xi=3.0, scale=5.0)  # type: ignore[arg-type]
    found = johnson_of_moments(*moments(made))
    assert (found.gamma, found.delta, found.xi, found.scale) == pytest.approx((0.8, 1.7, 3.0, 5.0), rel=1e-5)


def test_moments_of_the_library_lead_to_its_parameters() -> None:
    mean, variance, b1, excess = (float(m) for m in stats.johnsonsu.stats(-1.2, 2.1, 4.0, 0.6, moments="mvsk"))
    found = johnson_of_moments(mean, variance**0.5, b1, excess + 3)
    assert (found.form, found.gamma) == ("SU", pytest.approx(-1.2, rel=1e-6))
    assert (found.delta, found.xi, found.scale) == pytest.approx((2.1, 4.0, 0.6), rel=1e-6)


def test_values_are_mirrored_and_scaled() -> None:
    x = np.random.default_rng(5).weibull(1.6, 200)
    plain, turned, scaled = johnson_by_moments(x), johnson_by_moments(-x), johnson_by_moments(25.4 * x + 100)
    p = [-2.0, 0.0, 1.5]
    assert turned.back([2.0, 0.0, -1.5]) == pytest.approx(-plain.back(p), rel=1e-6)
    assert scaled.back(p) == pytest.approx(100 + 25.4 * plain.back(p), rel=1e-6)
    assert (plain.ratio, plain.quantiles) == (None, ())


@pytest.mark.parametrize("form_of", [stats.expon, stats.norm, stats.uniform, stats.t(5)])
def test_every_sample_has_a_member_with_its_moments(form_of: stats.rv_continuous) -> None:
    rng = np.random.default_rng(6)
    for n in (20, 200):
        for _ in range(4):
            x = form_of.rvs(size=n, random_state=rng)
            if abs(stats.skew(x)) < 1e-3:
                continue
            found = johnson_by_moments(x)
            got = moments(found)
            assert got[:3] == pytest.approx((x.mean(), x.std(), stats.skew(x)), rel=1e-5, abs=1e-5)
            assert got[3] == pytest.approx(stats.kurtosis(x) + 3, rel=1.1e-3)


@pytest.mark.parametrize(
    ("sd", "skewness", "kurtosis"),
    [(0.0, 0.0, 3.0), (1.0, 1.0, 2.0), (1.0, 1.0, 1.5), (1.0, -1.0, 4.8296), (1.0, 0.0, 3.0)],
)
def test_moments_without_a_member(sd: float, skewness: float, kurtosis: float) -> None:
    with pytest.raises(DataError):
        johnson_of_moments(0.0, sd, skewness, kurtosis)


def test_too_few_values() -> None:
    with pytest.raises(DataError):
        johnson_by_moments([1.0, 2.0, 4.0, 3.0])
