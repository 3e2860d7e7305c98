"""Processes that verdicts are tried on: how to draw from each, its quantiles, and what an engineer would know of it."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy import optimize, stats

Array = NDArray[np.float64]
Draw = Callable[[np.random.Generator, int, int], Array]


@dataclass(frozen=True, slots=True, kw_only=True)
class Population:
    """A process; `kind` and `model` are what could rightly be declared for it, "" where nothing fits."""

    name: str
    draw: Draw
    low: float
    middle: float
    high: float
    kind: str = ""
    model: str = ""

    def upper_limit(self, index: float) -> float:
        """The upper limit at which the quantile-method index is that much."""
        return self.middle + index * (self.high - self.middle)

    def lower_limit(self, index: float) -> float:
        """The lower limit at which the quantile-method index is that much."""
        return self.middle - index * (self.middle - self.low)


def of(name: str, law: Any, kind: str = "", model: str = "", step: float = 0.0) -> Population:
    """A process that follows a law of scipy, rounded to `step` where one is given (the index is that of the law)."""
    low, middle, high = (float(q) for q in law.ppf([0.00135, 0.5, 0.99865]))

    def draw(rng: np.random.Generator, rows: int, n: int) -> Array:
        x = np.asarray(law.rvs(size=(rows, n), random_state=rng))
        return np.round(x / step) * step if step else x

    return Population(name=name, draw=draw, low=low, middle=middle, high=high, kind=kind, model=model)


def mixed(name: str, shares: Sequence[float], laws: Sequence[Any], kind: str = "") -> Population:
    """A process that mixes streams."""

    def quantile(p: float) -> float:
        return float(
            optimize.brentq(
                lambda x: sum(s * law.cdf(x) for s, law in zip(shares, laws, strict=True)) - p, -200.0, 200.0
            )
        )

    def draw(rng: np.random.Generator, rows: int, n: int) -> Array:
        stream = rng.choice(len(laws), size=(rows, n), p=shares)
        values = np.stack([law.rvs(size=(rows, n), random_state=rng) for law in laws])
        return np.take_along_axis(values, stream[None], axis=0)[0]

    low, middle, high = quantile(0.00135), quantile(0.5), quantile(0.99865)
    return Population(name=name, draw=draw, low=low, middle=middle, high=high, kind=kind)


NORMAL = stats.norm

CALIBRATED: tuple[Population, ...] = (
    of("normal", NORMAL(10, 1), "two-sided dimension", "normal"),
    of("lognormal, sigma 0.25", stats.lognorm(0.25), "coating thickness", "lognormal"),
    of("lognormal, sigma 0.5", stats.lognorm(0.5), "roughness", "lognormal"),
    of("Weibull, shape 1.5", stats.weibull_min(1.5), "flatness", "weibull"),
    of("Weibull, shape 2.5", stats.weibull_min(2.5), "runout", "weibull"),
    of("gamma, shape 2", stats.gamma(2), "roughness", "gamma"),
    of("gamma, shape 4", stats.gamma(4), "roughness", "gamma"),
    of("folded normal, mean 1 sd", stats.foldnorm(1), "orientation", "folded_normal"),
    of("Rayleigh", stats.rayleigh(), "position", "rayleigh"),
    of("Gumbel", stats.gumbel_r(10, 1), "mass", "gumbel_max"),
    of("logistic", stats.logistic(10, 1), "two-sided dimension", "logistic"),
    of("Student t, 5 df", stats.t(5, 10, 1)),
    mixed("two normals, 1.5 sd apart", [0.5, 0.5], [NORMAL(10, 1), NORMAL(11.5, 1)]),
    of("beta(2, 2)", stats.beta(2, 2), "", "beta"),
    of("Student t, 4 df", stats.t(4)),
    of("Student t, 8 df", stats.t(8)),
    of("exponential", stats.expon(), "leak rate", "exponential"),
    of("uniform", stats.uniform()),
    mixed("5 % of threefold spread", [0.95, 0.05], [NORMAL(0, 1), NORMAL(0, 3)]),
    of("extreme values, xi 0.1", stats.genextreme(-0.1), "", "gev"),
    of("skew normal, slant 4", stats.skewnorm(4)),
    of("half normal", stats.halfnorm(), "flatness", "half_normal"),
)
"""Took part in the calibration of the cuts (the skewed ones with either tail)."""

HELD_OUT: tuple[Population, ...] = (
    of("5 + lognormal, sigma 0.4", stats.lognorm(0.4, 5), "", "lognormal_threshold"),
    of("8 + gamma, shape 3", stats.gamma(3, 8), "", "gamma_threshold"),
    of("3 + Weibull, shape 1.8", stats.weibull_min(1.8, 3), "", "weibull_threshold"),
    of("inverse Gaussian, 0.3", stats.invgauss(0.3), "time", "inverse_gaussian"),
    of("Laplace", stats.laplace()),
    mixed("two normals, 3 sd apart, 60:40", [0.6, 0.4], [NORMAL(0, 1), NORMAL(3, 1)]),
    mixed("one in five 2 sd higher", [0.8, 0.2], [NORMAL(0, 1), NORMAL(2, 1)]),
    mixed("four streams", [0.25] * 4, [NORMAL(m, 1) for m in (0.0, 0.5, 1.2, 2.0)]),
    of("normal cut at 2 sd", stats.truncnorm(-2, 2)),
    of("normal rounded to sd/3", NORMAL(10, 1), "two-sided dimension", "normal", step=1 / 3),
    of("lognormal 0.3 rounded to sd/2", stats.lognorm(0.3), "", "lognormal", step=0.16),
    of("triangular, peak at 0.3", stats.triang(0.3)),
    of("log-logistic, shape 6", stats.fisk(6), "roughness", "loglogistic"),
    of("normal plus exponential", stats.exponnorm(2)),
    of("Johnson unbounded, -1, 2", stats.johnsonsu(-1, 2), "", "johnson_su"),
    of("beta(2, 5)", stats.beta(2, 5), "", "beta"),
    of("hyperbolic secant", stats.hypsecant()),
    of("Birnbaum-Saunders, 0.5", stats.fatiguelife(0.5)),
    of("Burr XII, 3, 2", stats.burr12(3, 2)),
    of("smallest values", stats.gumbel_l(10, 1), "strength", "gumbel_min"),
)
"""Took no part in it."""
