"""The control chart that suits the values: individuals and moving range, X-bar and R, X-bar and s."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from sheetqc.assessment import ChartTrack
from sheetqc.judgement.shape import TAIL, Values
from sheetqc.stats.bounds import UnionFit
from sheetqc.stats.constants import control_chart_constants
from sheetqc.stats.families import family
from sheetqc.stats.within import Spread, mean_range_spread, mean_s_spread, moving_range_spread
from sheetqc.study import Characteristic, Sample

Groups = tuple[tuple[int, ...], ...]

LARGEST_FOR_RANGE = 8
"""Subgroup size up to which ranges are charted; above it s uses the values better (common practice: 8 to 10)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Chart:
    """A control chart with the spread within subgroups that its limits rest on, and its degrees of freedom."""

    title: str
    labels: tuple[str, ...]
    sizes: tuple[int, ...]
    location: ChartTrack
    spread: ChartTrack
    within: Spread

    def beyond(self) -> Iterator[tuple[ChartTrack, tuple[int, ...]]]:
        """Each track with its points beyond the limits, counted from 1."""
        for track in (self.location, self.spread):
            points, lower, upper = np.array(track.points), np.array(track.lower), np.array(track.upper)
            out = np.flatnonzero((points < lower) | (points > upper))
            yield track, tuple(int(i) + 1 for i in out)


def groups_of(asked: Characteristic, sample: Sample) -> Groups | None:
    """Places of the members of each subgroup in time order; None where the values stand alone.

    Labels come before a size; of a size, a last group that is not full is left out of the chart. Groups of one member
    make no subgroups.
    """
    if sample.subgroups is not None:
        places: dict[str, list[int]] = {}
        for i, label in enumerate(sample.subgroups):
            places.setdefault(label, []).append(i)
        groups = tuple(tuple(group) for group in places.values())
    else:
        size = asked.subgroup_size or 1
        full = len(sample.values) // size
        groups = tuple(tuple(range(g * size, (g + 1) * size)) for g in range(full))
    sound = tuple(group for group in groups if len(group) >= 2)
    return sound if len(sound) >= 2 else None


def labels_of(sample: Sample, groups: Groups) -> tuple[str, ...]:
    """The label of each subgroup, its number where there are no labels."""
    if sample.subgroups is None:
        return tuple(str(i + 1) for i in range(len(groups)))
    return tuple(sample.subgroups[group[0]] for group in groups)


def chart_of(values: Values, sample: Sample, groups: Groups | None, fit: UnionFit) -> Chart:
    """The chart of the values: of subgroups where there are any, else of the single values.

    Limits stand 3 standard deviations of the charted statistic from its centre (ISO 7870-2). The limits of single
    values follow the model in use where it is not the normal one: its quantiles 0.135 % and 99.865 %.
    """
    if groups is None:
        return _individuals(values, fit)
    rows = [values[list(group)] for group in groups]
    sizes = tuple(len(row) for row in rows)
    with_range = max(sizes) <= LARGEST_FOR_RANGE and min(sizes) == max(sizes)
    within = mean_range_spread(rows) if with_range else mean_s_spread(rows)
    return Chart(
        title="X-bar and R" if with_range else "X-bar and s",
        labels=labels_of(sample, groups),
        sizes=sizes,
        location=_means(rows, sizes, within),
        spread=_ranges(rows, within) if with_range else _deviations(rows, sizes, within),
        within=within,
    )


def _individuals(values: Values, fit: UnionFit) -> Chart:
    n = len(values)
    within = moving_range_spread(values)
    k = control_chart_constants(2)
    ranges = np.abs(np.diff(values))
    if fit.family == "normal":
        centre = float(values.mean())
        lower, upper = centre - 3 * within.sigma, centre + 3 * within.sigma
    else:
        member = family(fit.family)
        centre = float(member.quantile(0.5, fit.theta))
        lower, upper = float(member.quantile(TAIL, fit.theta)), float(member.upper_quantile(TAIL, fit.theta))
    return Chart(
        title="individuals and moving range",
        labels=tuple(str(i + 1) for i in range(n)),
        sizes=(1,) * n,
        location=_level_track("individual values", values, centre, lower, upper),
        spread=_level_track("moving range", ranges, float(ranges.mean()), k.D3 * ranges.mean(), k.D4 * ranges.mean()),
        within=within,
    )


def _level_track(title: str, points: Values, centre: float, lower: float, upper: float) -> ChartTrack:
    n = len(points)
    return ChartTrack(
        title=title,
        points=tuple(float(p) for p in points),
        centre=(float(centre),) * n,
        lower=(float(lower),) * n,
        upper=(float(upper),) * n,
    )


def _means(rows: list[Values], sizes: tuple[int, ...], within: Spread) -> ChartTrack:
    grand = float(np.concatenate(rows).mean())
    half = 3 * within.sigma / np.sqrt(sizes)
    return _track("subgroup means", [row.mean() for row in rows], np.full(len(rows), grand), grand - half, grand + half)


def _ranges(rows: list[Values], within: Spread) -> ChartTrack:
    k = [control_chart_constants(len(row)) for row in rows]
    centre = within.sigma * np.array([c.d2 for c in k])
    lower, upper = centre * np.array([c.D3 for c in k]), centre * np.array([c.D4 for c in k])
    return _track("subgroup ranges", [np.ptp(row) for row in rows], centre, lower, upper)


def _deviations(rows: list[Values], sizes: tuple[int, ...], within: Spread) -> ChartTrack:
    k = [control_chart_constants(size) for size in sizes]
    centre = within.sigma * np.array([c.c4 for c in k])
    lower, upper = centre * np.array([c.B3 for c in k]), centre * np.array([c.B4 for c in k])
    return _track("subgroup standard deviations", [row.std(ddof=1) for row in rows], centre, lower, upper)


def _track(title: str, points: list[float], centre: Values, lower: Values, upper: Values) -> ChartTrack:
    return ChartTrack(
        title=title,
        points=tuple(float(p) for p in points),
        centre=tuple(float(c) for c in centre),
        lower=tuple(float(c) for c in lower),
        upper=tuple(float(c) for c in upper),
    )
