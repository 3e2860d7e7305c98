"""Constants, limits and rules of control charts; runs in time order."""

from __future__ import annotations

from typing import Any

import numpy as np

from sheetqc.stats import c_chart_limits, control_chart_constants, describe, runs_test, runs_up_and_down
from sheetqc.stats.serial import runs_probability_at_most, runs_up_and_down_cdf
from sheetqc.stats.stability import average_run_length, places, rules
from sheetqc.stats.within import moving_range_spread
from tests.reference.checks import Check, values_of

RULE_NAMES = {
    "beyond3": rules.beyond_the_limits,
    "two_of_three_beyond2": rules.two_of_three_beyond_two,
    "four_of_five_beyond1": rules.four_of_five_beyond_one,
    "eight_one_side": rules.eight_on_one_side,
    "nine_one_side": rules.nine_on_one_side,
    "six_trend": rules.six_rising_or_falling,
    "fourteen_alternating": rules.fourteen_up_and_down,
    "fifteen_within1": rules.fifteen_near_the_centre,
    "eight_outside1": rules.eight_far_from_the_centre,
}
NUMBERED = (
    rules.beyond_the_limits,
    rules.two_of_three_beyond_two,
    rules.four_of_five_beyond_one,
    rules.eight_on_one_side,
)


def constants(check: Check) -> dict[str, float]:
    """The constants of one size of subgroup."""
    found = control_chart_constants(check["inputs"]["n"])
    return {name: getattr(found, name) for name in check["expected"]}


def limits(check: Check) -> dict[str, float]:
    """Limits of a chart of counts, and of single values with the rounded constant that the handbook divides by."""
    x = values_of(check)
    if check["inputs"].get("type") == "c":
        chart = c_chart_limits([int(count) for count in x])
        return {"cbar": chart.centre, "UCL": chart.upper, "LCL": chart.lower}
    pair = control_chart_constants(2)
    mean, moving = describe(x).mean, moving_range_spread(x).sigma * pair.d2
    half = 3 * moving / check["inputs"]["d2"]
    return {
        "mean": mean,
        "mean_moving_range": moving,
        "UCL": mean + half,
        "LCL": mean - half,
        "UCL_MR": pair.D4 * moving,
    }


def zone_rules(check: Check) -> dict[str, Any]:
    """Places of broken rules; or the run length of a set of them over a steady process, by simulation."""
    given = check["inputs"]
    if "rules" in given:
        chosen = [NUMBERED[int(number) - 1] for number in given["rules"].split(",")]
        return {"in_control_ARL": average_run_length(chosen, repetitions=40_000)}
    z = (np.array(values_of(check)) - given["centre"]) / given["sigma"]
    return {name: list(places(z, rule)) for name, rule in RULE_NAMES.items()}


def runs(check: Check) -> dict[str, Any]:
    """Runs about the median and up and down, with their exact distributions."""
    given = check["inputs"]
    if check["id"].startswith("runs-critical"):
        return _critical_runs(
            given["n1"], given["n2"], given["alpha_two_sided"] / 2, len(check["expected"]["exact_cdf"])
        )
    if check["id"].startswith("runs-up-down"):
        return {"cdf_from_1": list(runs_up_and_down_cdf(given["n"]))}
    about, up_down = runs_test(values_of(check)), runs_up_and_down(values_of(check))
    return {
        "runs_about_median": about.statistic,
        "n_above": about.above,
        "n_below": about.below,
        "expected": about.expected,
        "sd": about.sd,
        "z": about.z,
        "exact_p_runs_at_most": about.p_at_most,
        "runs_up_down": up_down.statistic,
        "tied_steps_dropped": len(values_of(check)) - up_down.n,
        "ud_n": up_down.n,
        "ud_expected": up_down.expected,
        "ud_sd": up_down.sd,
        "ud_z": up_down.z,
    }


def _critical_runs(first: int, second: int, tail: float, length: int) -> dict[str, Any]:
    at_most = [runs_probability_at_most(r, first, second) for r in range(2, length + 2)]
    few = max(i + 2 for i, p in enumerate(at_most) if p <= tail)
    many = min(i + 3 for i, p in enumerate(at_most) if 1 - p <= tail)
    return {"reject_if_at_most": few, "reject_if_at_least": many, "exact_cdf": at_most}
