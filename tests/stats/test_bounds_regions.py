"""Cuts, regions and the tails of the guard."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.bounds import model_union, pp_bounds, ppk_bounds, rate_bounds
from sheetqc.stats.bounds.border import border, directions
from sheetqc.stats.bounds.cuts import family_cuts, guard_cuts, shared_cuts
from sheetqc.stats.bounds.guard import guard_fits
from sheetqc.stats.bounds.guard_region import guard_union, mirror_images
from sheetqc.stats.bounds.region import Region, extremes, region_between
from sheetqc.stats.bounds.table import guard_table

OPEN = ("normal", "logistic")


def noncentral_t_bound(x, limit, confidence):
    """Exact one-sided lower bound of (U - mean) / (3 sd) of a normal process (noncentral t distribution)."""
    from scipy import optimize

    n, t = len(x), (limit - x.mean()) / x.std(ddof=1)
    delta = optimize.brentq(lambda d: stats.nct.cdf(t * np.sqrt(n), n - 1, d * np.sqrt(n)) - confidence, 0.01, 2 * t)
    return delta / 3


@pytest.mark.parametrize("n", [15, 30, 50, 125, 300])
@pytest.mark.parametrize("confidence", [0.9, 0.95, 0.99])
def test_named_normal_agrees_with_the_exact_bound(n, confidence):
    x = np.random.default_rng(n).normal(10, 1, n)
    union = model_union(x, ("normal",), confidence=confidence, prior="model")
    exact = noncentral_t_bound(x, 15.0, confidence)
    assert ppk_bounds(union, None, 15.0).lower == pytest.approx(exact, rel=0.012)
    exact_upper = noncentral_t_bound(x, 15.0, 1 - confidence)
    assert ppk_bounds(union, None, 15.0).upper == pytest.approx(exact_upper, rel=0.02)


def test_cuts_grow_with_confidence_and_parameters_and_shrink_with_n():
    assert family_cuts(50, 0.99, 2).lower > family_cuts(50, 0.95, 2).lower > family_cuts(50, 0.8, 2).lower
    assert family_cuts(50, 0.95, 4).lower > family_cuts(50, 0.95, 3).lower > family_cuts(50, 0.95, 1).lower
    assert family_cuts(30, 0.95, 2).lower > family_cuts(3000, 0.95, 2).lower
    assert family_cuts(3000, 0.95, 2).upper < family_cuts(3000, 0.95, 2).lower
    assert family_cuts(10**9, 0.95, 2).lower == pytest.approx(0.5 * stats.norm.ppf(0.95) ** 2, rel=1e-3)


def test_shared_cuts_are_larger_than_own_ones():
    assert shared_cuts(50, 0.95, 2, "gamma").lower > family_cuts(50, 0.95, 2).lower
    assert shared_cuts(50, 0.95, 2, "loglogistic").lower > shared_cuts(50, 0.95, 2, "gamma").lower


def test_guard_cuts_follow_n_and_confidence():
    sizes = [guard_cuts(n, 0.95).lower for n in (10, 30, 80, 300, 5000)]
    assert np.array_equal(sizes[0], sizes[1])
    assert np.array_equal(sizes[3], sizes[4])
    assert not np.array_equal(sizes[1], sizes[2])
    usual, strict = guard_cuts(80, 0.95), guard_cuts(80, 0.99)
    taking_part = np.isfinite(usual.lower)
    assert np.all(strict.lower[taking_part] > usual.lower[taking_part])
    assert np.all(strict.upper > usual.upper)
    assert 0 < (~taking_part).sum() < taking_part.sum()


def test_guard_cuts_stay_positive_at_low_confidence():
    cuts = guard_cuts(80, 0.5)
    assert cuts.lower[np.isfinite(cuts.lower)].min() > 0


@pytest.mark.parametrize("k", [1, 2, 3, 4])
def test_directions_are_units_in_opposite_pairs(k):
    found = directions(k)
    assert np.linalg.norm(found, axis=1) == pytest.approx(np.ones(len(found)))
    for direction in found:
        assert np.min(np.linalg.norm(found + direction, axis=1)) < 1e-12


def test_border_reaches_the_extreme_of_what_is_aimed_at():
    matrix = np.diag([1.0, 4.0, 9.0, 0.25])
    aim = np.array([[0.3, -0.7, 0.2, 0.6]])

    def quadratic(points):
        return -0.5 * np.einsum("mi,ij,mj->m", points, matrix, points)

    points = border(quadratic, np.zeros(4), np.array([2.0]), lambda p: p @ aim.T)[0]
    extreme = 2 * np.sqrt(aim[0] @ np.linalg.inv(matrix) @ aim[0])
    assert (points @ aim[0]).max() == pytest.approx(extreme, rel=1e-3)


def test_border_of_an_impossible_centre_is_the_centre():
    points = border(lambda p: np.full(len(p), -np.inf), np.zeros(2), np.array([1.0]))
    assert np.array_equal(points, np.zeros((1, 1, 2)))


def test_region_takes_the_wider_half_of_one_border_and_the_narrower_half_of_the_other():
    def region(*widths):
        triples = np.array([[-w, 0.0, w] for w in widths])
        return Region(points=triples[:, 2:], triples=triples)

    joined = region_between(region(1.0), region(0.5, 2.0), region(0.8, 1.5))
    assert joined.points[:, 0].tolist() == [1.0, 2.0, 0.8]


def test_extremes_keep_the_extreme_index():
    rng = np.random.default_rng(4)
    middle = rng.normal(0, 0.1, 3000)
    triples = np.stack([middle - rng.gamma(40, 0.1, 3000), middle, middle + rng.gamma(40, 0.1, 3000)], axis=1)
    kept = extremes(triples)
    assert len(kept) < 300
    for limit in (3.0, 6.0, 12.0):
        every, few = ((limit - t[:, 1]) / (t[:, 2] - t[:, 1]) for t in (triples, kept))
        assert few.min() == pytest.approx(every.min(), rel=0.01)
        assert few.max() == pytest.approx(every.max(), rel=0.01)


def test_mirror_images_are_their_own_inverse():
    table = guard_table()
    mirror = mirror_images(table)
    assert np.array_equal(mirror[mirror], np.arange(len(table.names)))
    assert table.low == pytest.approx(-table.high[mirror], rel=1e-3)


def test_guard_of_mirrored_values_is_mirrored():
    x = np.random.default_rng(8).gamma(3, 1, 60)
    here = guard_union(guard_fits(x), x, guard_cuts(60, 0.95))
    there = guard_union(guard_fits(-x), -x, guard_cuts(60, 0.95))
    for tail in (0, 1):
        assert there.tails[1 - tail][:, 2].max() == pytest.approx(here.tails[tail][:, 2].max(), rel=5e-3)


def test_heavier_tails_are_feared_where_values_are_few():
    x = np.random.default_rng(8).normal(0, 1, 300)
    few, many = model_union(x[:30], OPEN, prior="open"), model_union(x, OPEN, prior="open")
    assert ppk_bounds(few, None, 5.0).lower < ppk_bounds(many, None, 5.0).lower
    assert ppk_bounds(few, None, 5.0).upper > ppk_bounds(many, None, 5.0).upper


def test_bounds_with_both_limits_are_not_above_those_with_one():
    x = np.random.default_rng(9).normal(0, 1, 60)
    union = model_union(x, OPEN, prior="open")
    both, one = ppk_bounds(union, -4.0, 5.0), ppk_bounds(union, -4.0, None)
    assert both.lower <= one.lower + 1e-9
    assert both.upper <= one.upper + 1e-9
    pp = pp_bounds(union, -4.0, 5.0)
    assert pp.lower < pp.upper
    assert both.lower <= pp.lower + 0.05


def test_rate_bounds_shrink_as_limits_move_out():
    x = np.random.default_rng(9).normal(0, 1, 60)
    union = model_union(x, OPEN, prior="open")
    near, far = rate_bounds(union, -3.0, 3.0), rate_bounds(union, -5.0, 5.0)
    assert 0 <= far.lower <= near.lower < near.upper <= 1
    assert far.upper < near.upper
