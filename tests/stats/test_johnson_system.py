"""Johnson's system through four quantiles."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats import johnson
from sheetqc.stats.errors import DataError
from sheetqc.stats.johnson_system import Johnson

RNG = np.random.default_rng(1)
SAMPLES = {
    "SB": RNG.beta(1.3, 1.6, 400),
    "SU": RNG.standard_t(3, 400),
}


def ideal(curve: Johnson, n: int = 4001) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    """Values that stand exactly at the probabilities of the rule for quantiles."""
    return np.asarray(curve.back(stats.norm.ppf((np.arange(1, n + 1) - 0.5) / n)))


@pytest.mark.parametrize(
    ("form", "gamma", "delta"), [("SB", 0.5, 1.2), ("SB", -1.0, 0.8), ("SU", 0.0, 1.5), ("SU", 1.2, 2.0)]
)
def test_a_known_member_is_found_again(form: str, gamma: float, delta: float) -> None:
    made = Johnson(form=form, gamma=gamma, delta=delta, xi=3.0, scale=5.0)  # type: ignore[arg-type]
    found = johnson(ideal(made))
    assert found.form == form
    # a straight line between neighbouring order statistics stands for the curve between them
    got = (found.gamma, found.delta, found.xi, found.scale)
    assert got == pytest.approx((gamma, delta, 3.0, 5.0), rel=2e-3, abs=2e-3)


def test_the_lognormal_form_is_found_again() -> None:
    made = Johnson(form="SL", gamma=-1.0, delta=2.0, xi=3.0, scale=1.0)
    found = johnson(ideal(made))
    assert (found.form, found.scale) == ("SL", 1.0)
    assert (found.gamma, found.delta, found.xi) == pytest.approx((-1.0, 2.0, 3.0), rel=5e-3)


@pytest.mark.parametrize("name", SAMPLES)
@pytest.mark.parametrize("z", [0.4, 0.524, 0.6])
def test_the_four_quantiles_are_carried_to_their_scores(name: str, z: float) -> None:
    found = johnson(SAMPLES[name], z)
    assert found.form == name
    assert found.ratio is not None
    assert (found.ratio < 1) == (name == "SB")
    assert found.transform(found.quantiles) == pytest.approx([-3 * z, -z, z, 3 * z], rel=1e-8)


@pytest.mark.parametrize("name", SAMPLES)
def test_order_is_kept_and_scores_come_back(name: str) -> None:
    found = johnson(SAMPLES[name])
    scores = np.linspace(-4, 4, 101)
    values = found.back(scores)
    assert np.all(np.diff(values) > 0)
    assert found.transform(values) == pytest.approx(scores, rel=1e-6, abs=1e-6)


def test_transformed_values_look_normal() -> None:
    for x in SAMPLES.values():
        score = johnson(x).transform(x)
        assert stats.shapiro(score[np.isfinite(score)]).pvalue > 0.001


def test_outside_the_bounds_is_nan() -> None:
    found = johnson(SAMPLES["SB"])
    assert np.isnan(found.transform([found.xi - 1, found.xi + found.scale + 1])).all()


def test_values_are_mirrored_and_scaled() -> None:
    x = SAMPLES["SB"]
    plain, turned, scaled = johnson(x), johnson(-x), johnson(25.4 * x + 100)
    scores = np.array([-2.0, 0.3, 2.5])
    assert turned.back(-scores) == pytest.approx(-plain.back(scores), rel=1e-7)
    assert scaled.back(scores) == pytest.approx(100 + 25.4 * plain.back(scores), rel=1e-7)


def test_a_left_leaning_lognormal_is_refused() -> None:
    made = Johnson(form="SL", gamma=-1.0, delta=2.0, xi=3.0, scale=1.0)
    with pytest.raises(DataError, match="left"):
        johnson(-ideal(made))


@pytest.mark.parametrize(
    ("x", "z", "message"),
    [
        (list(range(9)), 0.524, "10"),
        ([1.0] * 30 + [2.0, 3.0], 0.524, "coincide"),
        (list(range(20)), 1.2, "beyond"),
        ([2.0] * 20, 0.524, "equal"),
    ],
)
def test_refusals(x: list[float], z: float, message: str) -> None:
    with pytest.raises(DataError, match=message):
        johnson(x, z)
