"""False alarms and run lengths against what is known exactly."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.errors import DataError
from sheetqc.stats.stability import average_run_length, false_alarm_share
from sheetqc.stats.stability import rules as r
from sheetqc.stats.stability.false_alarms import _run_lengths


def test_one_rule_of_single_points_is_geometric() -> None:
    alarm = 2 * stats.norm.sf(3)
    assert average_run_length([r.beyond_the_limits], repetitions=20_000) == pytest.approx(1 / alarm, rel=0.025)
    expected = 1 - (1 - alarm) ** 25
    assert false_alarm_share([r.beyond_the_limits], 25, repetitions=20_000) == pytest.approx(expected, abs=0.006)


@pytest.mark.parametrize("shift", [1.0, 2.0])
def test_a_shift_shortens_the_run(shift: float) -> None:
    alarm = stats.norm.sf(3 - shift) + stats.norm.cdf(-3 - shift)
    found = average_run_length([r.beyond_the_limits], shift=shift, repetitions=20_000)
    assert found == pytest.approx(1 / alarm, rel=0.025)


def test_a_run_on_one_side_of_the_centre() -> None:
    """k heads or k tails in a row: 2^k - 1 tosses on average (Feller 1968, chapter XIII)."""
    assert average_run_length([r.eight_on_one_side], repetitions=20_000) == pytest.approx(255, rel=0.025)
    assert average_run_length([r.nine_on_one_side], repetitions=20_000) == pytest.approx(511, rel=0.025)


# Champ & Woodall (1987), Technometrics 29, table 1, from memory, no shift: rule 1 370.40, rules 1 and 2 225.44, all
# four 91.75
@pytest.mark.parametrize(
    ("rules", "printed"),
    [
        ([r.beyond_the_limits, r.two_of_three_beyond_two], 225.44),
        ([r.beyond_the_limits, r.two_of_three_beyond_two, r.four_of_five_beyond_one, r.eight_on_one_side], 91.75),
    ],
)
def test_printed_run_lengths(rules: list[r.Rule], printed: float) -> None:
    assert average_run_length(rules, repetitions=20_000) == pytest.approx(printed, rel=0.025)


def test_a_rule_that_spans_two_blocks_is_seen() -> None:
    """A rule over 15 points breaks as often early as late: the length is that of one long row."""
    rng = np.random.default_rng(3)
    rule = r.fifteen_near_the_centre
    z = rng.standard_normal((2000, 3000))
    broken = rule(z)
    seen = broken.any(axis=1)
    expected = np.where(seen, broken.argmax(axis=1) + 1, 3000)
    # runs are cut at 3000 points on both sides of the comparison
    q = np.quantile(expected, [0.25, 0.5])
    found = np.quantile(_run_lengths([rule], 2000, 0.0, np.random.default_rng(4)), [0.25, 0.5])
    assert found == pytest.approx(q, rel=0.12)


def test_more_rules_more_alarms_and_the_same_seed_the_same_answer() -> None:
    few, many = [r.beyond_the_limits], [r.beyond_the_limits, r.nine_on_one_side, r.six_rising_or_falling]
    assert false_alarm_share(few, 50) < false_alarm_share(many, 50)
    assert average_run_length(few, repetitions=500) > average_run_length(many, repetitions=500)
    assert average_run_length(many, repetitions=500, seed=7) == average_run_length(many, repetitions=500, seed=7)
    assert average_run_length(many, repetitions=500, seed=7) != average_run_length(many, repetitions=500, seed=8)


def test_no_rule() -> None:
    assert false_alarm_share([], 25) == 0.0
    with pytest.raises(DataError):
        average_run_length([])
