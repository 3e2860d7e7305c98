"""The check at the door, and what every statistic makes of awkward values: an answer or a reason, never a warning."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Iterator
from typing import Any

import numpy as np
import pytest

from sheetqc import stats
from sheetqc.stats.change_point import change_point
from sheetqc.stats.door import measured_rows, measured_values
from sheetqc.stats.errors import DataError

RNG = np.random.default_rng(5)
NORMAL = RNG.normal(10, 0.1, 60)

AWKWARD = {
    "two": [1.0, 2.0],
    "three in a row": [1.0, 2.0, 3.0],
    "one differs": [3.0] * 60 + [3.1],
    "two kinds": [0.0] * 50 + [1.0] * 50,
    "neighbouring doubles": [1.0, math.nextafter(1.0, 2.0)] * 20,
    "rounded": np.round(NORMAL, 1),
    "sorted": np.sort(NORMAL),
    "high level": 1e9 + NORMAL * 1e-6,
    "far out": [*NORMAL, 1e12],
    "farther out": [*NORMAL, 1e150],
    "farther out on both sides": [*NORMAL, -1e150, 1e150],
    "beyond measure": [*NORMAL, 1e200],
    "largest doubles": [*NORMAL, 1.7e308, -1.7e308],
    "large": NORMAL * 1e148,
    "small": NORMAL * 1e-148,
    "small and one not": [*NORMAL * 1e-148, 1.0],
    "vanishing": NORMAL * 1e-200,
    "denormal": NORMAL * 1e-310,
    "many sizes": RNG.lognormal(0, 8, 80),
    "negative": -RNG.lognormal(0, 1, 80),
    "half zeros": [*np.zeros(30), *RNG.exponential(size=30)],
    "more than 5000": RNG.normal(size=5001),
}

Rows = list[Any]


def halves(x: Any) -> Rows:
    return [x[: len(x) // 2], x[len(x) // 2 :]]


def pairs(x: Any) -> Rows:
    return [x[i : i + 2] for i in range(0, len(x) - 1, 2)]


STATISTICS: dict[str, Callable[[Any], object]] = {
    "describe": stats.describe,
    "lag_one_correlation": stats.lag_one_correlation,
    "shapiro_wilk": stats.shapiro_wilk,
    "ppcc": stats.ppcc,
    "lilliefors": stats.lilliefors,
    "shapiro_francia": stats.shapiro_francia,
    "capability": lambda x: stats.capability(x, -4.0, 4.0, 0.0),
    "capability of one limit": lambda x: stats.capability(x, None, 4.0),
    "runs_test": stats.runs_test,
    "runs_up_and_down": stats.runs_up_and_down,
    "von_neumann": stats.von_neumann,
    "rank_von_neumann": stats.rank_von_neumann,
    "linear_trend": stats.linear_trend,
    "change_point": change_point,
    "outliers": stats.outliers,
    "box_cox": stats.box_cox,
    "yeo_johnson": stats.yeo_johnson,
    "johnson": stats.johnson,
    "johnson_by_moments": stats.johnson_by_moments,
    "individuals_chart": stats.individuals_chart,
    "mean_range_chart": lambda x: stats.mean_range_chart(pairs(x)),
    "mean_s_chart": lambda x: stats.mean_s_chart(pairs(x)),
    "scott_classes": stats.scott_classes,
    "freedman_diaconis_classes": stats.freedman_diaconis_classes,
    "dispersion_test": stats.dispersion_test,
    "one_way_anova": lambda x: stats.one_way_anova(halves(x)),
    "brown_forsythe": lambda x: stats.brown_forsythe(halves(x)),
    "levene": lambda x: stats.levene(halves(x)),
}

INFINITE = ("linear_trend", "one_way_anova", "brown_forsythe", "levene")
"""Their statistic is infinite where nothing is left to compare with; they say so."""


def numbers_in(found: object) -> Iterator[float]:
    if dataclasses.is_dataclass(found):
        fields = (field.name for field in dataclasses.fields(found) if not field.name.startswith("_"))
        found = tuple(getattr(found, name) for name in fields)
    if isinstance(found, tuple):
        for member in found:
            yield from numbers_in(member)
    elif isinstance(found, (float, np.ndarray)):
        yield from np.ravel(found)


@pytest.mark.parametrize("values", AWKWARD.values(), ids=AWKWARD)
@pytest.mark.parametrize("name", STATISTICS)
def test_an_answer_or_a_reason(name: str, values: Any) -> None:
    try:
        found = list(numbers_in(STATISTICS[name](np.asarray(values, dtype=float))))
    except DataError:
        return
    assert not any(math.isnan(number) for number in found)
    assert name in INFINITE or all(math.isfinite(number) for number in found)


@pytest.mark.parametrize(
    ("values", "why"),
    [
        (["a", "b"], "not all numbers"),
        ([[1.0, 2.0], [3.0]], "not all numbers"),
        ([[1.0, 2.0]], "2 dimensions"),
        ([], "there are 0"),
        ([1.0], "there is 1"),
        ([1.0, math.nan], "missing"),
        ([1.0, -math.inf], "infinite"),
        ([2.0, 2.0], "equal"),
        ([1.0, 1e151], "1e\\+151"),
        ([1e-160, 2e-160], "smaller unit"),
    ],
)
def test_what_is_refused(values: Any, why: str) -> None:
    with pytest.raises(DataError, match=why):
        measured_values(values)


def test_what_is_let_in() -> None:
    assert measured_values([1, 2]).dtype == np.float64
    assert measured_values([3.0, 3.0], varying=False).tolist() == [3.0, 3.0]
    assert measured_values([], at_least=0, varying=False).shape == (0,)


def test_rows_are_held_to_the_same() -> None:
    assert measured_rows([[1.0, 2.0], [4.0, 3.0]]).shape == (2, 2)
    assert measured_rows(np.empty((0, 5)), at_least=5).shape == (0, 5)
    for bad in ([[1.0, 2.0], [3.0, 3.0]], [[1.0, math.nan], [1.0, 2.0]], [[1.0], [2.0]], 1.0, [["a", "b"]]):
        with pytest.raises(DataError):
            measured_rows(bad)  # type: ignore[arg-type]
