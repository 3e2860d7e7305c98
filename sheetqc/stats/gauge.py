"""Crossed gauge studies: how much of the spread of readings is the gauge's, by analysis of variance or by ranges."""

from __future__ import annotations

import math
from collections.abc import Hashable, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.constants import range_constant
from sheetqc.stats.errors import DataError
from sheetqc.stats.gauge_anova import GaugeTable, crossed, gauge_table
from sheetqc.stats.gauge_components import component_coefficients, mean_square_terms, share_limits
from sheetqc.stats.mean_squares import combination, large_sample_limits

CATEGORY_FACTOR = 1.41
"""Distinct categories are this times part spread over gauge spread (common practice, no source; the root of 2)."""

SINGLE: tuple[str, ...] = ("repeatability", "appraiser", "interaction", "part")
"""Components that are no sum of others."""

Interaction = Literal["tested", "kept", "pooled"]
_ALPHA = {"kept": 2.0, "pooled": -1.0}


@dataclass(frozen=True, slots=True, kw_only=True)
class Component:
    """A part of the spread of readings. `lower` and `upper` are limits of sigma, None where there are none."""

    variance: float
    sigma: float
    lower: float | None
    upper: float | None
    share_of_variance: float
    share_of_spread: float
    """Sigma over the sigma of all readings."""
    share_of_tolerance: float | None
    """A multiple of sigma over the tolerance; None without a tolerance."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GaugeStudy:
    """Result of a crossed gauge study; shares run from 0 to 1.

    `appraiser` and `interaction` add up (as variances) to `reproducibility`, that and `repeatability` to `gauge`, that
    and `part` to `total`. What the study cannot tell is None.
    """

    method: str
    parts: int
    appraisers: int
    trials: int
    repeatability: Component
    reproducibility: Component | None
    appraiser: Component | None
    interaction: Component | None
    gauge: Component
    part: Component
    total: Component
    pooled: bool
    """Whether the interaction of parts and appraisers was counted as repeatability."""
    table: GaugeTable | None
    negative: tuple[str, ...]
    """Components whose estimate came out below 0 and is given as 0."""
    gauge_share_limits: tuple[float, float] | None
    """Limits of the gauge's share of the spread."""
    distinct_ratio: float | None
    """Unrounded number of distinct categories; None when the gauge has no spread at all."""
    distinct_categories: int | None
    mean_range: float
    """Of the readings of one part by one appraiser."""
    appraiser_difference: float
    """Between the largest and the smallest mean of an appraiser."""
    part_range: float
    """Between the largest and the smallest mean of a part."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Scale:
    tolerance: float | None
    multiple: float


def gauge_study(
    values: ArrayLike,
    parts: Sequence[Hashable],
    appraisers: Sequence[Hashable],
    *,
    method: Literal["anova", "range"] = "anova",
    interaction: Interaction = "tested",
    alpha: float = 0.25,
    tolerance: float | None = None,
    multiple: float = 6.0,
    confidence: float = 0.95,
    seed: int = 1,
) -> GaugeStudy:
    """Spread of the gauge, of its appraisers and of the parts.

    Parameters
    ----------
    values : shape (n,), readings
    parts, appraisers : a name for each reading; every appraiser measures every part equally often
    method : "anova", or "range" for the average-and-range method
    interaction : "tested" pools the interaction with repeatability when its p-value is above alpha; "kept" and
        "pooled" do without the test. A study with one trial cannot tell the two apart and pools
    alpha : 0.25, as for any preliminary test that should seldom pool wrongly (Bancroft 1964, from memory)
    tolerance : width between the limits, in the unit of the readings, for shares of the tolerance
    multiple : of sigma, compared with the tolerance
    confidence : of the two-sided limits; the average-and-range method has none
    seed : of the simulation behind the limits of the gauge's share

    Raises
    ------
    DataError : readings that do not fill a table of parts and appraisers evenly, that are all equal, or too few

    Reference: Montgomery & Runger (1993), Quality Engineering 6, 115-135 and 289-305; limits after Ting et al. (1990);
    average and range with Duncan's (1955) d2*, as in the trade.
    """
    if tolerance is not None and not tolerance > 0:
        raise DataError("a tolerance is wider than 0")
    if not 0 < confidence < 1 or not 0 <= alpha <= 1 or not multiple > 0:
        raise DataError("a gauge study needs a confidence and an alpha between 0 and 1 and a multiple above 0")
    if interaction not in ("tested", *_ALPHA):
        raise DataError(f"the interaction is tested, kept or pooled, not {interaction!r}")
    readings, _, _ = crossed(values, parts, appraisers)
    scale = _Scale(tolerance=tolerance, multiple=multiple)
    if method == "range":
        return _by_range(readings, scale)
    if method != "anova":
        raise DataError(f"there is no method named {method!r}")
    return _by_anova(readings, scale, _ALPHA.get(interaction, alpha), confidence, seed)


def _by_anova(readings: NDArray[np.float64], scale: _Scale, alpha: float, confidence: float, seed: int) -> GaugeStudy:
    table = gauge_table(readings, alpha)
    coefficients = component_coefficients(table, readings.shape)
    terms = {name: mean_square_terms(table, row) for name, row in coefficients.items()}
    raw = {name: combination(row) for name, row in terms.items()}
    limits = {name: _root(large_sample_limits(row, confidence)) for name, row in terms.items()}
    variances = {name: max(0.0, raw[name]) for name in SINGLE if name in raw}
    negative = tuple(name for name in variances if raw[name] < 0)
    share = share_limits(table, coefficients, confidence, seed)
    return _study("anova", readings, variances, scale, limits=limits, table=table, negative=negative, share=share)


def _by_range(readings: NDArray[np.float64], scale: _Scale) -> GaugeStudy:
    p, o, n = readings.shape
    if n < 2:
        raise DataError("the average-and-range method needs at least two trials")
    spans = _spans(readings)
    repeatability = (spans["mean_range"] / range_constant(p * o, n)) ** 2
    variances = {"repeatability": repeatability}
    negative: tuple[str, ...] = ()
    if o > 1:
        between = (spans["appraiser_difference"] / range_constant(1, o)) ** 2 - repeatability / (p * n)
        negative = ("appraiser",) if between < 0 else ()
        variances["appraiser"] = max(0.0, between)
    variances["part"] = (spans["part_range"] / range_constant(1, p)) ** 2
    return _study("range", readings, variances, scale, limits={}, table=None, negative=negative, share=None)


def _study(
    method: str,
    readings: NDArray[np.float64],
    variances: Mapping[str, float],
    scale: _Scale,
    *,
    limits: Mapping[str, tuple[float, float]],
    table: GaugeTable | None,
    negative: tuple[str, ...],
    share: tuple[float, float] | None,
) -> GaugeStudy:
    between = variances.get("appraiser", 0.0) + variances.get("interaction", 0.0)
    sums = dict(variances)
    if "appraiser" in variances:
        sums["reproducibility"] = between
    sums["gauge"] = variances["repeatability"] + between
    sums["total"] = sums["gauge"] + variances["part"]
    made = {name: _component(variance, sums["total"], limits.get(name), scale) for name, variance in sums.items()}
    gauge, part = made["gauge"], made["part"]
    ratio = CATEGORY_FACTOR * part.sigma / gauge.sigma if gauge.sigma > 0 else None
    p, o, n = readings.shape
    return GaugeStudy(
        method=method,
        parts=p,
        appraisers=o,
        trials=n,
        repeatability=made["repeatability"],
        reproducibility=made.get("reproducibility"),
        appraiser=made.get("appraiser"),
        interaction=made.get("interaction"),
        gauge=gauge,
        part=part,
        total=made["total"],
        pooled=o > 1 and "interaction" not in variances,
        table=table,
        negative=negative,
        gauge_share_limits=share,
        distinct_ratio=ratio,
        distinct_categories=None if ratio is None else math.floor(ratio),
        **_spans(readings),
    )


def _component(variance: float, total: float, limits: tuple[float, float] | None, scale: _Scale) -> Component:
    if total <= 0:
        raise DataError("no spread was found, neither of the parts nor of the gauge")
    sigma = math.sqrt(variance)
    return Component(
        variance=variance,
        sigma=sigma,
        lower=None if limits is None else limits[0],
        upper=None if limits is None else limits[1],
        share_of_variance=variance / total,
        share_of_spread=math.sqrt(variance / total),
        share_of_tolerance=None if scale.tolerance is None else scale.multiple * sigma / scale.tolerance,
    )


def _spans(readings: NDArray[np.float64]) -> dict[str, float]:
    return {
        "mean_range": float(np.ptp(readings, axis=2).mean()),
        "appraiser_difference": float(np.ptp(readings.mean(axis=(0, 2)))),
        "part_range": float(np.ptp(readings.mean(axis=(1, 2)))),
    }


def _root(limits: tuple[float, float]) -> tuple[float, float]:
    return math.sqrt(limits[0]), math.sqrt(limits[1])
