"""Analysis of variance: groups, and gauge studies."""

from __future__ import annotations

from math import sqrt
from typing import Any

from sheetqc.stats import gauge_study, one_way_anova
from sheetqc.stats.constants import range_constant
from sheetqc.stats.gauge import GaugeStudy
from sheetqc.stats.indices import grouped
from tests.reference.checks import Check


def one_way(check: Check) -> dict[str, float]:
    """One-way analysis of variance; the variance between from the mean squares, for groups of one size."""
    groups = grouped(check["data"]["y"], check["data"]["group"])
    found = one_way_anova(groups)
    between = (found.ms_between - found.ms_within) / len(groups[0])
    return {
        "F": found.statistic,
        "p": found.p_value,
        "ss_between": found.ss_between,
        "ss_within": found.ss_within,
        "df_between": found.df_between,
        "df_within": found.df_within,
        "ms_between": found.ms_between,
        "ms_within": found.ms_within,
        "residual_sd": sqrt(found.ms_within),
        "sd_within": sqrt(found.ms_within),
        "var_between": between,
        "sd_between": sqrt(max(between, 0.0)),
    }


def gauge(check: Check) -> dict[str, Any]:
    """Gauge studies by analysis of variance and by ranges, and the constant d2* of the latter."""
    if check["id"].startswith("d2star"):
        return {"d2star": range_constant(check["inputs"]["subgroups"], check["inputs"]["subgroup_size"])}
    values, parts, appraisers = _readings(check["data"])
    if check["id"].endswith("average-range"):
        found = gauge_study(values, parts, appraisers, method="range")
        return {
            "Rbarbar": found.mean_range,
            "Xdiff": found.appraiser_difference,
            "Rp": found.part_range,
            "EV": found.repeatability.sigma,
            "PV": found.part.sigma,
        }
    found = gauge_study(values, parts, appraisers)
    return _pooled(found) if found.pooled else _with_interaction(found)


def _readings(data: dict[str, Any]) -> tuple[list[float], list[str], list[str]]:
    """One row per reading from the nested tables of the checks."""
    rows = []
    for appraiser, of_parts in (data.get("appraisers") or data["operators"]).items():
        named = of_parts.items() if isinstance(of_parts, dict) else ((str(i), row) for i, row in enumerate(of_parts))
        rows += [(value, part, appraiser) for part, trials in named for value in trials]
    return [row[0] for row in rows], [row[1] for row in rows], [row[2] for row in rows]


def _pooled(found: GaugeStudy) -> dict[str, Any]:
    assert found.reproducibility is not None
    return {
        "EV": found.repeatability.sigma,
        "AV": found.reproducibility.sigma,
        "GRR": found.gauge.sigma,
        "PV": found.part.sigma,
        "TV": found.total.sigma,
        "pct_EV": 100 * found.repeatability.share_of_spread,
        "pct_AV": 100 * found.reproducibility.share_of_spread,
        "pct_GRR": 100 * found.gauge.share_of_spread,
        "pct_PV": 100 * found.part.share_of_spread,
        "pct_contribution_GRR": 100 * found.gauge.share_of_variance,
        "ndc_unrounded": found.distinct_ratio,
    }


def _with_interaction(found: GaugeStudy) -> dict[str, Any]:
    table = found.table
    assert table is not None
    assert table.appraisers is not None
    assert table.interaction is not None
    assert found.interaction is not None
    assert found.appraiser is not None
    rows = {
        "part": table.parts,
        "operator": table.appraisers,
        "interaction": table.interaction,
        "error": table.repeatability,
    }
    return {
        **{f"ss_{name}": row.sum_of_squares for name, row in rows.items()},
        **{f"ms_{name}": row.mean_square for name, row in rows.items()},
        "F_interaction": table.interaction.F,
        "p_interaction": table.interaction.p_value,
        "var_repeatability": found.repeatability.variance,
        "var_interaction": found.interaction.variance,
        "var_operator": found.appraiser.variance,
        "var_part": found.part.variance,
        "GRR": found.gauge.sigma,
        "TV": found.total.sigma,
    }
