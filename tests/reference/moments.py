"""Descriptive figures, values that stand apart, histograms."""

from __future__ import annotations

from math import sqrt
from typing import Any

import numpy as np
from scipy import special

from sheetqc.stats import (
    class_counts,
    describe,
    freedman_diaconis_classes,
    lag_one_correlation,
    outliers,
    scott_classes,
    sturges_classes,
)
from sheetqc.stats.intervals import sigma_factors
from sheetqc.stats.outlying import grubbs, grubbs_critical
from tests.reference.checks import Check, values_of


def descriptive(check: Check) -> dict[str, Any]:
    """Moments and what follows from them.

    Quartiles, the median absolute deviation and the interval of the mean are not among our functions: they come from
    the general libraries, applied to our moments, and stand for the data being what the source used.
    """
    x = np.array(values_of(check))
    found = describe(x)
    confidence = check["inputs"].get("confidence", 0.95)
    low, high = sigma_factors(found.n - 1, confidence)
    half = float(special.stdtrit(found.n - 1, (1 + confidence) / 2)) * found.s / sqrt(found.n)
    return {
        "n": found.n,
        "mean": found.mean,
        "sd": found.s,
        "median": found.median,
        "skew_g1_population": found.g1,
        "excess_kurtosis_g2_population": found.g2,
        "skew_G1_adjusted": found.skewness,
        "excess_kurtosis_G2_adjusted": found.kurtosis,
        "sd_ci_low": low * found.s,
        "sd_ci_high": high * found.s,
        "mean_ci_low": found.mean - half,
        "mean_ci_high": found.mean + half,
        "q1_type6": np.quantile(x, 0.25, method="weibull"),
        "q3_type6": np.quantile(x, 0.75, method="weibull"),
        "q1_type7": np.quantile(x, 0.25),
        "q3_type7": np.quantile(x, 0.75),
        "mad_x1_4826": 1.4826 * np.median(np.abs(x - found.median)),
        "lag1_autocorrelation": lag_one_correlation(x),
    }


def standing_apart(check: Check) -> dict[str, Any]:
    """Grubbs' test and Rosner's procedure."""
    given = check["inputs"]
    if check["data"] is None:
        return {"critical": grubbs_critical(given["n"], given["alpha"], given["sides"])}
    x = values_of(check)
    if "max_outliers" in given:
        many = outliers(x, given["alpha"], given["max_outliers"])
        return {
            "R": list(many.statistics),
            "critical": list(many.critical),
            "outliers": many.count,
            "removed": list(many.removed),
        }
    found = grubbs(x, given["alpha"])
    return {
        "G": found.statistic,
        "critical_two_sided": found.critical,
        "critical_one_sided": grubbs_critical(len(x), given["alpha"], 1),
        "outlier_value": found.value,
    }


def histogram(check: Check) -> dict[str, Any]:
    """Counts in given classes, and how many classes the rules ask for."""
    x, borders = values_of(check), check["inputs"]["breaks"]
    return {
        "counts_right_closed": list(class_counts(x, borders, closed="right")),
        "counts_left_closed": list(class_counts(x, borders)),
        "sturges_classes": sturges_classes(len(x)),
        "scott_classes": scott_classes(x),
        "freedman_diaconis_classes": freedman_diaconis_classes(x),
    }
