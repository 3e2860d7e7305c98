"""Crossed gauge studies: components, limits that cover, ranges, and studies that are not whole."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import stats

from sheetqc.stats import gauge_study, one_way_anova
from sheetqc.stats.constants import control_chart_constants, range_constant
from sheetqc.stats.errors import DataError
from sheetqc.stats.gauge import GaugeStudy
from sheetqc.stats.gauge_anova import gauge_table
from sheetqc.stats.gauge_components import component_coefficients, mean_square_terms, share_limits
from sheetqc.stats.mean_squares import large_sample_limits

TRUE = {"part": 1.0, "appraiser": 0.25, "interaction": 0.09, "repeatability": 0.16}
TRUE |= {"reproducibility": 0.34, "gauge": 0.50, "total": 1.50}


def drawn(rng: np.random.Generator, p: int = 10, o: int = 4, n: int = 3, **variances: float) -> NDArray[np.float64]:
    """Readings of shape (parts, appraisers, trials)."""
    v = TRUE | variances
    sd = {name: np.sqrt(value) for name, value in v.items()}
    return np.asarray(
        20
        + sd["part"] * rng.normal(size=(p, 1, 1))
        + sd["appraiser"] * rng.normal(size=(1, o, 1))
        + sd["interaction"] * rng.normal(size=(p, o, 1))
        + sd["repeatability"] * rng.normal(size=(p, o, n))
    )


def study(readings: NDArray[np.float64], **options: Any) -> GaugeStudy:
    """The study of readings of shape (parts, appraisers, trials)."""
    p, o, _ = (axis.ravel() for axis in np.indices(readings.shape))
    return gauge_study(readings.ravel(), list(p), [f"A{i}" for i in o], **options)


def test_components_add_up() -> None:
    found = study(drawn(np.random.default_rng(1)), interaction="kept", tolerance=12.0)
    assert found.appraiser is not None
    assert found.interaction is not None
    assert found.reproducibility is not None
    assert found.reproducibility.variance == pytest.approx(found.appraiser.variance + found.interaction.variance)
    assert found.gauge.variance == pytest.approx(found.repeatability.variance + found.reproducibility.variance)
    assert found.total.variance == pytest.approx(found.gauge.variance + found.part.variance)
    assert found.gauge.share_of_variance + found.part.share_of_variance == pytest.approx(1.0)
    assert found.gauge.share_of_spread == pytest.approx(found.gauge.sigma / found.total.sigma)
    assert found.gauge.share_of_tolerance == pytest.approx(6 * found.gauge.sigma / 12.0)
    assert found.distinct_ratio == pytest.approx(1.41 * found.part.sigma / found.gauge.sigma)
    assert found.distinct_categories == int(1.41 * found.part.sigma / found.gauge.sigma)


def test_squares_add_up_to_the_total_and_do_not_suffer_from_a_large_level() -> None:
    readings = drawn(np.random.default_rng(2))
    for shift in (0.0, 1e6):
        table = gauge_table(readings + shift, 2.0)
        assert table.appraisers is not None
        assert table.interaction is not None
        rows = (table.parts, table.appraisers, table.interaction, table.repeatability)
        assert sum(row.sum_of_squares for row in rows) == pytest.approx(((readings - readings.mean()) ** 2).sum())
        assert sum(row.degrees for row in rows) == readings.size - 1


def test_estimates_are_right_on_average() -> None:
    rng = np.random.default_rng(3)
    sums = dict.fromkeys(TRUE, 0.0)
    for _ in range(1500):
        readings = drawn(rng)
        table = gauge_table(readings, 2.0)
        for name, row in component_coefficients(table, readings.shape).items():
            sums[name] += sum(t.coefficient * t.mean_square for t in mean_square_terms(table, row)) / 1500
    assert sums == pytest.approx(TRUE, rel=0.05)


@pytest.mark.parametrize("appraiser", [0.25, 0.0])
def test_the_limits_cover_as_often_as_they_say(appraiser: float) -> None:
    rng, repetitions = np.random.default_rng(4), 1500
    true = TRUE | {"appraiser": appraiser, "reproducibility": appraiser + 0.09}
    true |= {"gauge": appraiser + 0.25, "total": appraiser + 1.25}
    covered = dict.fromkeys(true, 0)
    for _ in range(repetitions):
        readings = drawn(rng, appraiser=appraiser)
        table = gauge_table(readings, 2.0)
        for name, row in component_coefficients(table, readings.shape).items():
            low, high = large_sample_limits(mean_square_terms(table, row), 0.9)
            covered[name] += low <= true[name] <= high
    for name, count in covered.items():
        # three standard errors below; the limits may be a little wide, and at a component of 0 they cover one-sidedly
        assert count / repetitions > 0.9 - 3 * np.sqrt(0.09 / repetitions), name
        if true[name] > 0:
            assert count / repetitions < 0.95, name


def test_the_limits_of_repeatability_are_chi_square() -> None:
    found = study(drawn(np.random.default_rng(5)), interaction="kept", confidence=0.9)
    degrees = 10 * 4 * 2
    assert found.repeatability.lower == pytest.approx(
        found.repeatability.sigma * np.sqrt(degrees / stats.chi2.ppf(0.95, degrees))
    )
    assert found.repeatability.upper == pytest.approx(
        found.repeatability.sigma * np.sqrt(degrees / stats.chi2.ppf(0.05, degrees))
    )


def test_the_limits_of_the_share_cover() -> None:
    rng, repetitions, true = np.random.default_rng(6), 400, np.sqrt(0.5 / 1.5)
    hits = 0
    for _ in range(repetitions):
        readings = drawn(rng)
        table = gauge_table(readings, 2.0)
        low, high = share_limits(table, component_coefficients(table, readings.shape), 0.9, 1)
        hits += low <= true <= high
    assert hits / repetitions == pytest.approx(0.9, abs=0.05)


def test_the_interaction_is_pooled_by_rule() -> None:
    readings = drawn(np.random.default_rng(7), interaction=0.0)
    free, pooled, kept = study(readings), study(readings, interaction="pooled"), study(readings, interaction="kept")
    assert free.table is not None
    assert free.table.interaction is not None
    assert free.table.interaction.p_value is not None
    assert free.pooled is (free.table.interaction.p_value > 0.25)
    assert (pooled.pooled, kept.pooled) == (True, False)
    assert pooled.interaction is None
    assert kept.interaction is not None
    # pooled: repeatability from the interaction's squares and degrees as well
    assert kept.table is not None
    assert kept.table.interaction is not None
    both = kept.table.interaction.sum_of_squares + kept.table.repeatability.sum_of_squares
    assert pooled.repeatability.variance == pytest.approx(both / (27 + 80))


def test_one_appraiser_is_an_analysis_of_parts() -> None:
    readings = drawn(np.random.default_rng(8), o=1)
    found, plain = study(readings), one_way_anova(list(readings[:, 0, :]))
    assert found.repeatability.variance == pytest.approx(plain.ms_within)
    assert found.part.variance == pytest.approx((plain.ms_between - plain.ms_within) / 3)
    assert (found.reproducibility, found.appraiser, found.interaction) == (None, None, None)
    assert found.gauge == found.repeatability
    assert not found.pooled


def test_one_trial_pools_what_it_cannot_tell_apart() -> None:
    readings = drawn(np.random.default_rng(9), n=1)
    found = study(readings, interaction="kept")
    rest = readings[:, :, 0] - readings.mean(axis=(1, 2))[:, None] - readings.mean(axis=(0, 2)) + readings.mean()
    assert found.pooled
    assert found.repeatability.variance == pytest.approx((rest**2).sum() / (9 * 3))


def test_a_component_below_zero_is_given_as_zero_and_named() -> None:
    # the appraisers' means nearly agree, while their readings of a part differ
    readings = np.array([[[1.0, 1.25], [1.2, 1.0]], [[2.0, 2.4], [2.4, 2.0]], [[3.1, 3.0], [3.0, 3.1]]])
    found = study(readings, interaction="pooled")
    assert found.negative == ("appraiser",)
    assert found.appraiser is not None
    assert (found.appraiser.variance, found.appraiser.lower) == (0.0, 0.0)
    assert found.appraiser.upper is not None
    assert found.appraiser.upper > 0


def test_readings_that_repeat_exactly() -> None:
    readings = np.repeat(drawn(np.random.default_rng(10), n=1, appraiser=0.0, interaction=0.0), 3, axis=2)
    exact = np.repeat(readings[:, :1, :], 4, axis=1)
    found = study(exact)
    assert (found.gauge.sigma, found.distinct_ratio, found.distinct_categories) == (0.0, None, None)
    assert found.part.share_of_variance == 1.0


def test_the_order_of_rows_does_not_matter_and_the_unit_scales() -> None:
    rng = np.random.default_rng(11)
    readings = drawn(rng)
    p, o, _ = (axis.ravel() for axis in np.indices(readings.shape))
    order = rng.permutation(readings.size)
    plain = gauge_study(readings.ravel(), list(p), list(o))
    mixed = gauge_study(25.4 * readings.ravel()[order], list(p[order]), list(o[order]))
    assert mixed.gauge.sigma == pytest.approx(25.4 * plain.gauge.sigma)
    assert mixed.gauge.share_of_spread == pytest.approx(plain.gauge.share_of_spread)
    assert mixed.gauge_share_limits == pytest.approx(plain.gauge_share_limits)


def test_ranges_give_the_variances_on_average() -> None:
    rng = np.random.default_rng(12)
    many = [study(drawn(rng, interaction=0.0), method="range") for _ in range(1500)]
    assert np.mean([s.repeatability.variance for s in many]) == pytest.approx(0.16, rel=0.02)
    # cut off at 0 now and then, and the means of parts carry a little of the gauge
    assert np.mean([s.appraiser.variance for s in many if s.appraiser]) == pytest.approx(0.25, rel=0.08)
    assert np.mean([s.part.variance for s in many]) == pytest.approx(1.0 + 0.16 / 12, rel=0.06)
    assert many[0].table is None
    assert many[0].gauge.lower is None


def test_d2_star_runs_to_d2() -> None:
    assert range_constant(10**9, 5) == pytest.approx(control_chart_constants(5).d2, rel=1e-9)
    # Duncan's table, from memory: 1.41421 for one range of two, 1.91155 for one of three
    assert range_constant(1, 2) == pytest.approx(2**0.5, rel=1e-9)
    assert range_constant(1, 3) == pytest.approx(1.91155, abs=1e-5)
    with pytest.raises(DataError):
        range_constant(0, 2)


def test_a_hole_in_the_table_is_named() -> None:
    readings = drawn(np.random.default_rng(13), p=3, o=2, n=2)
    p, o, _ = (axis.ravel() for axis in np.indices(readings.shape))
    with pytest.raises(DataError, match="part 2, appraiser 1: 1 readings where the others have 2"):
        gauge_study(readings.ravel()[:-1], list(p[:-1]), list(o[:-1]))


@pytest.mark.parametrize(
    ("values", "parts", "appraisers", "message"),
    [
        ([1.0, 2.0, 3.0, 4.0], [1, 1, 1, 1], [1, 1, 2, 2], "two parts"),
        ([1.0, 2.0, 3.0, 4.0], [1, 2, 3, 4], [1, 1, 1, 1], "one trial"),
        ([1.0, 2.0, 3.0, 4.0], [1, 2, 3], [1, 1, 1, 1], "3 parts"),
        ([5.0, 5.0, 5.0, 5.0], [1, 1, 2, 2], [1, 2, 1, 2], "all values are equal"),
        ([5.0, 5.0, float("nan"), 4.0], [1, 1, 2, 2], [1, 2, 1, 2], "missing"),
    ],
)
def test_what_is_no_study_is_refused(
    values: list[float], parts: list[int], appraisers: list[int], message: str
) -> None:
    with pytest.raises(DataError, match=message):
        gauge_study(values, parts, appraisers)


@pytest.mark.parametrize(
    "options",
    [
        {"tolerance": 0.0},
        {"confidence": 1.0},
        {"multiple": 0.0},
        {"method": "other"},
        {"interaction": "maybe"},
        {"alpha": 2.0},
    ],
)
def test_options_that_make_no_sense_are_refused(options: dict[str, object]) -> None:
    with pytest.raises(DataError):
        study(drawn(np.random.default_rng(14)), **options)


def test_ranges_need_two_trials() -> None:
    with pytest.raises(DataError, match="two trials"):
        study(drawn(np.random.default_rng(15), n=1), method="range")
