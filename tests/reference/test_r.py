"""The same figures from R (base, nortest, MASS, boot): another language, other authors, fresh data.

Each test writes its values into an R program, and compares what R says of them with what we say. Without R, or without
a package that is needed, it is skipped with that reason.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pytest
from numpy.typing import NDArray

from sheetqc.stats import (
    anderson_darling,
    box_cox,
    brown_forsythe,
    class_counts,
    describe,
    dispersion_test,
    fit,
    freedman_diaconis_classes,
    gauge_study,
    lag_one_correlation,
    lilliefors,
    linear_trend,
    one_way_anova,
    plotting_positions,
    poisson_interval,
    proportion_interval,
    scott_classes,
    shapiro_francia,
    shapiro_wilk,
    sturges_classes,
    tolerance_factor,
    two_mean_size,
    two_proportion_size,
)
from sheetqc.stats.constants import c4_of, range_moments
from sheetqc.stats.goodness import a_squared
from sheetqc.stats.indices import one_sided_index_bound
from tests.reference.checks import from_r

pytestmark = pytest.mark.r

SAMPLES = {
    "normal": np.random.default_rng(11).normal(25.0, 0.03, 50),
    "skewed": np.random.default_rng(12).gamma(2.0, 3.0, 125),
    "few": np.random.default_rng(13).normal(0.0, 1.0, 8),
    "rounded": np.round(np.random.default_rng(14).normal(10.0, 0.4, 60), 1),
}
each_sample = pytest.mark.parametrize("x", SAMPLES.values(), ids=SAMPLES)


def r_vector(values: Sequence[float] | NDArray[np.float64]) -> str:
    """Numbers as an R vector, to the last digit."""
    return "c(" + ", ".join(repr(float(value)) for value in values) + ")"


@each_sample
def test_moments(x: NDArray[np.float64]) -> None:
    found = describe(x)
    theirs = from_r(
        f"x <- {r_vector(x)}; n <- length(x); m <- mean(x); s <- sqrt(mean((x - m)^2)); "
        "c(m, sd(x), median(x), mean((x - m)^3) / s^3, mean((x - m)^4) / s^4 - 3, acf(x, plot = FALSE)$acf[2])"
    )
    ours = (found.mean, found.s, found.median, found.g1, found.g2, lag_one_correlation(x))
    assert ours == pytest.approx(theirs, rel=1e-10)


@each_sample
def test_normality(x: NDArray[np.float64]) -> None:
    w, a, d, f = shapiro_wilk(x), anderson_darling(x), lilliefors(x), shapiro_francia(x)
    theirs = from_r(
        f"x <- {r_vector(x)}; library(nortest); "
        "unlist(lapply(list(shapiro.test(x), ad.test(x), lillie.test(x), sf.test(x)), "
        "function(t) c(t$statistic, t$p.value)))",
        "nortest",
    )
    ours = [value for test in (w, a, d, f) for value in (test.statistic, test.p_value)]
    assert ours == pytest.approx(theirs, rel=1e-7)


@pytest.mark.parametrize(
    ("family", "theirs", "names"),
    [
        ("weibull", "weibull", ("shape", "scale")),
        ("gamma", "gamma", ("shape", "1/scale")),
        ("lognormal", "lognormal", ("meanlog", "sdlog")),
        ("logistic", "logistic", ("location", "scale")),
        ("exponential", "exponential", ("1/mean",)),
        ("normal", "normal", ("mean", "sd")),
    ],
)
def test_fits(family: str, theirs: str, names: tuple[str, ...]) -> None:
    x = SAMPLES["skewed"]
    found = fit(x, family)
    given = from_r(
        f"suppressWarnings({{f <- MASS::fitdistr({r_vector(x)}, '{theirs}'); c(f$loglik, f$estimate)}})", "MASS"
    )
    assert found.log_likelihood == pytest.approx(given[0], abs=1e-5)
    # R gives rates where we give means and scales
    ours = [1 / found.parameters[name[2:]] if name.startswith("1/") else found.parameters[name] for name in names]
    assert ours == pytest.approx(given[1:], rel=2e-3)


def test_a_squared_of_given_parameters() -> None:
    x = np.sort(SAMPLES["skewed"])
    theirs = from_r(
        f"x <- {r_vector(x)}; n <- length(x); i <- 1:n; "
        "-n - mean((2 * i - 1) * (pweibull(x, 1.5, 6, log.p = TRUE) + "
        "pweibull(rev(x), 1.5, 6, lower.tail = FALSE, log.p = TRUE)))"
    )
    assert float(a_squared(x, "weibull", [1.5, 6.0])) == pytest.approx(theirs[0], rel=1e-10)


def test_box_cox() -> None:
    found = box_cox(SAMPLES["skewed"])
    theirs = from_r(
        f"x <- {r_vector(SAMPLES['skewed'])}; b <- MASS::boxcox(x ~ 1, lambda = seq(-1, 2, 1e-3), plotit = FALSE); "
        "kept <- b$x[b$y > max(b$y) - qchisq(0.95, 1) / 2]; c(b$x[which.max(b$y)], min(kept), max(kept))",
        "MASS",
    )
    assert (found.lambda_, found.lower, found.upper) == pytest.approx(theirs, abs=1.1e-3)


def test_intervals_of_proportions_and_counts() -> None:
    for count, n in ((0, 125), (3, 500), (17, 60)):
        found = proportion_interval(count, n)
        assert (found.lower, found.upper) == pytest.approx(from_r(f"binom.test({count}, {n})$conf.int"), rel=1e-9)
    for count in (0, 4, 60):
        found = poisson_interval(count)
        assert (found.lower, found.upper) == pytest.approx(from_r(f"poisson.test({count})$conf.int"), rel=1e-9)


def test_dispersion() -> None:
    counts = [3, 7, 2, 9, 4, 4]
    found = dispersion_test(counts)
    theirs = from_r(f"t <- chisq.test({r_vector(counts)}); c(t$statistic, t$p.value)")
    assert (found.statistic, found.p_value) == pytest.approx(theirs, rel=1e-10)


def test_comparison_of_groups() -> None:
    rng = np.random.default_rng(15)
    groups = [rng.normal(10, sd, n) for sd, n in ((1.0, 8), (1.4, 12), (2.0, 5))]
    setup = f"y <- {r_vector(np.concatenate(groups))}; g <- factor(rep(1:3, c(8, 12, 5))); "
    table = "a <- anova(lm(y ~ g)); c(a$F[1], a$P[1], a$Sum, a$Df)"
    found = one_way_anova(groups)
    ours = (found.statistic, found.p_value, found.ss_between, found.ss_within, found.df_between, found.df_within)
    assert ours == pytest.approx(from_r(setup + table), rel=1e-9)
    spread = brown_forsythe(groups)
    theirs = from_r(setup + "y <- abs(y - ave(y, g, FUN = median)); " + table)
    assert (spread.statistic, spread.p_value) == pytest.approx(theirs[:2], rel=1e-9)


def test_crossed_gauge_study() -> None:
    rng = np.random.default_rng(16)
    p, o = np.repeat(np.arange(8), 6), np.tile(np.repeat(np.arange(3), 2), 8)
    y = rng.normal(size=8)[p] + 0.2 * rng.normal(size=3)[o] + 0.1 * rng.normal(size=48)
    setup = f"y <- {r_vector(y)}; p <- factor({r_vector(p)}); o <- factor({r_vector(o)}); "
    kept = gauge_study(y, list(p), list(o), interaction="kept").table
    assert kept is not None
    assert kept.appraisers is not None
    assert kept.interaction is not None
    rows = (kept.parts, kept.appraisers, kept.interaction, kept.repeatability)
    theirs = from_r(setup + "a <- anova(lm(y ~ p * o)); c(a$Sum, a$Df, a$F[3], a$P[3])")
    ours = [*(r.sum_of_squares for r in rows), *(r.degrees for r in rows), kept.interaction.F, kept.interaction.p_value]
    assert ours == pytest.approx(theirs, rel=1e-8)
    pooled = gauge_study(y, list(p), list(o), interaction="pooled").table
    assert pooled is not None
    assert pooled.appraisers is not None
    theirs = from_r(setup + "a <- anova(lm(y ~ p + o)); c(a$Sum, a$Df, a$F[1:2], a$P[1:2])")
    rows = (pooled.parts, pooled.appraisers, pooled.repeatability)
    tests = (pooled.parts.F, pooled.appraisers.F, pooled.parts.p_value, pooled.appraisers.p_value)
    assert [*(r.sum_of_squares for r in rows), *(r.degrees for r in rows), *tests] == pytest.approx(theirs, rel=1e-8)


def test_trend() -> None:
    x = SAMPLES["normal"]
    found = linear_trend(x)
    theirs = from_r(f"x <- {r_vector(x)}; summary(lm(x ~ seq_along(x)))$coefficients[2, c(1, 3, 4)]")
    assert (found.slope, found.statistic, found.p_value) == pytest.approx(theirs, rel=1e-8)


def test_constants_of_control_charts() -> None:
    for n in (2, 5, 13, 25):
        d2, _ = range_moments(n)
        # the distribution of the range of normal values is the studentised one with endless degrees of freedom
        mean = from_r(f"integrate(function(r) ptukey(r, {n}, Inf, lower.tail = FALSE), 0, 12, rel.tol = 1e-9)$value")
        assert d2 == pytest.approx(mean[0], rel=1e-7)
        c4 = from_r(f"sqrt(2 / ({n} - 1)) * exp(lgamma({n} / 2) - lgamma(({n} - 1) / 2))")
        assert c4_of(n) == pytest.approx(c4[0], rel=1e-12)


def test_noncentral_t() -> None:
    for n, coverage, confidence in ((10, 0.95, 0.95), (50, 0.9973, 0.9)):
        theirs = from_r(f"qt({confidence}, {n} - 1, ncp = sqrt({n}) * qnorm({coverage})) / sqrt({n})")
        assert tolerance_factor(n, coverage, confidence, 1) == pytest.approx(theirs[0], rel=1e-6)
    root = 3 * 50**0.5
    bound = one_sided_index_bound(1.33, 49, 50, 0.95)
    assert from_r(f"pt({root * 1.33!r}, 49, ncp = {root * bound!r})")[0] == pytest.approx(0.95, abs=1e-6)


def test_sample_sizes() -> None:
    found = two_mean_size(0.7, 1.3, 0.05, 0.9)
    assert found.exact == pytest.approx(
        from_r("power.t.test(delta = 0.7, sd = 1.3, power = 0.9, tol = 1e-10)$n")[0], rel=1e-6
    )
    share = two_proportion_size(0.02, 0.07, 0.05, 0.8)
    theirs = from_r("power.prop.test(p1 = 0.02, p2 = 0.07, power = 0.8, tol = 1e-10)$n")
    # R counts the far side of the difference as well, which is next to nothing
    assert share.exact == pytest.approx(theirs[0], rel=1e-5)


@each_sample
def test_classes(x: NDArray[np.float64]) -> None:
    theirs = from_r(f"x <- {r_vector(x)}; c(nclass.Sturges(x), nclass.scott(x), nclass.FD(x))")
    assert [sturges_classes(len(x)), scott_classes(x), freedman_diaconis_classes(x)] == theirs
    edges = [float(np.floor(x.min())), *np.linspace(np.floor(x.min()) + 0.1, np.ceil(x.max()), 6)]
    for closed in ("left", "right"):
        right = "TRUE" if closed == "right" else "FALSE"
        counts = from_r(f"hist({r_vector(x)}, {r_vector(edges)}, right = {right}, plot = FALSE)$counts")
        assert list(class_counts(x, edges, closed)) == counts


def test_plotting_positions() -> None:
    for rule, a in (("blom", 0.375), ("hazen", 0.5), ("weibull", 0.0), ("benard", 0.3)):
        assert plotting_positions(12, rule) == pytest.approx(from_r(f"ppoints(12, a = {a})"), rel=1e-12)
    assert plotting_positions(12, "median rank") == pytest.approx(from_r("qbeta(0.5, 1:12, 12:1)"), rel=1e-9)


def test_a_data_set_of_r_itself() -> None:
    """Times between failures of air-conditioning equipment (Proschan 1963), as boot ships them."""
    x = from_r("boot::aircondit$hours", "boot")
    found = fit(x, "exponential")
    assert len(x) == 12
    assert found.parameters["mean"] == pytest.approx(from_r("mean(boot::aircondit$hours)", "boot")[0])
    theirs = from_r("sum(dexp(boot::aircondit$hours, 1 / mean(boot::aircondit$hours), log = TRUE))", "boot")
    assert found.log_likelihood == pytest.approx(theirs[0], rel=1e-10)
