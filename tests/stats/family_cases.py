"""For every family: parameters to test at, and its distribution function in exact (mpmath) arithmetic."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import mpmath as mp
import scipy.stats as st

Exact = Callable[..., mp.mpf]


@dataclass(frozen=True)
class Case:
    """`cdf` and `survival` take x and the parameters as mpf; `general` gives the scipy distribution."""

    thetas: tuple[tuple[float, ...], ...]
    cdf: Exact
    survival: Exact
    general: Callable[..., object]


def _one_minus_exp(t: mp.mpf) -> mp.mpf:
    return -mp.expm1(-t)


def _gamma_lower(a: mp.mpf, y: mp.mpf) -> mp.mpf:
    return mp.gammainc(a, 0, y, regularized=True)


def _gamma_upper(a: mp.mpf, y: mp.mpf) -> mp.mpf:
    return mp.gammainc(a, y, mp.inf, regularized=True)


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
}
