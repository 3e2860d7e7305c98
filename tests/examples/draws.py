"""Measured values drawn from known shapes and read by a gauge of known resolution.

Only `random.Random.random`, whose sequence Python promises to keep for a seed, and closed-form quantiles are used, so
that the same seed gives the same readings with every version of every library.
"""

from __future__ import annotations

import math
import random
from collections.abc import Callable, Iterable
from statistics import NormalDist

SEED = 40711
_STANDARD = NormalDist()


class Draw:
    """Draws for one column of one workbook; `name` keeps columns independent of each other and of their order."""

    def __init__(self, name: str) -> None:
        self._random = random.Random(f"{SEED}/{name}")

    def uniform(self) -> float:
        """A number strictly between 0 and 1."""
        return max(self._random.random(), 1e-12)

    def normal(self, mean: float, s: float) -> float:
        """A value scattering to both sides."""
        return mean + s * _STANDARD.inv_cdf(self.uniform())

    def lognormal(self, median: float, sigma: float) -> float:
        """A value grown by factors."""
        return median * math.exp(sigma * _STANDARD.inv_cdf(self.uniform()))

    def weibull(self, scale: float, shape: float) -> float:
        """The smallest of many strengths."""
        return scale * (-math.log(self.uniform())) ** (1 / shape)

    def rayleigh(self, scale: float) -> float:
        """The length of a vector with two scattering parts."""
        return scale * math.sqrt(-2 * math.log(self.uniform()))

    def gumbel(self, mode: float, scale: float) -> float:
        """The largest of many."""
        return mode - scale * math.log(-math.log(self.uniform()))


def several(count: int, draw: Callable[[], float]) -> list[float]:
    """That many values."""
    return [draw() for _ in range(count)]


def read(values: Iterable[float], resolution: str) -> list[float]:
    """Values as a gauge shows them, in steps of its resolution, such as "0.001" or "0.5"."""
    decimals = len(resolution.partition(".")[2])
    step = float(resolution)
    return [round(round(value / step) * step, decimals) for value in values]
