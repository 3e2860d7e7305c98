"""Bounds over the union of likelihood regions."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.bounds import (
    model_union,
    pp_bounds,
    ppk_bounds,
    ppk_of_triples,
    rate_bounds,
    triples_of,
)
from sheetqc.stats.bounds.border import border
from sheetqc.stats.bounds.guard import guard_fits
from sheetqc.stats.bounds.shapes import guard_forms
from sheetqc.stats.bounds.table import guard_table
from sheetqc.stats.errors import DataError
from sheetqc.stats.families import FAMILIES, family, names

TWO_PARAMETERS = [f for f in FAMILIES if len(f.parameter_names) < 3 and f.name not in ("beta", "truncated_normal")]


def candidates(values):
    return tuple(name for name in names() if not family(name).refusal(values))


@pytest.fixture(scope="module")
def lognormal_values():
    return np.random.default_rng(3).lognormal(1.0, 0.3, 125)


def test_border_of_a_quadratic_is_an_ellipse():
    matrix = np.array([[4.0, 1.0], [1.0, 2.0]])

    def quadratic(points):
        return -0.5 * np.einsum("mi,ij,mj->m", points - 1, matrix, points - 1)

    found = border(quadratic, np.array([1.0, 1.0]), np.array([0.5, 2.0]))
    assert found.shape == (2, 24, 2)
    assert -quadratic(found[0]) == pytest.approx(np.full(24, 0.5), rel=1e-6)
    assert -quadratic(found[1]) == pytest.approx(np.full(24, 2.0), rel=1e-6)


@pytest.mark.parametrize("member", TWO_PARAMETERS, ids=lambda f: f.name)
def test_border_points_lie_on_the_border(member, lognormal_values):
    theta = member.fit(lognormal_values)
    top = float(member.log_likelihood(lognormal_values, theta))

    def height(phi):
        return member.log_likelihood(lognormal_values, member.external(phi))

    points = border(height, member.internal(theta), np.array([1.4]))[0]
    assert top - height(points) == pytest.approx(np.full(len(points), 1.4), abs=0.02)


@pytest.mark.parametrize(
    ("row", "reference"),
    [
        ("normal", stats.norm),
        ("logistic", stats.logistic),
        ("t, 5 df", stats.t(5)),
        ("skew normal, 3", stats.skewnorm(3)),
        ("lognormal, 0.2", stats.lognorm(0.2)),
        ("largest values", stats.gumbel_r),
        ("extreme values, 0.2", stats.genextreme(-0.2)),
        ("soft exponential, 2.5", stats.exponnorm(2.5)),
    ],
)
def test_guard_quantiles(row, reference):
    table = guard_table()
    k = table.names.index(row)
    low, quarter, middle, three, high = reference.ppf([0.00135, 0.25, 0.5, 0.75, 0.99865])
    scale = (three - quarter) / 1.3489795
    assert table.low[k] == pytest.approx((low - middle) / scale, rel=2e-3)
    assert table.high[k] == pytest.approx((high - middle) / scale, rel=2e-3)


def test_every_skewed_guard_shape_has_its_mirror_image():
    table = guard_table()
    for k, name in enumerate(table.names):
        other = name.removesuffix(", mirrored") if name.endswith("mirrored") else f"{name}, mirrored"
        if other in table.names:
            j = table.names.index(other)
            assert table.low[k] == pytest.approx(-table.high[j], rel=1e-3)
        else:
            assert table.low[k] == pytest.approx(-table.high[k], rel=1e-3)
    assert len(table.names) == len(guard_forms()) == len(set(table.names))


def test_guard_fit_of_the_normal_shape_is_mean_and_standard_deviation(lognormal_values):
    fits = guard_fits(lognormal_values)
    k = fits.table.names.index("normal")
    assert fits.location[k] == pytest.approx(lognormal_values.mean(), rel=1e-3)
    assert fits.scale[k] == pytest.approx(lognormal_values.std(), rel=2e-3)
    assert fits.log_likelihood[k] == pytest.approx(
        stats.norm.logpdf(lognormal_values, lognormal_values.mean(), lognormal_values.std()).sum(), abs=0.01
    )


def test_guard_fit_reaches_the_best_likelihood_of_students_t():
    x = stats.t.rvs(5, loc=20, scale=2, size=80, random_state=np.random.default_rng(5))
    fits = guard_fits(x)
    best = stats.t.logpdf(x, 5, *stats.t.fit(x, fix_df=5)[1:]).sum()
    assert fits.log_likelihood[fits.table.names.index("t, 5 df")] == pytest.approx(best, abs=0.02)


def test_union_holds_every_candidate_and_admits_the_right_one(lognormal_values):
    union = model_union(lognormal_values, candidates(lognormal_values), prior="open")
    assert tuple(fit.family for fit in union.fits) == candidates(lognormal_values)
    assert sum(fit.weight for fit in union.fits) == pytest.approx(1)
    fit = union.fit("lognormal")
    assert fit is not None
    assert fit.admitted
    assert not union.fit("exponential").admitted
    assert len(union.fit("exponential").triples) == 0
    assert len(union.fit("exponential").own_triples) > 0
    assert union.best >= max(f.log_likelihood for f in union.fits)


def test_bounds_are_the_extremes_over_the_triples(lognormal_values):
    union = model_union(lognormal_values, candidates(lognormal_values), prior="open")
    bounds = ppk_bounds(union, 0.2, 9.0)
    index = ppk_of_triples(union.triples, 0.2, 9.0)
    assert bounds.lower == index.min()
    assert bounds.upper == index.max()
    low, middle, high = union.triples[np.argmin(index)]
    assert bounds.lower == pytest.approx(min((9.0 - middle) / (high - middle), (middle - 0.2) / (middle - low)))


def test_more_prior_knowledge_never_widens_the_bounds(lognormal_values):
    open_ = ppk_bounds(model_union(lognormal_values, candidates(lognormal_values), prior="open"), None, 9.0)
    kind = ppk_bounds(model_union(lognormal_values, ("lognormal", "gamma", "weibull"), prior="kind"), None, 9.0)
    model = ppk_bounds(model_union(lognormal_values, ("lognormal",), prior="model"), None, 9.0)
    assert open_.lower < kind.lower <= model.lower < model.upper <= kind.upper < open_.upper


def test_bounds_surround_the_estimate_of_every_admitted_candidate(lognormal_values):
    union = model_union(lognormal_values, candidates(lognormal_values), prior="open")
    bounds = ppk_bounds(union, None, 9.0)
    for fit in union.fits:
        if fit.admitted:
            estimate = ppk_of_triples(triples_of(family(fit.family), fit.theta[None]), None, 9.0)[0]
            assert bounds.lower <= estimate <= bounds.upper


def test_bound_does_not_depend_on_the_unit_or_the_origin_of_the_guard(lognormal_values):
    free = tuple(n for n in names() if n in ("normal", "logistic", "gumbel_max", "gumbel_min"))
    here = ppk_bounds(model_union(lognormal_values, free, prior="open"), None, 9.0)
    there = ppk_bounds(model_union(25.4 * lognormal_values + 1000, free, prior="open"), None, 25.4 * 9 + 1000)
    mirror = ppk_bounds(model_union(-lognormal_values, free, prior="open"), -9.0, None)
    assert there.lower == pytest.approx(here.lower, rel=2e-3)
    assert mirror.lower == pytest.approx(here.lower, rel=2e-3)


def test_only_gives_the_interval_of_one_family(lognormal_values):
    union = model_union(lognormal_values, candidates(lognormal_values), prior="open")
    alone = union.only("lognormal")
    named = model_union(lognormal_values, ("lognormal",), prior="model")
    assert ppk_bounds(alone, None, 9.0).lower == pytest.approx(ppk_bounds(named, None, 9.0).lower)
    with pytest.raises(DataError, match="no candidate"):
        union.only("beta")


def test_rate_bounds_agree_with_the_tail_of_the_named_normal():
    x = np.random.default_rng(1).normal(0, 1, 60)
    union = model_union(x, ("normal",), prior="model")
    bounds = rate_bounds(union, None, 3.0)
    points = union.fits[0].region.points
    tails = stats.norm.sf(3.0, points[:, 0], points[:, 1])
    assert bounds.lower == pytest.approx(tails.min())
    assert bounds.upper == pytest.approx(tails.max())


def test_rate_bounds_of_the_open_union_hold_the_guard_tails():
    x = np.random.default_rng(1).normal(0, 1, 60)
    open_, named = (model_union(x, ("normal",), prior=p) for p in ("open", "model"))
    assert rate_bounds(open_, -3.0, 3.0).upper > 2 * rate_bounds(named, -3.0, 3.0).upper


def test_without_a_limit():
    union = model_union(np.arange(10.0), ("normal",), prior="model")
    assert ppk_bounds(union, None, None).lower is None
    assert pp_bounds(union, None, 3.0).upper is None
    with pytest.raises(DataError, match="needs a limit"):
        rate_bounds(union, None, None)


@pytest.mark.parametrize("values", [[1.0, 2.0], [1.0] * 8, [1.0, 2.0, np.nan, 4.0]])
def test_refuses_values_that_carry_nothing(values):
    with pytest.raises(DataError):
        model_union(values, ("normal",))


def test_refuses_an_empty_list_of_candidates():
    with pytest.raises(DataError, match="no candidate"):
        model_union([1.0, 2.0, 3.0, 5.0], ())


def test_same_values_same_bounds(lognormal_values):
    first, second = (model_union(lognormal_values, candidates(lognormal_values)) for _ in range(2))
    assert np.array_equal(first.triples, second.triples)


@pytest.mark.parametrize("values", [np.round(np.random.default_rng(2).normal(0, 1, 60)), np.repeat([1.0, 2.0], 20)])
def test_coarse_values_give_finite_bounds(values):
    union = model_union(values, ("normal", "logistic"), prior="open")
    bounds = ppk_bounds(union, None, 12.0)
    assert np.isfinite(bounds.lower)
    assert bounds.lower < bounds.upper
