"""Capability indices with their bounds: by the quantile method and under the normal model."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.descriptive import describe
from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.intervals import sigma_factors
from sheetqc.stats.within import Spread, moving_range_spread, pooled_spread

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Bounded:
    """An index with its limits; None where they cannot be given."""

    estimate: float
    lower: float | None = None
    upper: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantileIndices:
    """Indices of the quantile method; None on a side without a limit."""

    Pp: float | None
    Ppl: float | None
    Ppu: float | None
    Ppk: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantileIndexArrays:
    """Indices of the quantile method; None on a side without a limit, nan where the quantiles do not part."""

    Pp: Array | None
    Ppl: Array | None
    Ppu: Array | None
    Ppk: Array | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Capability:
    """Indices under the normal model: P of the total spread, C of the spread within subgroups."""

    mean: float
    s: float
    within: Spread
    Pp: Bounded | None
    Ppl: Bounded | None
    Ppu: Bounded | None
    Ppk: Bounded | None
    Cp: Bounded | None
    Cpk: Bounded | None
    Cpm: Bounded | None


def quantile_capability(
    low: float, median: float, high: float, lower: float | None, upper: float | None
) -> QuantileIndices:
    """Indices of the general (quantile) method.

    Parameters
    ----------
    low, median, high : the quantiles X0.135, X50 and X99.865
    lower, upper : the limits, None where there is none

    Reference: ISO 22514-2, the general geometric method.
    """
    found = quantile_indices(low, median, high, lower, upper)
    return QuantileIndices(Pp=_known(found.Pp), Ppl=_known(found.Ppl), Ppu=_known(found.Ppu), Ppk=_known(found.Ppk))


def quantile_indices(
    low: ArrayLike, median: ArrayLike, high: ArrayLike, lower: float | None, upper: float | None
) -> QuantileIndexArrays:
    """The same for arrays of quantiles, that broadcast against each other; `Ppk` is of the side that has an index."""
    x0, x50, x1 = (np.asarray(q, dtype=float) for q in (low, median, high))
    ppu = None if upper is None else _ratio(upper - x50, x1 - x50)
    ppl = None if lower is None else _ratio(x50 - lower, x50 - x0)
    return QuantileIndexArrays(
        Pp=None if lower is None or upper is None else _ratio(np.asarray(upper - lower), x1 - x0),
        Ppl=ppl,
        Ppu=ppu,
        Ppk=ppl if ppu is None else ppu if ppl is None else np.fmin(ppl, ppu),
    )


def _ratio(room: Array, need: Array) -> Array:
    known = (need > 0) & np.isfinite(need)
    return np.asarray(np.where(known, room / np.where(known, need, 1.0), np.nan))


def _known(index: Array | None) -> float | None:
    return None if index is None or np.isnan(index) else float(index)


def capability(
    x: ArrayLike,
    lower: float | None = None,
    upper: float | None = None,
    nominal: float | None = None,
    subgroups: Sequence[object] | None = None,
    confidence: float = 0.95,
    sides: int = 2,
    within: Spread | None = None,
) -> Capability:
    """Indices under the normal model.

    Parameters
    ----------
    x : shape (n,), in time order
    lower, upper, nominal : limits and target, in the unit of the values
    subgroups : a label per value for the spread within; the mean moving range when None
    confidence, sides : 2 for limits of a two-sided interval, 1 for bounds each at the confidence
    within : the spread within by another estimator of `sheetqc.stats.within`, instead of `subgroups`

    Raises
    ------
    DataError : without a limit, with both `within` and `subgroups`, or with values that carry no spread

    Reference: chi-square for Pp and Cp; Bissell (1990), Applied Statistics 39, 331-340, for Ppk and Cpk of two-sided
    limits; Chou, Owen & Borrego (1990), J. Qual. Technol. 22, 223-229 (noncentral t), for one-sided ones; Boyles
    (1991), J. Qual. Technol. 23, 17-26, for Cpm.
    """
    values = measured_values(x)
    if lower is None and upper is None:
        raise DataError("an index needs a limit")
    found = describe(values)
    total = Spread(sigma=found.s, degrees=found.n - 1, method="s")
    if within is None:
        within = moving_range_spread(values) if subgroups is None else pooled_spread(grouped(values, subgroups))
    elif subgroups is not None:
        raise DataError("the spread within is either given or taken from the subgroups")
    p = indices_of_spread(found.mean, total, found.n, lower, upper, confidence, sides)
    c = indices_of_spread(found.mean, within, found.n, lower, upper, confidence, sides)
    return Capability(
        mean=found.mean,
        s=found.s,
        within=within,
        Pp=p.spread,
        Ppl=p.below,
        Ppu=p.above,
        Ppk=p.nearer,
        Cp=c.spread,
        Cpk=c.nearer,
        Cpm=cpm(found.mean, found.s, found.n, lower, upper, nominal, confidence, sides),
    )


def grouped(values: ArrayLike, labels: Sequence[object]) -> list[np.ndarray[tuple[int], np.dtype[np.float64]]]:
    """The values of each label, in the order the labels first occur."""
    row = np.asarray(values, dtype=float)
    if len(labels) != len(row):
        raise DataError(f"there are {len(labels)} labels for {len(row)} values")
    places: dict[object, list[int]] = {}
    for place, label in enumerate(labels):
        places.setdefault(label, []).append(place)
    return [row[group] for group in places.values()]


@dataclass(frozen=True, slots=True, kw_only=True)
class SpreadIndices:
    """Indices of one spread: of both limits, of each side, and of the nearer one."""

    spread: Bounded | None
    below: Bounded | None
    above: Bounded | None
    nearer: Bounded | None


def indices_of_spread(
    mean: float, spread: Spread, n: int, lower: float | None, upper: float | None, confidence: float, sides: int
) -> SpreadIndices:
    """Indices of a mean and a spread under the normal model; the parameters are those of `capability`."""
    both = spread_index(spread, lower, upper, confidence, sides)
    below = None if lower is None else _side((mean - lower) / (3 * spread.sigma), spread.degrees, n, confidence, sides)
    above = None if upper is None else _side((upper - mean) / (3 * spread.sigma), spread.degrees, n, confidence, sides)
    if below is None or above is None:
        return SpreadIndices(spread=both, below=below, above=above, nearer=below or above)
    nearer = bissell(min(below.estimate, above.estimate), spread.degrees, n, confidence, sides)
    return SpreadIndices(spread=both, below=below, above=above, nearer=nearer)


def spread_index(
    spread: Spread, lower: float | None, upper: float | None, confidence: float = 0.95, sides: int = 2
) -> Bounded | None:
    """Pp or Cp, tolerance over six sigma, with chi-square limits; None without both limits."""
    if lower is None or upper is None:
        return None
    estimate = (upper - lower) / (6 * spread.sigma)
    small, large = sigma_factors(spread.degrees, confidence, sides)
    return Bounded(estimate=estimate, lower=estimate / large, upper=estimate / small)


def _side(index: float, degrees: float, n: int, confidence: float, sides: int) -> Bounded:
    return Bounded(
        estimate=index,
        lower=one_sided_index_bound(index, degrees, n, 1 - (1 - confidence) / sides),
        upper=one_sided_index_bound(index, degrees, n, (1 - confidence) / sides),
    )


def one_sided_index_bound(index: float, degrees: float, n: int, confidence: float) -> float:
    """Exact bound of a one-sided index under the normal model: below it lies the true one with 1 - confidence.

    3 sqrt(n) times the estimate is noncentral t with noncentrality 3 sqrt(n) times the true index.

    Reference: Chou, Owen & Borrego (1990).
    """
    root = 3 * math.sqrt(n)
    return float(special.nctdtrinc(degrees, confidence, root * index)) / root


def bissell(index: float, degrees: float, n: int, confidence: float = 0.95, sides: int = 2) -> Bounded:
    """Ppk or Cpk with approximate limits.

    Parameters
    ----------
    index : the estimate
    degrees : degrees of freedom of the spread (n - 1 for s)
    n : number of values behind the mean

    Reference: Bissell (1990).
    """
    half = float(special.ndtri(1 - (1 - confidence) / sides)) * math.sqrt(1 / (9 * n) + index**2 / (2 * degrees))
    return Bounded(estimate=index, lower=index - half, upper=index + half)


def cpm(
    mean: float,
    s: float,
    n: int,
    lower: float | None,
    upper: float | None,
    nominal: float | None,
    confidence: float = 0.95,
    sides: int = 2,
) -> Bounded | None:
    """Cpm, tolerance over six times the root mean square deviation from the target; None without limits and target.

    Reference: Boyles (1991): (n + lambda) times the squared ratio of deviations is chi-square with
    (n + lambda)^2 / (n + 2 lambda) degrees of freedom, lambda = n ((mean - target) / s)^2 with divisor n.
    """
    if lower is None or upper is None or nominal is None:
        return None
    variance = s * s * (n - 1) / n
    square = variance + (mean - nominal) ** 2
    ratio = (mean - nominal) ** 2 / variance
    degrees = n * (1 + ratio) ** 2 / (1 + 2 * ratio)
    estimate = (upper - lower) / (6 * math.sqrt(square))
    small, large = sigma_factors(degrees, confidence, sides)
    return Bounded(estimate=estimate, lower=estimate / large, upper=estimate / small)
