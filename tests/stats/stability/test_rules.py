"""Rules of control charts, each against windows looked at one by one."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np
import pytest

from sheetqc.stats.stability import RULES, places
from sheetqc.stats.stability import rules as r

Window = Sequence[float]


def same_side(window: Window, beyond: float, many: int) -> bool:
    """So many of the window beyond on one side, its last point among them."""
    return any(sum(s * z > beyond for z in window) >= many and s * window[-1] > beyond for s in (1, -1))


def monotone(window: Window) -> bool:
    """Each above, or each below, the one before."""
    pairs = list(pairwise(window))
    return all(b > a for a, b in pairs) or all(b < a for a, b in pairs)


def zigzag(window: Window) -> bool:
    """Each step the other way than the one before."""
    steps = [b - a for a, b in pairwise(window)]
    return all(a * b < 0 for a, b in pairwise(steps))


LOOKED_AT: dict[r.Rule, tuple[int, Callable[[Window], bool]]] = {
    r.beyond_the_limits: (1, lambda w: abs(w[0]) > 3),
    r.two_of_three_beyond_two: (3, lambda w: same_side(w, 2, 2)),
    r.four_of_five_beyond_one: (5, lambda w: same_side(w, 1, 4)),
    r.eight_on_one_side: (8, lambda w: min(w) > 0 or max(w) < 0),
    r.nine_on_one_side: (9, lambda w: min(w) > 0 or max(w) < 0),
    r.six_rising_or_falling: (6, monotone),
    r.fourteen_up_and_down: (14, zigzag),
    r.fifteen_near_the_centre: (15, lambda w: max(abs(z) for z in w) < 1),
    r.eight_far_from_the_centre: (8, lambda w: min(abs(z) for z in w) > 1),
}


def rows() -> list[np.ndarray[tuple[int], np.dtype[np.float64]]]:
    """Rows in which every rule is broken somewhere."""
    rng = np.random.default_rng(1)
    steady = rng.normal(size=400)
    return [
        steady,
        0.3 * steady,
        3 * steady,
        steady + np.linspace(-2, 2, 400),
        np.cumsum(rng.normal(size=400)) / 4,
        steady * 0.2 + np.where(np.arange(400) % 2, 1.5, -1.5),
        np.round(steady),
    ]


@pytest.mark.parametrize("rule", [rule for _, rule in RULES])
def test_each_rule_window_by_window(rule: r.Rule) -> None:
    size, broken = LOOKED_AT[rule]
    found = 0
    for z in rows():
        expected = tuple(i for i in range(size, len(z) + 1) if broken([float(v) for v in z[i - size : i]]))
        assert places(z, rule) == expected
        found += len(expected)
    assert found > 0


@pytest.mark.parametrize("rule", [rule for _, rule in RULES])
def test_many_charts_at_once_and_turned_over(rule: r.Rule) -> None:
    z = np.array(rows())
    together = rule(z)
    assert together.shape == z.shape
    for one, many in zip(z, together, strict=True):
        assert np.array_equal(rule(one), many)
    assert np.array_equal(rule(-z), together)


@pytest.mark.parametrize("rule", [rule for _, rule in RULES])
def test_a_short_chart_and_a_chart_on_the_lines_break_nothing(rule: r.Rule) -> None:
    assert places(np.zeros(0), rule) == ()
    size = LOOKED_AT[rule][0]
    if size > 1:
        assert places(np.array(rows()[1][: size - 1]), rule) == ()
    # comparisons are strict: points on the lines themselves
    for line in (0.0, 1.0, 2.0, 3.0):
        z = np.full(40, line)
        expected = {
            r.two_of_three_beyond_two: line > 2,
            r.four_of_five_beyond_one: line > 1,
            r.eight_on_one_side: line > 0,
            r.nine_on_one_side: line > 0,
            r.fifteen_near_the_centre: line < 1,
            r.eight_far_from_the_centre: line > 1,
        }
        assert bool(places(z, rule)) is expected.get(rule, False)


def test_every_rule_has_a_name_of_its_own() -> None:
    names = [name for name, _ in RULES]
    assert len(set(names)) == len(names) == len(LOOKED_AT)
    assert all(not any(sign.isdigit() for sign in name.replace("2 s", "").replace("1 s", "")) for name in names)
