"""Indices under the normal model, their limits, and values outside the specification."""

from __future__ import annotations

from math import sqrt
from typing import Any

import numpy as np

from sheetqc.stats import capability as capability_of
from sheetqc.stats import describe, fit, kushler_hurley, pearn_lin, proportion_interval
from sheetqc.stats.constants import c4_of
from sheetqc.stats.families import family
from sheetqc.stats.indices import Bounded, bissell, cpm, indices_of_spread, one_sided_index_bound, spread_index
from sheetqc.stats.within import (
    Spread,
    mean_range_spread,
    mean_s_spread,
    median_moving_range_spread,
    moving_range_spread,
    pooled_spread,
    successive_difference_spread,
)
from tests.reference.checks import Check, values_of


def capability(check: Check) -> dict[str, Any]:
    """Whichever kind of capability check it is."""
    kinds = {
        "capability-individuals": _individuals,
        "capability-normal": _normal,
        "capability-subgroups": _subgroups,
        "cpk-limits": _limits,
        "montgomery": _cp,
    }
    return next(kind for start, kind in kinds.items() if check["id"].startswith(start))(check)


def _estimate(found: Bounded | None) -> float:
    assert found is not None
    return found.estimate


def _individuals(check: Check) -> dict[str, Any]:
    x, lsl, usl = values_of(check), check["inputs"]["LSL"], check["inputs"]["USL"]
    spread, found = moving_range_spread(x), capability_of(x, lsl, usl)
    return {
        "mean_mr": spread.sigma * 2 / sqrt(np.pi),
        "median_mr": median_moving_range_spread(x) * 0.953872552,
        "sigma_mean_mr": spread.sigma,
        "sigma_median_mr": median_moving_range_spread(x),
        "sigma_mssd": successive_difference_spread(x),
        "Cp_mean_mr": _estimate(found.Cp),
        "Cpk_mean_mr": _estimate(found.Cpk),
        "Pp": _estimate(found.Pp),
    }


def _normal(check: Check) -> dict[str, Any]:
    x, given = values_of(check), check["inputs"]
    lsl, usl, target, n = given["LSL"], given["USL"], given["target"], len(x)
    found = capability_of(x, lsl, usl, target, confidence=given["confidence"])
    assert found.Pp is not None
    assert found.Ppk is not None
    assert found.Cpm is not None
    narrow = cpm(found.mean, found.s, n, lsl, usl, target, given["confidence"], sides=1)
    assert narrow is not None
    kh = kushler_hurley(found.Ppk.estimate, n, given["confidence"])
    model, theta = family("normal"), np.array([found.mean, found.s])
    # the form of Cpm with divisor n - 1 and the degrees of freedom, worked out from what we return
    square = ((usl - lsl) / (6 * found.Cpm.estimate)) ** 2
    variance = found.s**2 * (n - 1) / n
    ratio = square / variance - 1
    return {
        "mean": found.mean,
        "sd": found.s,
        "Pp": found.Pp.estimate,
        "Ppl": _estimate(found.Ppl),
        "Ppu": _estimate(found.Ppu),
        "Ppk": found.Ppk.estimate,
        "Pp_low": found.Pp.lower,
        "Pp_high": found.Pp.upper,
        "Ppk_low_bissell": found.Ppk.lower,
        "Ppk_high_bissell": found.Ppk.upper,
        "Ppk_low_kushler_hurley": kh.lower,
        "Ppk_high_kushler_hurley": kh.upper,
        "Ppu_low_exact_noncentral_t_95_one_sided": one_sided_index_bound(_estimate(found.Ppu), n - 1, n, 0.95),
        "ppm_below": 1e6 * float(model.cdf(lsl, theta)),
        "ppm_above": 1e6 * float(model.survival(usl, theta)),
        "Cpm_divisor_n": found.Cpm.estimate,
        "Cpm_from_s_and_target": (usl - lsl) / (6 * sqrt(square - variance + found.s**2)),
        "nu_boyles": n * (1 + ratio) ** 2 / (1 + 2 * ratio),
        "Cpm_low_2sided": found.Cpm.lower,
        "Cpm_low_1sided": narrow.lower,
        "Cpm_high_2sided": found.Cpm.upper,
    }


def _subgroups(check: Check) -> dict[str, Any]:
    x, given = np.array(values_of(check)), check["inputs"]
    lsl, usl, size = given["LSL"], given["USL"], given["subgroup_size"]
    rows = list(x.reshape(-1, size))
    labels = list(np.repeat(np.arange(len(rows)), size))
    by_range, by_s, pooled = mean_range_spread(rows), mean_s_spread(rows), pooled_spread(rows)
    found = capability_of(x, lsl, usl, subgroups=labels)
    of_range = indices_of_spread(found.mean, by_range, len(x), lsl, usl, 0.95, 2)
    return {
        "sigma_Rbar_d2": by_range.sigma,
        "sigma_sbar_c4": by_s.sigma,
        "sigma_pooled": pooled.sigma,
        "sigma_pooled_c4_corrected": pooled.sigma / c4_of(pooled.degrees + 1),
        "sd_overall": found.s,
        "Cp_Rbar": _estimate(of_range.spread),
        "Cp_sbar": _estimate(spread_index(by_s, lsl, usl)),
        "Cp_pooled": _estimate(found.Cp),
        "Cpk_Rbar": _estimate(of_range.nearer),
        "Cpk_pooled": _estimate(found.Cpk),
        "Pp": _estimate(found.Pp),
        "Ppk": _estimate(found.Ppk),
    }


def _limits(check: Check) -> dict[str, Any]:
    n, index, confidence = (check["inputs"][name] for name in ("n", "index", "confidence"))
    two, one = bissell(index, n - 1, n, confidence), bissell(index, n - 1, n, confidence, sides=1)
    # a tolerance of six times the index at a sigma of 1 has that index
    of_cp = spread_index(Spread(sigma=1.0, degrees=n - 1, method="s"), 0.0, 6 * index, confidence)
    assert of_cp is not None
    return {
        "bissell_low_2sided95": two.lower,
        "bissell_high_2sided95": two.upper,
        "bissell_low_1sided95": one.lower,
        "kushler_hurley_low_1sided95": kushler_hurley(index, n, confidence, sides=1).lower,
        "one_sided_index_exact_low_1sided95": one_sided_index_bound(index, n - 1, n, confidence),
        "cp_low_2sided95": of_cp.lower,
        "cp_high_2sided95": of_cp.upper,
        "pearn_lin_low_1sided95_xi0": pearn_lin(index, n, 0.0, confidence),
        "pearn_lin_low_1sided95_xi1": pearn_lin(index, n, 1.0, confidence),
    }


def _cp(check: Check) -> dict[str, Any]:
    given = check["inputs"]
    spread = Spread(sigma=given["s"], degrees=given["n"] - 1, method="s")
    found = spread_index(spread, given["LSL"], given["USL"], given["confidence"])
    assert found is not None
    return {"Cp": found.estimate, "Cp_low": found.lower, "Cp_high": found.upper}


def nonconforming(check: Check) -> dict[str, Any]:
    """Observed with the exact interval, and expected under the normal model."""
    given = check["inputs"]
    if check["data"] is None:
        interval = proportion_interval(given["x"], given["n"], given["confidence"])
        return {"p": interval.estimate, "low": interval.lower, "high": interval.upper}
    x = np.array(values_of(check))
    below, above = int(np.sum(x < given["LSL"])), int(np.sum(x > given["USL"]))
    interval = proportion_interval(below + above, len(x), given["confidence"])
    # the check takes s with divisor n - 1 where a maximum-likelihood fit divides by n
    found, model = describe(x), fit(x, "normal").model
    theta = np.array([found.mean, found.s])
    return {
        "observed_below": below,
        "observed_above": above,
        "observed_total": below + above,
        "observed_low": interval.lower,
        "observed_high": interval.upper,
        "expected_ppm_below": 1e6 * float(model.cdf(given["LSL"], theta)),
        "expected_ppm_above": 1e6 * float(model.survival(given["USL"], theta)),
    }
