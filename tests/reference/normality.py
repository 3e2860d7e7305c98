"""Tests of the normal model and its probability plot."""

from __future__ import annotations

from typing import Any

import numpy as np
from scipy import special

from sheetqc.stats import anderson_darling, lilliefors, plotting_positions, ppcc, shapiro_francia, shapiro_wilk
from sheetqc.stats.goodness import normal_p_value
from sheetqc.stats.normality import ppcc_p_value
from tests.reference.checks import Check, values_of


def anderson_darling_of_the_normal(check: Check) -> dict[str, float]:
    """A-squared, modified, and its p-value."""
    x = values_of(check)
    found, n = anderson_darling(x), len(x)
    assert found.p_value == normal_p_value(found.statistic, n)
    return {
        "A2": found.statistic,
        "A2_star": found.statistic * (1 + 0.75 / n + 2.25 / n**2),
        "p": found.p_value,
    }


def other_tests(check: Check) -> dict[str, float]:
    """Shapiro-Wilk, Lilliefors, Shapiro-Francia."""
    x = values_of(check)
    w, d, f = shapiro_wilk(x), lilliefors(x), shapiro_francia(x)
    return {
        "shapiro_W": w.statistic,
        "shapiro_p": w.p_value,
        "lilliefors_D": d.statistic,
        "lilliefors_p_dallal_wilkinson": d.p_value,
        "shapiro_francia_W": f.statistic,
        "shapiro_francia_p": f.p_value,
    }


def probability_plot(check: Check) -> dict[str, Any]:
    """Plotting positions, the correlation of the plot and its lower points."""
    if check["id"].startswith("plotting-positions"):
        n, exact = check["inputs"]["n"], {"median_rank_exact": "median rank"}
        return {name: list(plotting_positions(n, exact.get(name, name))) for name in check["expected"]}
    if check["id"].startswith("filliben-critical"):
        return {"critical_ppcc": [_point(p, check["inputs"]["n"]) for p in check["inputs"]["lower_tail"]]}
    x = np.sort(values_of(check))
    scores = special.ndtri(plotting_positions(len(x), "filliben"))
    slope = float(scores @ x / (scores @ scores))
    blom = special.ndtri(plotting_positions(len(x), "blom"))
    return {
        "ppcc_filliben": ppcc(x).statistic,
        "ppcc_blom": float(np.corrcoef(blom, x)[0, 1]),
        "slope_filliben": slope,
        "intercept_filliben": float(x.mean() - slope * scores.mean()),
    }


def _point(tail: float, n: int) -> float:
    """The correlation below which a share of normal samples falls, by halving."""
    low, high = 0.5, 1.0
    for _ in range(60):
        middle = (low + high) / 2
        low, high = (middle, high) if ppcc_p_value(middle, n) < tail else (low, middle)
    return low
