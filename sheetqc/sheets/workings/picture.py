"""Axes that the pictures of a characteristic share: that of its values and that of its index."""

from __future__ import annotations

from sheetqc.sheets.axis import Axis, axis_around
from sheetqc.sheets.job import Job


def value_axis(job: Job) -> Axis:
    """An axis that holds values, limits and the outer quantiles of the model in use."""
    asked = job.assessment.characteristic.limits
    others = [x for x in (asked.lower, asked.upper) if x is not None]
    model = job.assessment.model()
    if model is not None:
        others += [model.quantiles.low, model.quantiles.high]
    floor = 0.0 if min(job.values) >= 0 else None
    return axis_around(list(job.values), others, pieces=8, floor=floor)


def index_axis(job: Job) -> Axis | None:
    """An axis that holds the candidates' indices, their bounds and the requirement; None without any index."""
    found, required = job.assessment, job.assessment.verdict.requirement
    estimates = [m.ppk for m in found.models if m.ppk is not None]
    if not estimates:
        return None
    must = [*estimates, *([required] if required is not None else [])]
    bounds = [x for m in found.models for x in (m.ppk_lower, m.ppk_upper) if x is not None]
    if found.indices.Ppk is not None:
        bounds += [x for x in (found.indices.Ppk.lower, found.indices.Ppk.upper) if x is not None]
    reach = (max(must) - min(must)) or 0.5
    near = [x for x in bounds if min(must) - 3 * reach - 1 <= x <= max(must) + 3 * reach + 1]
    return axis_around([*must, *near], [], pieces=7, floor=0.0 if min(must + near) >= 0 else None)
