"""Indices, rates and counts of the model in use, as quantities that follow limits, requirement and model."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy.special import betaincinv, ndtri

from sheetqc.assessment import Estimate
from sheetqc.sheets.cells import NONE, Column, Placed, Value
from sheetqc.sheets.decimals import COUNT, INDEX, OBSERVED_RATE, RATE
from sheetqc.sheets.expressions import filled, literal
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.candidates import Candidates
from sheetqc.sheets.workings.index import Limits, Region, extreme_pp, greatest_ppk, least_ppk
from sheetqc.sheets.workings.inputs import Inputs
from sheetqc.sheets.workings.quantities import Quantities
from sheetqc.sheets.workings.values import Values

_NO = literal(NONE)


def add_capability(
    job: Job, quantities: Quantities, inputs: Inputs, limits: Limits, candidates: Candidates, whole: Region | None
) -> None:
    """Adds the place of the model in use, its quantiles, indices with bounds and expected rates."""
    if inputs.model is None:
        return
    place = [c.family for c in candidates.fits].index(job.assessment.model_in_use or "")
    k = quantities.add("model", f"MATCH({inputs.model.ref},{candidates.selectable.ref},0)", place + 1, COUNT)
    look = job.decimals

    def chosen(key: str, column: Column, number_format: str, name: str = "", analysed: Value | None = None) -> Placed:
        formula = f"INDEX({column.ref},{k.ref})"
        value = column.values[place]
        return quantities.add(key, formula, value, number_format, name=name, analysed=analysed)

    chosen("x_low", candidates.low, look.mean, "X0.135")
    chosen("x_median", candidates.median, look.mean, "X50")
    chosen("x_high", candidates.high, look.mean, "X99.865")
    found = job.assessment.indices
    estimate = chosen("Pp", candidates.pp, INDEX, "Pp", _part(found.Pp, "estimate"))
    _bound(quantities, "Pp_lower", estimate, extreme_pp(limits, whole, "MIN") if whole else None, found.Pp)
    _bound(quantities, "Pp_upper", estimate, extreme_pp(limits, whole, "MAX") if whole else None, found.Pp)
    estimate = chosen("Ppk", candidates.ppk, INDEX, "Ppk", _part(found.Ppk, "estimate"))
    _bound(quantities, "Ppk_lower", estimate, least_ppk(limits, whole) if whole else None, found.Ppk)
    _bound(quantities, "Ppk_upper", estimate, greatest_ppk(limits, whole) if whole else None, found.Ppk)
    chosen("below", candidates.below, RATE, "Expected_ppm_below")
    chosen("above", candidates.above, RATE, "Expected_ppm_above")
    chosen("total", candidates.total, RATE, "Expected_ppm")
    expected = job.assessment.nonconforming.expected
    quantities.as_analysed("total_lower", _part(expected, "lower"), RATE, name="Expected_ppm_lower")
    quantities.as_analysed("total_upper", _part(expected, "upper"), RATE, name="Expected_ppm_upper")


def _part(estimate: Estimate | None, part: str) -> float | None:
    return None if estimate is None else getattr(estimate, part)


def _bound(
    quantities: Quantities, key: str, estimate: Placed, bound: tuple[str, Value] | None, found: Estimate | None
) -> None:
    """A bound that never excludes the estimate: it rests on more models than the one in use."""
    which: Callable[[float, float], float] = min if key.endswith("lower") else max
    analysed = _part(found, "lower" if key.endswith("lower") else "upper")
    if bound is None:
        quantities.constant(key, NONE if analysed is None else analysed, INDEX, name=key)
        return
    value = bound[1]
    if estimate.is_number and not isinstance(value, str):
        value = which(value, estimate.number)
    formula = f"IF(ISNUMBER({estimate.ref}),{which.__name__.upper()}({estimate.ref},{bound[0]}),{_NO})"
    quantities.add(key, formula, value, INDEX, name=key, analysed=analysed)


def add_within(job: Job, quantities: Quantities, limits: Limits) -> None:
    """Adds Cp and Cpk, from the spread within subgroups and the normal model."""
    if "within_s" not in quantities or "mean" not in quantities or quantities["within_s"].number <= 0:
        return
    s, within = quantities["within_s"], quantities["within_s"].number
    mean, lower, upper = quantities["mean"], limits.lower, limits.upper
    found = job.assessment.indices
    both = f"IF({limits.count}=2,({upper.ref}-{lower.ref})/(6*{s.ref}),{_NO})"
    value = (upper.number - lower.number) / (6 * within) if lower.is_number and upper.is_number else NONE
    quantities.add("Cp", both, value, INDEX, name="Cp", analysed=_part(found.Cp, "estimate"))
    sides = []
    if upper.is_number:
        sides.append((upper.number - mean.number) / (3 * within))
    if lower.is_number:
        sides.append((mean.number - lower.number) / (3 * within))
    nearer = (
        f"IF({limits.count}=0,{_NO},MIN(IF(ISNUMBER({upper.ref}),({upper.ref}-{mean.ref})/(3*{s.ref}),9E+99),"
        f"IF(ISNUMBER({lower.ref}),({mean.ref}-{lower.ref})/(3*{s.ref}),9E+99)))"
    )
    quantities.add(
        "Cpk", nearer, min(sides) if sides else NONE, INDEX, name="Cpk", analysed=_part(found.Cpk, "estimate")
    )
    _add_proportional(quantities, "Cp", found.Cp)
    degrees = _degrees(found.Cpk, len(job.values), job.assessment.confidence) if limits.both else None
    if degrees is None:
        _add_proportional(quantities, "Cpk", found.Cpk)
    else:
        _add_normal_bounds(job, quantities, degrees)


def _add_proportional(quantities: Quantities, index: str, found: Estimate | None) -> None:
    """Bounds in the proportion they had at the analysis: exact for Cp, close for a one-sided Cpk."""
    estimate = quantities[index]
    for part in ("lower", "upper"):
        key, bound = f"{index}_{part}", _part(found, part)
        if bound is None or not estimate.is_number or estimate.number == 0:
            quantities.constant(key, NONE, INDEX, name=key)
            continue
        share = quantities.constant(f"{key}_share", (bound - estimate.number) / abs(estimate.number), "0.0000")
        formula = f"IF(ISNUMBER({estimate.ref}),{estimate.ref}+ABS({estimate.ref})*{share.ref},{_NO})"
        quantities.add(key, formula, bound, INDEX, analysed=bound, name=key)


def _degrees(found: Estimate | None, n: int, confidence: float) -> float | None:
    """Degrees of freedom behind bounds that lie alike on both sides (Bissell 1990); None for other bounds."""
    if found is None or found.estimate is None or found.lower is None or found.upper is None:
        return None
    half = (found.upper - found.lower) / 2
    rest = (half / float(ndtri(confidence))) ** 2 - 1 / (9 * n)
    alike = abs(found.upper + found.lower - 2 * found.estimate) <= 1e-9 * half
    return found.estimate**2 / (2 * rest) if alike and rest > 0 and found.estimate != 0 else None


def _add_normal_bounds(job: Job, quantities: Quantities, degrees: float) -> None:
    """Bounds of Cpk with two limits (Bissell 1990)."""
    nu = quantities.constant("within_degrees", degrees, "0.0")
    estimate, n, q = quantities["Cpk"], quantities["n"], quantities["confidence"]
    half = filled("NORM.S.INV({q})*SQRT(1/(9*{n})+{c}^2/(2*{nu}))", q=q.ref, n=n.ref, c=estimate.ref, nu=nu.ref)
    found = job.assessment.indices.Cpk
    for part, sign in (("lower", "-"), ("upper", "+")):
        bound = _part(found, part)
        formula = f"IF(ISNUMBER({estimate.ref}),{estimate.ref}{sign}{half},{_NO})"
        quantities.add(
            f"Cpk_{part}", formula, NONE if bound is None else bound, INDEX, analysed=bound, name=f"Cpk_{part}"
        )


def add_observed(job: Job, quantities: Quantities, limits: Limits, values: Values) -> None:
    """Adds the count of values outside and the bounds of its rate (Clopper & Pearson 1934)."""
    x, lower, upper, data = values.value.ref, limits.lower, limits.upper, job.values
    outside = np.zeros(len(data), dtype=bool)
    if lower.is_number:
        outside |= data < lower.number
    if upper.is_number:
        outside |= data > upper.number
    count, n = int(outside.sum()), quantities["n"]
    formula = (
        f"IF({limits.count}=0,{_NO},SUMPRODUCT(--((({x}<{lower.ref})*ISNUMBER({lower.ref})"
        f"+({x}>{upper.ref})*ISNUMBER({upper.ref}))>0)))"
    )
    c = quantities.add("observed", formula, count if limits.any else NONE, COUNT, name="Observed")
    confidence = quantities["confidence"]
    below = filled(
        "IF(ISNUMBER({c}),IF({c}=0,0,1E6*BETA.INV(1-{q},{c},{n}-{c}+1)),{no})",
        c=c.ref,
        n=n.ref,
        q=confidence.ref,
        no=_NO,
    )
    above = filled(
        "IF(ISNUMBER({c}),IF({c}={n},1E6,1E6*BETA.INV({q},{c}+1,{n}-{c})),{no})",
        c=c.ref,
        n=n.ref,
        q=confidence.ref,
        no=_NO,
    )
    low, high = _clopper_pearson(count, len(data), job.assessment.confidence) if limits.any else (NONE, NONE)
    quantities.add("observed_lower", below, low, OBSERVED_RATE, name="Observed_ppm_lower")
    quantities.add("observed_upper", above, high, OBSERVED_RATE, name="Observed_ppm_upper")


def _clopper_pearson(count: int, n: int, confidence: float) -> tuple[float, float]:
    """What the two formulas give: one-sided bounds in parts per million."""
    low = 0.0 if count == 0 else 1e6 * float(betaincinv(count, n - count + 1, 1 - confidence))
    high = 1e6 if count == n else 1e6 * float(betaincinv(count + 1, n - count, confidence))
    return low, high
