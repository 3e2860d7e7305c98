"""Limits of sums and differences of mean squares."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.mean_squares import Term, combination, large_sample_limits


def test_one_mean_square_has_its_chi_square_limits() -> None:
    low, high = large_sample_limits([Term(coefficient=0.5, mean_square=3.0, degrees=12)], 0.9)
    assert low == pytest.approx(0.5 * 3.0 * 12 / stats.chi2.ppf(0.95, 12))
    assert high == pytest.approx(0.5 * 3.0 * 12 / stats.chi2.ppf(0.05, 12))


def test_limits_are_never_below_zero() -> None:
    terms = [Term(coefficient=1.0, mean_square=1.0, degrees=5), Term(coefficient=-1.0, mean_square=20.0, degrees=20)]
    assert combination(terms) == pytest.approx(-19.0)
    low, high = large_sample_limits(terms, 0.95)
    assert low == 0.0
    assert high == 0.0


@pytest.mark.parametrize(
    ("coefficients", "degrees"),
    [((1.0, 1.0), (4, 12)), ((1.0, -1.0), (6, 30)), ((1.0, 0.4, -0.6), (3, 10, 25)), ((1.0, -0.3, -0.3), (9, 6, 20))],
)
@pytest.mark.parametrize("ratio", [1.5, 10.0])
def test_limits_cover(coefficients: tuple[float, ...], degrees: tuple[int, ...], ratio: float) -> None:
    rng, repetitions = np.random.default_rng(5), 3000
    expected = np.array([ratio, *[1.0] * (len(degrees) - 1)])
    true = float(np.dot(coefficients, expected))
    below = above = 0
    for row in expected * rng.chisquare(degrees, (repetitions, len(degrees))) / np.array(degrees):
        terms = [
            Term(coefficient=c, mean_square=float(m), degrees=d)
            for c, m, d in zip(coefficients, row, degrees, strict=True)
        ]
        low, high = large_sample_limits(terms, 0.9)
        below += true < low
        above += true > high
    # each tail holds 5 %; the published simulations of the method find 3 to 6 % (from memory)
    assert 0.02 < below / repetitions < 0.065
    assert 0.02 < above / repetitions < 0.065


def test_a_vanishing_term_leaves_the_exact_limits() -> None:
    own = [Term(coefficient=1.0, mean_square=4.0, degrees=9)]
    nothing = Term(coefficient=-1.0, mean_square=0.0, degrees=30)
    assert large_sample_limits([*own, nothing], 0.95) == pytest.approx(large_sample_limits(own, 0.95))
