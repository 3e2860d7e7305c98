"""For every family: parameters to test at, and its distribution function in exact (mpmath) arithmetic."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import mpmath as mp
import numpy as np
import scipy.stats as st

from sheetqc.stats.families import FAMILIES, Family
from sheetqc.stats.families.beta import Beta
from sheetqc.stats.families.johnson_sb import JohnsonSBWithin
from sheetqc.stats.families.truncated_normal import TruncatedNormal

Exact = Callable[..., mp.mpf]


@dataclass(frozen=True)
class Case:
    """`cdf` and `survival` take x and the parameters as mpf; `general` gives the scipy distribution.

    `allowed` tells whether parameters respect the guards of a family whose likelihood is unbounded or has no maximum.
    """

    thetas: tuple[tuple[float, ...], ...]
    cdf: Exact
    survival: Exact
    general: Callable[..., object]
    allowed: Callable[[np.ndarray, np.ndarray], bool] = lambda x, theta: True


def _one_minus_exp(t: mp.mpf) -> mp.mpf:
    return -mp.expm1(-t)


def _gamma_lower(a: mp.mpf, y: mp.mpf) -> mp.mpf:
    return mp.gammainc(a, 0, y, regularized=True)


def _gamma_upper(a: mp.mpf, y: mp.mpf) -> mp.mpf:
    return mp.gammainc(a, y, mp.inf, regularized=True)


def _gev(x: mp.mpf, m: mp.mpf, s: mp.mpf, xi: mp.mpf) -> mp.mpf:
    """The exponent t of F = exp(-t)."""
    z = (x - m) / s
    if xi == 0:
        return mp.exp(-z)
    w = 1 + xi * z
    if w <= 0:
        return mp.inf if xi > 0 else mp.mpf(0)
    return w ** (-1 / xi)


def _inverse_gaussian(x: mp.mpf, m: mp.mpf, k: mp.mpf, sign: int) -> mp.mpf:
    a, b = mp.sqrt(k / x) * (x / m - 1), mp.sqrt(k / x) * (x / m + 1)
    with mp.workdps(400):
        return mp.ncdf(sign * a) + sign * mp.exp(2 * k / m) * mp.ncdf(-b)


def _su(x: mp.mpf, g: mp.mpf, d: mp.mpf, xi: mp.mpf, w: mp.mpf) -> mp.mpf:
    return g + d * mp.asinh((x - xi) / w)


def _sb(x: mp.mpf, g: mp.mpf, d: mp.mpf, xi: mp.mpf, w: mp.mpf) -> mp.mpf:
    share = (x - xi) / w
    if share <= 0 or share >= 1:
        return mp.ninf if share <= 0 else mp.inf
    return g + d * mp.log(share / (1 - share))


def _between(x: mp.mpf, m: mp.mpf, s: mp.mpf, low: float, high: float, upper: bool) -> mp.mpf:
    with mp.workdps(400):
        a, b, z = ((v - m) / s for v in (mp.mpf(low), mp.mpf(high), x))
        total = mp.ncdf(b) - mp.ncdf(a)
        return ((mp.ncdf(b) - mp.ncdf(z)) if upper else (mp.ncdf(z) - mp.ncdf(a))) / total


class _Mixture:
    """scipy has no ready mixture of two normals with parameters of its own."""

    def __init__(self, w: float, m1: float, s1: float, m2: float, s2: float) -> None:
        self.parts = ((w, st.norm(m1, s1)), (1 - w, st.norm(m2, s2)))

    def logpdf(self, x: np.ndarray) -> np.ndarray:
        return np.log(sum(w * part.pdf(x) for w, part in self.parts))


def _below_the_values(x: np.ndarray, theta: np.ndarray) -> bool:
    return bool(0.05 * x.std() <= x.min() - theta[-1] <= 1000 * x.std())


def _ends_outside_the_values(x: np.ndarray, theta: np.ndarray) -> bool:
    gap = 0.05 * x.std()
    return bool(theta[2] <= x.min() - gap and theta[2] + theta[3] >= x.max() + gap)


def _no_shrinking(x: np.ndarray, theta: np.ndarray) -> bool:
    return bool(min(theta[2], theta[4]) >= 0.1 * x.std() and 0.02 <= theta[0] <= 0.98)


def _not_too_wide(x: np.ndarray, theta: np.ndarray) -> bool:
    return bool(theta[1] <= 30 * x.std())


CASES: dict[str, Case] = {
    "normal": Case(
        thetas=((0.0, 1.0), (10.0, 0.25), (-3.0, 40.0)),
        cdf=lambda x, m, s: mp.ncdf((x - m) / s),
        survival=lambda x, m, s: mp.ncdf((m - x) / s),
        general=lambda m, s: st.norm(m, s),
    ),
    "lognormal": Case(
        thetas=((0.0, 1.0), (2.0, 0.25), (-3.0, 0.6)),
        cdf=lambda x, m, s: mp.ncdf((mp.log(x) - m) / s),
        survival=lambda x, m, s: mp.ncdf((m - mp.log(x)) / s),
        general=lambda m, s: st.lognorm(s, scale=float(mp.exp(m))),
    ),
    "weibull": Case(
        thetas=((1.0, 1.0), (2.5, 80.0), (0.6, 0.01), (12.0, 3.0)),
        cdf=lambda x, k, s: _one_minus_exp((x / s) ** k),
        survival=lambda x, k, s: mp.exp(-((x / s) ** k)),
        general=lambda k, s: st.weibull_min(k, scale=s),
    ),
    "gamma": Case(
        thetas=((1.0, 1.0), (0.4, 3.0), (4.0, 0.01), (60.0, 0.5)),
        cdf=lambda x, a, s: _gamma_lower(a, x / s),
        survival=lambda x, a, s: _gamma_upper(a, x / s),
        general=lambda a, s: st.gamma(a, scale=s),
    ),
    "exponential": Case(
        thetas=((1.0,), (120.0,)),
        cdf=lambda x, m: _one_minus_exp(x / m),
        survival=lambda x, m: mp.exp(-x / m),
        general=lambda m: st.expon(scale=m),
    ),
    "folded_normal": Case(
        thetas=((0.0, 1.0), (0.3, 1.0), (2.0, 1.0), (0.05, 0.01), (40.0, 4.0)),
        cdf=lambda x, m, s: mp.ncdf((x - m) / s) - mp.ncdf((-x - m) / s),
        survival=lambda x, m, s: mp.ncdf((m - x) / s) + mp.ncdf((-x - m) / s),
        general=lambda m, s: st.foldnorm(m / s, scale=s),
    ),
    "rayleigh": Case(
        thetas=((1.0,), (0.02,)),
        cdf=lambda x, s: _one_minus_exp((x / s) ** 2 / 2),
        survival=lambda x, s: mp.exp(-((x / s) ** 2) / 2),
        general=lambda s: st.rayleigh(scale=s),
    ),
    "logistic": Case(
        thetas=((0.0, 1.0), (5.0, 0.1)),
        cdf=lambda x, m, s: 1 / (1 + mp.exp((m - x) / s)),
        survival=lambda x, m, s: 1 / (1 + mp.exp((x - m) / s)),
        general=lambda m, s: st.logistic(m, s),
    ),
    "loglogistic": Case(
        thetas=((0.0, 1.0), (3.0, 0.1)),
        cdf=lambda x, m, s: 1 / (1 + mp.exp((m - mp.log(x)) / s)),
        survival=lambda x, m, s: 1 / (1 + mp.exp((mp.log(x) - m) / s)),
        general=lambda m, s: st.fisk(1 / s, scale=float(mp.exp(m))),
    ),
    "gumbel_max": Case(
        thetas=((0.0, 1.0), (5.0, 0.1)),
        cdf=lambda x, m, s: mp.exp(-mp.exp((m - x) / s)),
        survival=lambda x, m, s: _one_minus_exp(mp.exp((m - x) / s)),
        general=lambda m, s: st.gumbel_r(m, s),
    ),
    "gumbel_min": Case(
        thetas=((0.0, 1.0), (5.0, 0.1)),
        cdf=lambda x, m, s: _one_minus_exp(mp.exp((x - m) / s)),
        survival=lambda x, m, s: mp.exp(-mp.exp((x - m) / s)),
        general=lambda m, s: st.gumbel_l(m, s),
    ),
    "lognormal_threshold": Case(
        thetas=((0.0, 0.5, 3.0), (2.0, 0.25, -10.0)),
        cdf=lambda x, m, s, t: mp.ncdf((mp.log(x - t) - m) / s),
        survival=lambda x, m, s, t: mp.ncdf((m - mp.log(x - t)) / s),
        general=lambda m, s, t: st.lognorm(s, loc=t, scale=float(mp.exp(m))),
        allowed=_below_the_values,
    ),
    "weibull_threshold": Case(
        thetas=((1.5, 1.0, 2.0), (3.0, 80.0, -20.0)),
        cdf=lambda x, k, s, t: _one_minus_exp(((x - t) / s) ** k),
        survival=lambda x, k, s, t: mp.exp(-(((x - t) / s) ** k)),
        general=lambda k, s, t: st.weibull_min(k, loc=t, scale=s),
        allowed=_below_the_values,
    ),
    "gamma_threshold": Case(
        thetas=((3.0, 0.5, 4.0), (20.0, 3.0, -5.0)),
        cdf=lambda x, a, s, t: _gamma_lower(a, (x - t) / s),
        survival=lambda x, a, s, t: _gamma_upper(a, (x - t) / s),
        general=lambda a, s, t: st.gamma(a, loc=t, scale=s),
        allowed=_below_the_values,
    ),
    "half_normal": Case(
        thetas=((1.0,), (0.03,)),
        cdf=lambda x, s: mp.erf(x / (s * mp.sqrt(2))),
        survival=lambda x, s: mp.erfc(x / (s * mp.sqrt(2))),
        general=lambda s: st.halfnorm(scale=s),
    ),
    "gev": Case(
        thetas=((0.0, 1.0, 0.0), (4.0, 0.2, -0.2), (20.0, 5.0, 0.3), (1.0, 1.0, 1e-9), (3.0, 2.0, -0.8)),
        cdf=lambda x, m, s, xi: mp.exp(-_gev(x, m, s, xi)),
        survival=lambda x, m, s, xi: _one_minus_exp(_gev(x, m, s, xi)),
        general=lambda m, s, xi: st.genextreme(-xi, m, s),
        allowed=lambda x, theta: bool(theta[2] >= -1),
    ),
    "beta": Case(
        thetas=((2.0, 5.0), (0.7, 1.5), (40.0, 3.0), (5.9, 21.2)),
        cdf=lambda x, a, b: mp.betainc(a, b, 0, x, regularized=True),
        survival=lambda x, a, b: mp.betainc(b, a, 0, 1 - x, regularized=True),
        general=lambda a, b: st.beta(a, b),
    ),
    "truncated_normal": Case(
        thetas=((0.0, 1.0), (10.0, 0.25)),
        cdf=lambda x, m, s: mp.ncdf((x - m) / s),
        survival=lambda x, m, s: mp.ncdf((m - x) / s),
        general=lambda m, s: st.norm(m, s),
    ),
    "inverse_gaussian": Case(
        thetas=((1.0, 1.0), (5.0, 60.0), (0.02, 0.002), (3.0, 1800.0)),
        cdf=lambda x, m, k: _inverse_gaussian(x, m, k, 1),
        survival=lambda x, m, k: _inverse_gaussian(x, m, k, -1),
        general=lambda m, k: st.invgauss(m / k, scale=k),
    ),
    "johnson_su": Case(
        thetas=((0.0, 1.5, 0.0, 1.0), (-2.0, 1.8, 4.0, 0.3)),
        cdf=lambda x, *p: mp.ncdf(_su(x, *p)),
        survival=lambda x, *p: mp.ncdf(-_su(x, *p)),
        general=lambda g, d, xi, w: st.johnsonsu(g, d, xi, w),
    ),
    "johnson_sb": Case(
        thetas=((0.0, 1.0, 0.0, 1.0), (1.5, 1.3, 4.0, 6.0)),
        cdf=lambda x, *p: mp.ncdf(_sb(x, *p)),
        survival=lambda x, *p: mp.ncdf(-_sb(x, *p)),
        general=lambda g, d, xi, w: st.johnsonsb(g, d, xi, w),
        allowed=_ends_outside_the_values,
    ),
    "normal_mixture": Case(
        thetas=((0.5, 0.0, 1.0, 3.0, 1.0), (0.9, 10.0, 0.2, 10.5, 0.6)),
        cdf=lambda x, w, m1, s1, m2, s2: w * mp.ncdf((x - m1) / s1) + (1 - w) * mp.ncdf((x - m2) / s2),
        survival=lambda x, w, m1, s1, m2, s2: w * mp.ncdf((m1 - x) / s1) + (1 - w) * mp.ncdf((m2 - x) / s2),
        general=_Mixture,
        allowed=_no_shrinking,
    ),
}


def _truncated(low: float, high: float, *thetas: tuple[float, float]) -> tuple[Family, Case]:
    case = Case(
        thetas=thetas,
        cdf=lambda x, m, s: _between(x, m, s, low, high, upper=False),
        survival=lambda x, m, s: _between(x, m, s, low, high, upper=True),
        general=lambda m, s: st.truncnorm((low - m) / s, (high - m) / s, m, s),
        allowed=_not_too_wide,
    )
    return TruncatedNormal(low, high), case


VARIANTS: tuple[tuple[Family, Case], ...] = (
    _truncated(-1.0, 2.0, (0.0, 1.0), (1.5, 5.0), (-4.0, 1.0), (0.4, 0.2)),
    _truncated(0.0, np.inf, (0.4, 0.25), (-0.6, 0.3)),
    _truncated(-np.inf, 0.0, (-0.1, 0.25), (0.8, 0.3)),
    (
        Beta(5.0, 9.0),
        Case(
            thetas=((2.0, 5.0), (3.0, 1.5)),
            cdf=lambda x, a, b: mp.betainc(a, b, 0, (x - 5) / 4, regularized=True),
            survival=lambda x, a, b: mp.betainc(b, a, 0, (9 - x) / 4, regularized=True),
            general=lambda a, b: st.beta(a, b, 5, 4),
        ),
    ),
    (
        JohnsonSBWithin(0.0, 100.0),
        Case(
            thetas=((2.0, 1.3), (-0.5, 0.8)),
            cdf=lambda x, g, d: mp.ncdf(_sb(x, g, d, mp.mpf(0), mp.mpf(100))),
            survival=lambda x, g, d: mp.ncdf(-_sb(x, g, d, mp.mpf(0), mp.mpf(100))),
            general=lambda g, d: st.johnsonsb(g, d, 0, 100),
        ),
    ),
)
"""Families with their bounds given."""

MEMBERS: tuple[tuple[Family, Case], ...] = (*((f, CASES[f.name]) for f in FAMILIES), *VARIANTS)


def label(f: Family) -> str:
    """Name and bounds, for the names of tests."""
    bounds = [f"{v:g}" for v in (getattr(f, "lower", None), getattr(f, "upper", None)) if v is not None]
    return " ".join([f.name, *bounds])


def case_of(f: Family) -> Case:
    """The case of a family or of one of its variants."""
    return next(case for member, case in MEMBERS if member is f)
