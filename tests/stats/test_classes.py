"""Classes of a histogram."""

from __future__ import annotations

import math
from typing import Literal

import numpy as np
import pytest

from sheetqc.stats import class_counts, freedman_diaconis_classes, scott_classes, sturges_classes
from sheetqc.stats.errors import DataError


@pytest.mark.parametrize("n", [1, 2, 3, 4, 5, 8, 9, 64, 65, 1000, 2**40, 2**40 + 1])
def test_sturges(n: int) -> None:
    expected = 1 + next(k for k in range(60) if 2**k >= n)
    assert sturges_classes(n) == expected


@pytest.mark.parametrize("n", [20, 125, 1000])
def test_rules_against_the_general_library(n: int) -> None:
    x = np.random.default_rng(n).gamma(3, 2, n)
    # the library takes divisor n for s in Scott's width
    assert abs(scott_classes(x) - (len(np.histogram_bin_edges(x, "scott")) - 1)) <= 1
    assert freedman_diaconis_classes(x) == len(np.histogram_bin_edges(x, "fd")) - 1
    width = (24 * math.sqrt(math.pi)) ** (1 / 3) * x.std(ddof=1) / n ** (1 / 3)
    assert (scott_classes(x) - 1) * width < np.ptp(x) <= scott_classes(x) * width


def test_half_of_the_values_equal() -> None:
    x = [5.0] * 30 + [4.0, 6.0, 7.0]
    assert freedman_diaconis_classes(x) == scott_classes(x)


@pytest.mark.parametrize(("closed", "expected"), [("left", (2, 2, 3)), ("right", (4, 1, 2))])
def test_values_on_a_border(closed: Literal["left", "right"], expected: tuple[int, ...]) -> None:
    x = [0.0, 0.5, 1.0, 1.0, 2.0, 2.5, 3.0]
    assert class_counts(x, [0, 1, 2, 3], closed) == expected


def test_counts_against_the_general_library() -> None:
    x = np.round(np.random.default_rng(2).normal(size=500), 1)
    borders = np.linspace(-4, 4, 17)
    assert class_counts(x, borders) == tuple(np.histogram(x, borders)[0])
    assert class_counts(-x, -borders[::-1], "right") == tuple(np.histogram(x, borders)[0][::-1])


@pytest.mark.parametrize(
    ("x", "borders"),
    [([1.0, 5.0], [0, 1, 2]), ([-1.0, 1.0], [0, 1, 2]), ([1.0], [0, 2, 1]), ([1.0], [1, 1]), ([], [0, 1])],
)
def test_no_classes(x: list[float], borders: list[float]) -> None:
    with pytest.raises(DataError):
        class_counts(x, borders)


def test_no_rule() -> None:
    with pytest.raises(DataError):
        scott_classes([3.0, 3.0, 3.0])
    with pytest.raises(DataError):
        sturges_classes(0)
