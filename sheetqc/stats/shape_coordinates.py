"""What of a family's parameters the distribution of its test statistics depends on.

Location and scale drop out; what remains is the shape, brought to a scale on which straight interpolation serves.
"""

from __future__ import annotations

from collections.abc import Callable
from math import sqrt

Theta = tuple[float, ...]


def _none(theta: Theta) -> tuple[float, ...]:
    return ()


def _by_first(theta: Theta) -> tuple[float, ...]:
    """Skewness of a gamma or similar shape: 0 for a large one, towards 1 for a small one."""
    return (1 / sqrt(1 + theta[0]),)


def _johnson(theta: Theta) -> tuple[float, ...]:
    return 1 / theta[1], abs(theta[0] / theta[1])


COORDINATES: dict[str, Callable[[Theta], tuple[float, ...]]] = {
    "exponential": _none,
    "half_normal": _none,
    "rayleigh": _none,
    "logistic": _none,
    "gumbel_max": _none,
    "gamma": _by_first,
    "folded_normal": lambda t: (t[0] / t[1],),
    "inverse_gaussian": lambda t: (1 / sqrt(1 + t[1] / t[0]),),
    "gev": lambda t: (t[2],),
    "lognormal_threshold": lambda t: (t[1],),
    "weibull_threshold": lambda t: (1 / t[0],),
    "gamma_threshold": _by_first,
    "johnson_su": _johnson,
    "johnson_sb": _johnson,
}
"""Family with a table of upper points -> its shape coordinates from the parameters."""
