"""Guard shapes: standard forms, moved and stretched, that stand for what the named candidates leave out.

A list of named families is always too short: shifted origins, heavier tails and mixed streams lie between and beyond
its members. Each guard shape is one location-scale family with a fixed form, so that together they cover skewness and
tail weight evenly; every skewed one is on board together with its mirror image.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray
from scipy import special

Array = NDArray[np.float64]
LogDensity = Callable[[Array], Array]

NOWHERE = -700.0
"""Logarithm that stands for an impossible value."""

EDGE = 0.1
"""Width of a soft edge, in the unit of the standard form."""


def normal(z: Array) -> Array:
    """The normal form."""
    return -0.5 * z * z


def logistic(z: Array) -> Array:
    """The logistic form."""
    size = np.abs(z)
    return np.asarray(-size - 2 * np.log1p(np.exp(-size)))


def student(df: float) -> LogDensity:
    """Student's t: heavy tails on both sides."""
    return lambda z: -(df + 1) / 2 * np.log1p(z * z / df)


def skew_normal(slant: float) -> LogDensity:
    """The skew normal form (Azzalini 1985): from the normal to a half normal with a soft edge."""
    return lambda z: np.asarray(-0.5 * z * z + special.log_ndtr(slant * z))


def skew_student(slant: float, df: float) -> LogDensity:
    """The skew t form (Azzalini & Capitanio 2003)."""

    def form(z: Array) -> Array:
        side = special.stdtr(df + 1, slant * z * np.sqrt((df + 1) / (df + z * z)))
        return student(df)(z) + np.log(np.maximum(side, 1e-300))

    return form


def soft_exponential(mean: float) -> LogDensity:
    """A standard normal value plus an exponential one with that mean: exponential tail, soft edge."""
    return lambda z: -z / mean + special.log_ndtr(z - 1 / mean)


def soft_edge(z: Array) -> tuple[Array, Array]:
    """log y and log dy/dz of y = h log(1 + e^(z/h)): nearly z above 0, without a hard edge at 0.

    A soft edge leaves the likelihood regular where the origin of a shape is to be found, and bears rounded values.
    """
    t = z / EDGE
    y = EDGE * np.logaddexp(0.0, t)
    return np.where(t < -30, np.log(EDGE) + t, np.log(np.maximum(y, 1e-300))), -np.logaddexp(0.0, -t)


def lognormal(sigma: float) -> LogDensity:
    """The lognormal form with a free origin."""
    return lambda z: _of_log(z, sigma, normal)


def log_student(sigma: float, df: float) -> LogDensity:
    """The log-t form with a free origin: skewed and heavy."""
    return lambda z: _of_log(z, sigma, student(df))


def _of_log(z: Array, sigma: float, of: LogDensity) -> Array:
    log, bend = soft_edge(1 + sigma * z)
    return -log + of(log / sigma) + bend


def gamma(shape: float) -> LogDensity:
    """The gamma form with a free origin."""

    def form(z: Array) -> Array:
        log, bend = soft_edge(z)
        return (shape - 1) * log - np.exp(log) + bend

    return form


def weibull(shape: float) -> LogDensity:
    """The Weibull form with a free origin."""

    def form(z: Array) -> Array:
        log, bend = soft_edge(z)
        return (shape - 1) * log - np.exp(shape * log) + bend

    return form


def largest(z: Array) -> Array:
    """The Gumbel form of largest values."""
    return -z - np.exp(np.minimum(-z, 600.0))


def extreme(shape: float) -> LogDensity:
    """The generalised extreme-value form with a heavy upper tail."""

    def form(z: Array) -> Array:
        log, bend = soft_edge(1 + shape * z)
        return -(1 + 1 / shape) * log - np.exp(np.minimum(-log / shape, 600.0)) + bend

    return form


def soft_uniform(half_width: float) -> LogDensity:
    """A standard normal value plus a uniform one: light tails."""

    def form(z: Array) -> Array:
        size = np.abs(z)
        inside, beyond = special.log_ndtr(half_width - size), special.log_ndtr(-half_width - size)
        return inside + np.log1p(-np.exp(np.minimum(beyond - inside, -1e-12)))

    return form


def two_normals(distance: float, share: float = 0.5) -> LogDensity:
    """Two normal streams that many standard deviations apart; `share` belongs to the upper one."""
    low, high = np.log(1 - share), np.log(share)
    return lambda z: np.logaddexp(
        low - 0.5 * (z + distance * share) ** 2, high - 0.5 * (z - distance * (1 - share)) ** 2
    )


def contaminated(share: float, spread: float) -> LogDensity:
    """A normal process of which a share scatters more widely."""
    return lambda z: np.logaddexp(np.log(1 - share) - 0.5 * z * z, np.log(share / spread) - 0.5 * (z / spread) ** 2)


def soft_laplace(z: Array) -> Array:
    """Exponential tails on both sides of a round top (the hyperbolic form)."""
    return -1.5 * np.sqrt(1 + 2 * z * z)


def above_edge(form: LogDensity) -> LogDensity:
    """A form that begins sharply at 0."""
    return lambda z: np.where(z > 0, form(np.where(z > 0, z, 1.0)), NOWHERE)


def between_edges(power: float) -> LogDensity:
    """(1 - z^2)^power between -1 and 1."""
    return lambda z: np.where(np.abs(z) < 1, power * np.log1p(-np.minimum(z * z, 1 - 1e-12)), NOWHERE)


def between_ends(form: LogDensity) -> LogDensity:
    """A form that lives between 0 and 1."""
    return lambda z: np.where((z > 0) & (z < 1), form(np.clip(z, 1e-12, 1 - 1e-12)), NOWHERE)


def folded(mean: float) -> LogDensity:
    """The size of a normal value with that mean."""
    return lambda z: np.logaddexp(normal(z - mean), normal(z + mean))


def mirrored(form: LogDensity) -> LogDensity:
    """The same form with the sides exchanged."""
    return lambda z: form(-z)


SYMMETRIC: tuple[tuple[str, LogDensity], ...] = (
    ("t, 3 df", student(3)),
    ("t, 4 df", student(4)),
    ("t, 5 df", student(5)),
    ("t, 6.5 df", student(6.5)),
    ("logistic", logistic),
    ("t, 12 df", student(12)),
    ("normal", normal),
    ("soft uniform, 1.5", soft_uniform(1.5)),
    ("soft uniform, 3", soft_uniform(3)),
    ("soft uniform, 5", soft_uniform(5)),
    ("soft uniform, 8", soft_uniform(8)),
    ("two normals, 2.5", two_normals(2.5)),
    ("two normals, 3.5", two_normals(3.5)),
    ("5 % of threefold spread", contaminated(0.05, 3)),
    ("soft Laplace", soft_laplace),
)

SKEWED: tuple[tuple[str, LogDensity], ...] = (
    ("skew normal, 1.5", skew_normal(1.5)),
    ("skew normal, 3", skew_normal(3)),
    ("skew normal, 6", skew_normal(6)),
    ("skew normal, 15", skew_normal(15)),
    ("soft exponential, 0.8", soft_exponential(0.8)),
    ("soft exponential, 1.4", soft_exponential(1.4)),
    ("soft exponential, 2.5", soft_exponential(2.5)),
    ("soft exponential, 5", soft_exponential(5)),
    ("lognormal, 0.1", lognormal(0.1)),
    ("lognormal, 0.2", lognormal(0.2)),
    ("lognormal, 0.3", lognormal(0.3)),
    ("lognormal, 0.4", lognormal(0.4)),
    ("lognormal, 0.5", lognormal(0.5)),
    ("lognormal, 0.65", lognormal(0.65)),
    ("lognormal, 0.8", lognormal(0.8)),
    ("lognormal, 1", lognormal(1.0)),
    ("largest values", largest),
    ("extreme values, 0.1", extreme(0.1)),
    ("extreme values, 0.2", extreme(0.2)),
    ("log t, 0.15, 5 df", log_student(0.15, 5)),
    ("log t, 0.3, 5 df", log_student(0.3, 5)),
    ("log t, 0.5, 5 df", log_student(0.5, 5)),
    ("log t, 0.25, 8 df", log_student(0.25, 8)),
    ("skew t, 1, 5 df", skew_student(1, 5)),
    ("skew t, 3, 5 df", skew_student(3, 5)),
    ("skew t, 3, 8 df", skew_student(3, 8)),
    ("exponential", gamma(1)),
    ("gamma, 2", gamma(2)),
    ("gamma, 3", gamma(3)),
    ("Weibull, 1.5", weibull(1.5)),
    ("Weibull, 2", weibull(2)),
    ("two normals, 2, one in five", two_normals(2, 0.2)),
    ("two normals, 3, one in five", two_normals(3, 0.2)),
)


SHARP: tuple[tuple[str, LogDensity], ...] = (
    ("sharp exponential", above_edge(lambda z: -z)),
    ("sharp half normal", above_edge(normal)),
    ("sharp folded normal, 0.7", above_edge(folded(0.7))),
    ("sharp folded normal, 1.2", above_edge(folded(1.2))),
    ("sharp truncated normal, -1", above_edge(lambda z: normal(z - 1))),
    ("sharp Weibull, 1.5", above_edge(lambda z: 0.5 * np.log(z) - z**1.5)),
    ("sharp Weibull, 2", above_edge(lambda z: np.log(z) - z * z)),
    ("sharp gamma, 2", above_edge(lambda z: np.log(z) - z)),
    ("sharp beta, 2, 5", between_ends(lambda z: np.log(z) + 4 * np.log1p(-z))),
    ("sharp triangle, 0.3", between_ends(lambda z: np.minimum(np.log(z / 0.3), np.log1p(-z) - np.log(0.7)))),
)
"""Skewed forms with a sharp edge, whose ends are shorter than those of soft ones: for the upper bounds only."""

SHARP_SYMMETRIC: tuple[tuple[str, LogDensity], ...] = (
    ("sharp uniform", soft_uniform(40)),
    ("sharp parabola", between_edges(1.0)),
    ("sharp dome", between_edges(2.5)),
    ("sharp triangle", between_ends(lambda z: np.minimum(np.log(2 * z), np.log(2 * (1 - z))))),
)
"""The same between two edges."""


@lru_cache(maxsize=1)
def guard_forms() -> tuple[tuple[str, LogDensity], ...]:
    """Every guard form with its name, the mirrored ones named so; the sharp ones last."""
    return SYMMETRIC + _with_images(SKEWED) + SHARP_SYMMETRIC + _with_images(SHARP)


def _with_images(forms: tuple[tuple[str, LogDensity], ...]) -> tuple[tuple[str, LogDensity], ...]:
    return forms + tuple((f"{name}, mirrored", mirrored(form)) for name, form in forms)
