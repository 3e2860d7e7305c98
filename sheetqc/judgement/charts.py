"""The control chart that suits the values: individuals and moving range, X-bar and R, X-bar and s."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from sheetqc.assessment import ChartTrack
from sheetqc.judgement.shape import TAIL, Values
from sheetqc.stats.bounds import UnionFit
from sheetqc.stats.control_charts import Track, individuals_chart, mean_range_chart, mean_s_chart
from sheetqc.stats.families import family
from sheetqc.stats.within import Spread
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
    """The chart of the values: of subgroups where there are any with a spread within, else of the single values.

    Limits stand 3 standard deviations of the charted statistic from its centre (ISO 7870-2). The limits of single
    values follow the model in use where it is not the normal one: its quantiles 0.135 % and 99.865 %.
    """
    rows = [] if groups is None else [values[list(group)] for group in groups]
    if groups is None or all(np.ptp(row) == 0 for row in rows):
        return _individuals(values, fit)
    sizes = {len(row) for row in rows}
    with_range = max(sizes) <= LARGEST_FOR_RANGE and len(sizes) == 1
    found = mean_range_chart(rows) if with_range else mean_s_chart(rows)
    return Chart(
        title="X-bar and R" if with_range else "X-bar and s",
        labels=labels_of(sample, groups),
        sizes=found.sizes,
        location=_track("subgroup means", found.location),
        spread=_track("subgroup ranges" if with_range else "subgroup standard deviations", found.spread),
        within=found.within,
    )


def _individuals(values: Values, fit: UnionFit) -> Chart:
    found = individuals_chart(values)
    location = found.location
    if fit.family != "normal":
        location = _by_quantiles(values, fit)
    return Chart(
        title="individuals and moving range",
        labels=tuple(str(i + 1) for i in range(len(values))),
        sizes=found.sizes,
        location=_track("individual values", location),
        spread=_track("moving range", found.spread),
        within=found.within,
    )


def _by_quantiles(values: Values, fit: UnionFit) -> Track:
    member, level = family(fit.family), np.ones(len(values))
    return Track(
        points=values,
        centre=float(member.quantile(0.5, fit.theta)) * level,
        lower=float(member.quantile(TAIL, fit.theta)) * level,
        upper=float(member.upper_quantile(TAIL, fit.theta)) * level,
    )


def _track(title: str, track: Track) -> ChartTrack:
    return ChartTrack(
        title=title,
        points=tuple(track.points.tolist()),
        centre=tuple(track.centre.tolist()),
        lower=tuple(track.lower.tolist()),
        upper=tuple(track.upper.tolist()),
    )
