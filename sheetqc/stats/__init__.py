"""Statistics of measured values: numpy arrays in, numbers out. Knows no workbook and no record of a study.

Each public name is found in its module when it is first used, so that importing the package costs nothing. A module
must not bear the name of one of these functions: the module would hide the function.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

_EXPORTS = {
    # name: module
    "johnson_by_moments": "sheetqc.stats.johnson_moments",
    "gauge_study": "sheetqc.stats.gauge",
    "lilliefors": "sheetqc.stats.further_normality",
    "shapiro_francia": "sheetqc.stats.further_normality",
    "plotting_positions": "sheetqc.stats.plotting",
    "kushler_hurley": "sheetqc.stats.index_bounds",
    "pearn_lin": "sheetqc.stats.index_bounds",
    "poisson_interval": "sheetqc.stats.counting",
    "dispersion_test": "sheetqc.stats.counting",
    "pareto": "sheetqc.stats.counting",
    "c_chart_limits": "sheetqc.stats.counting",
    "class_counts": "sheetqc.stats.classes",
    "sturges_classes": "sheetqc.stats.classes",
    "scott_classes": "sheetqc.stats.classes",
    "freedman_diaconis_classes": "sheetqc.stats.classes",
    "mean_precision_size": "sheetqc.stats.sample_size",
    "sigma_precision_size": "sheetqc.stats.sample_size",
    "success_run_size": "sheetqc.stats.sample_size",
    "two_mean_size": "sheetqc.stats.sample_size",
    "two_proportion_size": "sheetqc.stats.sample_size",
    "johnson": "sheetqc.stats.johnson_system",
    "yeo_johnson": "sheetqc.stats.transforms",
    "box_cox": "sheetqc.stats.transforms",
    "outliers": "sheetqc.stats.outlying",
    "tolerance_factor": "sheetqc.stats.tolerance",
    "capability": "sheetqc.stats.indices",
    "effective_count": "sheetqc.stats.serial",
    "von_neumann": "sheetqc.stats.serial",
    "rank_von_neumann": "sheetqc.stats.serial",
    "linear_trend": "sheetqc.stats.serial",
    "runs_up_and_down": "sheetqc.stats.serial",
    "runs_test": "sheetqc.stats.serial",
    "brown_forsythe": "sheetqc.stats.comparison",
    "one_way_anova": "sheetqc.stats.comparison",
    "control_chart_constants": "sheetqc.stats.constants",
    "quantile_capability": "sheetqc.stats.indices",
    "proportion_interval": "sheetqc.stats.intervals",
    "lag_one_correlation": "sheetqc.stats.descriptive",
    "describe": "sheetqc.stats.descriptive",
    "ppcc": "sheetqc.stats.normality",
    "shapiro_wilk": "sheetqc.stats.normality",
    "shapiro_wilk_rows": "sheetqc.stats.normality",
    "quantile_indices": "sheetqc.stats.indices",
    "levene": "sheetqc.stats.comparison",
    "grubbs": "sheetqc.stats.outlying",
    "howe_factor": "sheetqc.stats.tolerance",
    "distribution_free_confidence": "sheetqc.stats.tolerance",
    "distribution_free_size": "sheetqc.stats.tolerance",
    "individuals_chart": "sheetqc.stats.control_charts",
    "mean_range_chart": "sheetqc.stats.control_charts",
    "mean_s_chart": "sheetqc.stats.control_charts",
    "pointwise_band": "sheetqc.stats.plot_band",
    "simultaneous_band": "sheetqc.stats.plot_band",
    "fitted_normal_band": "sheetqc.stats.plot_band",
    "DataError": "sheetqc.stats.errors",
    "Fit": "sheetqc.stats.fitting",
    "a_squared": "sheetqc.stats.goodness",
    "anderson_darling": "sheetqc.stats.goodness",
    "fit": "sheetqc.stats.fitting",
}

_PACKAGES = ("families",)


def __getattr__(name: str) -> Any:
    if name in _PACKAGES:
        return import_module(f"sheetqc.stats.{name}")
    if name not in _EXPORTS:
        raise AttributeError(f"module 'sheetqc.stats' has no attribute {name!r}")
    return getattr(import_module(_EXPORTS[name]), name)


def __dir__() -> list[str]:
    return sorted([*_EXPORTS, *_PACKAGES])
