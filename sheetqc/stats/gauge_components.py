"""Variance components of a crossed gauge study as combinations of its mean squares."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from sheetqc.stats.gauge_anova import GaugeTable, Source
from sheetqc.stats.mean_squares import Term

Coefficients = Mapping[str, float]
"""Coefficient of the mean square of each row of the table, by the row's name."""

DRAWS = 20_000


def component_coefficients(table: GaugeTable, shape: tuple[int, ...]) -> dict[str, dict[str, float]]:
    """Coefficients of the mean squares for each component and each sum of components.

    Parameters
    ----------
    table : of the analysis
    shape : numbers of parts, appraisers and trials

    Reference: the expected mean squares of the two-way random model, e.g. Montgomery & Runger (1993).
    """
    p, o, n = shape
    # the row whose expectation a part without spread (an appraiser without bias) would share
    base = "repeatability" if table.pooled or o == 1 else "interaction"
    found: dict[str, dict[str, float]] = {
        "repeatability": {"repeatability": 1.0},
        "part": {"parts": 1 / (o * n), base: -1 / (o * n)},
    }
    if o > 1:
        found["appraiser"] = {"appraisers": 1 / (p * n), base: -1 / (p * n)}
        if not table.pooled:
            found["interaction"] = {"interaction": 1 / n, "repeatability": -1 / n}
        found["reproducibility"] = _sum(found["appraiser"], found.get("interaction", {}))
    found["gauge"] = _sum(found["repeatability"], found.get("reproducibility", {}))
    found["total"] = _sum(found["gauge"], found["part"])
    return found


def _sum(*rows: Coefficients) -> dict[str, float]:
    total: dict[str, float] = {}
    for row in rows:
        for name, coefficient in row.items():
            total[name] = total.get(name, 0.0) + coefficient
    # a coefficient that cancels is 0, not a rounding error
    return {name: coefficient for name, coefficient in total.items() if abs(coefficient) > 1e-12}


def mean_square_terms(table: GaugeTable, coefficients: Coefficients) -> list[Term]:
    """Each coefficient with its mean square and degrees of freedom."""
    rows = _rows(table)
    return [
        Term(coefficient=coefficient, mean_square=rows[name].mean_square, degrees=rows[name].degrees)
        for name, coefficient in coefficients.items()
    ]


def share_limits(
    table: GaugeTable, coefficients: Mapping[str, Coefficients], confidence: float, seed: int
) -> tuple[float, float]:
    """Limits of the gauge's share of the spread (sigma over sigma), from generalised pivots by seeded simulation.

    Reference: Hamada & Weerahandi (2000), J. Qual. Technol. 32, 241-253.
    """
    rng = np.random.default_rng(seed)
    drawn = {name: row.sum_of_squares / rng.chisquare(row.degrees, DRAWS) for name, row in sorted(_rows(table).items())}

    def component(name: str) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
        return np.maximum(0.0, sum((c * drawn[row] for row, c in coefficients[name].items()), np.zeros(DRAWS)))

    gauge = sum((component(name) for name in ("appraiser", "interaction") if name in coefficients), np.zeros(DRAWS))
    gauge = gauge + component("repeatability")
    whole = gauge + component("part")
    share = np.sqrt(np.divide(gauge, whole, out=np.ones(DRAWS), where=whole > 0))
    low, high = np.quantile(share, [(1 - confidence) / 2, (1 + confidence) / 2])
    return float(low), float(high)


def _rows(table: GaugeTable) -> dict[str, Source]:
    interaction = None if table.pooled else table.interaction
    rows = (table.parts, table.appraisers, interaction, table.repeatability)
    return {row.name: row for row in rows if row is not None}
