"""The assessment of values handed over as arrays, without a workbook."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from sheetqc.assessment import Assessment
from sheetqc.errors import UsageError
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.terms import Terms
from sheetqc.study import Characteristic, Limits, Sample


def assess(
    values: Sequence[float],
    *,
    lower: float | None,
    upper: float | None,
    nominal: float | None,
    natural_lower: float | None,
    natural_upper: float | None,
    kind: str | None,
    model: str | None,
    subgroups: Sequence[object] | int | None,
    streams: Sequence[object] | None,
    resolution: float | None,
    requirement: float,
    confidence: float,
    seed: int,
) -> Assessment:
    """The assessment of one characteristic; the parameters are those of `sheetqc.assess`.

    Raises
    ------
    UsageError : when values are not a finite row of numbers, labels do not run in step, or a setting makes no sense
    """
    row = _row(values)
    if not 0.5 <= confidence < 1:
        raise UsageError(f"confidence is {confidence}; expected at least 0.5 and below 1")
    if not requirement > 0:
        raise UsageError(f"requirement is {requirement}; expected a number above 0")
    size = subgroups if isinstance(subgroups, int) else None
    asked = Characteristic(
        id="values",
        limits=Limits(
            lower=_plain(lower),
            upper=_plain(upper),
            nominal=_plain(nominal),
            natural_lower=_plain(natural_lower),
            natural_upper=_plain(natural_upper),
        ),
        kind=kind or "",
        model=model or "",
        requirement=requirement,
        subgroup_size=size,
        resolution=_plain(resolution),
    )
    sample = Sample(
        characteristic=asked.id,
        values=row,
        subgroups=None if isinstance(subgroups, int) else _labels(subgroups, len(row), "subgroups"),
        streams=_labels(streams, len(row), "streams"),
    )
    terms = Terms(requirement=requirement, requirement_from="the call", confidence=confidence, seed=seed)
    return assessment_of(asked, sample, terms)


def _plain(value: float | None) -> float | None:
    return None if value is None else float(value)


def _row(values: Sequence[float]) -> tuple[float, ...]:
    try:
        array = np.asarray(values, dtype=float)
    except (TypeError, ValueError):
        raise UsageError("values hold something that is not a number") from None
    if array.ndim != 1:
        raise UsageError(f"values have {array.ndim} dimensions; expected one row of numbers")
    if not np.all(np.isfinite(array)):
        place = int(np.flatnonzero(~np.isfinite(array))[0])
        raise UsageError(f"value {place + 1} is {array[place]}; expected finite numbers only")
    return tuple(float(v) for v in array)


def _labels(labels: Sequence[object] | None, count: int, name: str) -> tuple[str, ...] | None:
    if labels is None:
        return None
    if len(labels) != count:
        raise UsageError(f"{name} has {len(labels)} labels for {count} values; expected one each")
    return tuple(str(label) for label in labels)
