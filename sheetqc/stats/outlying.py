"""Values that stand apart: the tests of Grubbs and of Rosner. They flag; they never remove."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError


@dataclass(frozen=True, slots=True, kw_only=True)
class Grubbs:
    """The value farthest from the mean: its distance in standard deviations, and how probable so far a one is."""

    statistic: float
    p_value: float
    place: int
    """Of the value, counted from 1."""
    value: float
    critical: float
    """Two-sided, at the significance level asked for."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Outliers:
    """Result of the generalised extreme studentised deviate procedure; the tuples run in step."""

    count: int
    places: tuple[int, ...]
    """Of the `count` outliers, counted from 1."""
    statistics: tuple[float, ...]
    critical: tuple[float, ...]
    removed: tuple[float, ...]
    """The values in the order they were set aside, outliers or not."""
    grubbs: Grubbs


def grubbs_critical(n: int, alpha: float = 0.05, sides: int = 2) -> float:
    """Critical distance from the mean in standard deviations.

    Reference: Grubbs (1969), Technometrics 11, 1-21.
    """
    if n < 3:
        raise DataError("Grubbs' test needs at least 3 values")
    t = float(special.stdtrit(n - 2, 1 - alpha / (sides * n)))
    return (n - 1) / math.sqrt(n) * math.sqrt(t * t / (n - 2 + t * t))


def grubbs(x: ArrayLike, alpha: float = 0.05) -> Grubbs:
    """Grubbs' two-sided test of the value farthest from the mean.

    Parameters
    ----------
    x : shape (n,), n >= 3
    """
    values = measured_values(x, at_least=3)
    n = len(values)
    distance = np.abs(values - values.mean()) / values.std(ddof=1)
    place = int(np.argmax(distance))
    g = float(distance[place])
    room = (n - 1) ** 2 / n - g * g
    t = math.inf if room <= 0 else math.sqrt(g * g * (n - 2) / room)
    p = 0.0 if math.isinf(t) else min(1.0, 2 * n * float(special.stdtr(n - 2, -t)))
    return Grubbs(
        statistic=g, p_value=p, place=place + 1, value=float(values[place]), critical=grubbs_critical(n, alpha)
    )


def outliers(x: ArrayLike, alpha: float = 0.05, most: int | None = None) -> Outliers:
    """Outliers by the generalised extreme studentised deviate procedure.

    Parameters
    ----------
    x : shape (n,), n >= 3
    alpha : significance level
    most : largest number of outliers looked for; a tenth of the values, at least 1 and at most 10, when None

    Reference: Rosner (1983), Technometrics 25, 165-172.
    """
    values = measured_values(x, at_least=3)
    n = len(values)
    most = min(n - 2, max(1, min(10, n // 10)) if most is None else most)
    left = list(range(n))
    places: list[int] = []
    statistics: list[float] = []
    critical: list[float] = []
    for _ in range(most):
        rest = values[left]
        spread = rest.std(ddof=1)
        if spread == 0:
            break
        distance = np.abs(rest - rest.mean()) / spread
        far = int(np.argmax(distance))
        statistics.append(float(distance[far]))
        critical.append(grubbs_critical(len(left), alpha))
        places.append(left.pop(far))
    beyond = [i + 1 for i, (r, c) in enumerate(zip(statistics, critical, strict=True)) if r > c]
    count = max(beyond, default=0)
    return Outliers(
        count=count,
        places=tuple(p + 1 for p in places[:count]),
        statistics=tuple(statistics),
        critical=tuple(critical),
        removed=tuple(float(values[p]) for p in places),
        grubbs=grubbs(values, alpha),
    )
