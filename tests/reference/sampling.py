"""Tolerance factors, numbers of values, counts."""

from __future__ import annotations

from math import sqrt
from typing import Any

from scipy import special

from sheetqc.stats import (
    c_chart_limits,
    dispersion_test,
    mean_precision_size,
    pareto,
    poisson_interval,
    sigma_precision_size,
    success_run_size,
    tolerance_factor,
    two_mean_size,
    two_proportion_size,
)
from sheetqc.stats.tolerance import distribution_free_confidence, howe_factor
from tests.reference.checks import Check, values_of


def tolerance(check: Check) -> dict[str, Any]:
    """Factors on s, and the confidence of ranks."""
    given = check["inputs"]
    n, coverage = given["n"], given["coverage"]
    if "r" in given:
        return {
            f"{name}_sided_confidence": [distribution_free_confidence(n, coverage, r, sides) for r in given["r"]]
            for name, sides in (("one", 1), ("two", 2))
        }
    confidence = given["confidence"]
    return {
        "k_one_sided_exact": tolerance_factor(n, coverage, confidence, 1),
        "k_two_sided_exact": tolerance_factor(n, coverage, confidence, 2),
        "k_two_sided_howe": howe_factor(n, coverage, confidence),
        **(
            {"k_one_sided_natrella": _natrella(n, coverage, confidence)}
            if "k_one_sided_natrella" in check["expected"]
            else {}
        ),
    }


def _natrella(n: int, coverage: float, confidence: float) -> float:
    """The handbook's approximation (Natrella 1963), not offered; for some forty values it comes near ours."""
    z_p, z_g = float(special.ndtri(coverage)), float(special.ndtri(confidence))
    a = 1 - z_g**2 / (2 * (n - 1))
    b = z_p**2 - z_g**2 / n
    approximate = (z_p + sqrt(z_p**2 - a * b)) / a
    assert abs(approximate / tolerance_factor(n, coverage, confidence, 1) - 1) < 0.001
    return approximate


def sample_sizes(check: Check) -> dict[str, Any]:
    """Whichever number is asked for."""
    given = check["inputs"]
    kinds = {
        "mean-z": lambda: {"n": mean_precision_size(given["sigma"], given["E"], given["confidence"])},
        "sd-precision": lambda: {"n": [sigma_precision_size(*case) for case in given["cases"]]},
        "success-run": lambda: {"n": [success_run_size(*case) for case in given["cases"]]},
        "t-two-sample": lambda: _group(two_mean_size(given["delta"], given["sd"], given["alpha"], given["power"])),
        "two-proportions": lambda: _group(
            two_proportion_size(given["p1"], given["p2"], given["alpha"], given["power"])
        ),
    }
    return next(kind for start, kind in kinds.items() if check["id"].startswith(start))()


def _group(found: Any) -> dict[str, Any]:
    return {"n_real": found.exact, "n": found.n}


def counts(check: Check) -> dict[str, Any]:
    """Limits of a count, ordered categories, dispersion."""
    if check["data"] is None:
        limits = poisson_interval(check["inputs"]["count"], check["inputs"]["confidence"])
        return {"low": limits.lower, "high": limits.upper}
    if isinstance(check["data"], dict):
        ordered = pareto(check["data"]["category"], check["data"]["count"])
        return {
            "order": list(ordered.categories),
            "counts": list(ordered.counts),
            "percent": [100 * share for share in ordered.shares],
            "cumulative_percent": [100 * share for share in ordered.cumulative],
        }
    x = values_of(check)
    found, chart = dispersion_test(x), c_chart_limits(x)
    total = poisson_interval(int(sum(x)))
    return {
        "total": sum(x),
        "mean": found.mean,
        "variance": found.index * found.mean,
        "index_of_dispersion_chi2": found.statistic,
        "df": found.degrees,
        "p_upper": found.p_value,
        "mean_low95": total.lower / len(x),
        "mean_high95": total.upper / len(x),
        "u_UCL": chart.upper,
        "u_LCL_floor0": chart.lower,
    }
