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

LOWEST = -700.0
"""Logarithm that stands for an impossible value."""


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


def lognormal(sigma: float) -> LogDensity:
    """The lognormal form with a free origin."""
    return lambda z: _of_log(z, sigma, normal)


def log_student(sigma: float, df: float) -> LogDensity:
    """The log-t form with a free origin: skewed and heavy."""
    return lambda z: _of_log(z, sigma, student(df))


def _of_log(z: Array, sigma: float, of: LogDensity) -> Array:
    y = 1 + sigma * z
    log = np.log(np.where(y > 0, y, 1.0))
    return np.where(y > 0, -log + of(log / sigma), LOWEST)


def largest(z: Array) -> Array:
    """The Gumbel form of largest values."""
    return -z - np.exp(np.minimum(-z, 600.0))


def extreme(shape: float) -> LogDensity:
    """The generalised extreme-value form with a heavy upper tail."""

    def form(z: Array) -> Array:
        y = 1 + shape * z
        log = np.log(np.where(y > 0, y, 1.0))
        return np.where(y > 0, -(1 + 1 / shape) * log - np.exp(np.minimum(-log / shape, 600.0)), LOWEST)

    return form


def soft_uniform(half_width: float) -> LogDensity:
    """A standard normal value plus a uniform one: light tails."""

    def form(z: Array) -> Array:
        size = np.abs(z)
        inside, beyond = special.log_ndtr(half_width - size), special.log_ndtr(-half_width - size)
        return inside + np.log1p(-np.exp(np.minimum(beyond - inside, -1e-12)))

    return form


def two_normals(distance: float) -> LogDensity:
    """Two equal normal streams that many standard deviations apart."""
    return lambda z: np.logaddexp(-0.5 * (z - distance / 2) ** 2, -0.5 * (z + distance / 2) ** 2)


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
    ("soft uniform, 8", soft_uniform(8)),
    ("two normals, 2.5", two_normals(2.5)),
    ("two normals, 3.5", two_normals(3.5)),
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
    ("soft exponential, 12", soft_exponential(12)),
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
)


@lru_cache(maxsize=1)
def guard_forms() -> tuple[tuple[str, LogDensity], ...]:
    """Every guard form with its name, the mirrored ones named so."""
    return SYMMETRIC + SKEWED + tuple((f"{name}, mirrored", mirrored(form)) for name, form in SKEWED)
