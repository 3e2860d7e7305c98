"""Which index the verdict is on, and what it rests on."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from sheetqc.assessment import Estimate
from sheetqc.finding import Finding
from sheetqc.judgement.capability import Capability
from sheetqc.judgement.shape import Shape, Values
from sheetqc.judgement.steadiness import Steadiness
from sheetqc.judgement.terms import Terms


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """The judged index with its bounds; `estimate` is None where there is none."""

    name: str
    estimate: Estimate | None
    findings: tuple[Finding, ...] = ()


def judged_index(terms: Terms, shape: Shape, capability: Capability, values: Values, steadiness: Steadiness) -> Judged:
    """The index the requirement is on; Ppk instead of Cpk where the normal model, which Cpk presumes, does not hold.

    The bounds of Cpk never claim more than the models behind Ppk allow.
    """
    indices = capability.indices
    if terms.index == "Cpk" and shape.in_use != "normal":
        return Judged(name="Ppk", estimate=indices.Ppk, findings=(_instead(),))
    if terms.index == "Ppk" or indices.Cpk is None or indices.Ppk is None:
        return Judged(name=terms.index, estimate=indices.Ppk if terms.index == "Ppk" else indices.Cpk)
    ratio = float(np.std(values, ddof=1)) / steadiness.within.sigma
    cpk, ppk = indices.Cpk, indices.Ppk
    lower = None if cpk.lower is None or ppk.lower is None else min(cpk.lower, ppk.lower * ratio)
    return Judged(name="Cpk", estimate=replace(cpk, lower=lower))


def _instead() -> Finding:
    return Finding(
        code="judged-on-ppk",
        level="caution",
        text="The requirement is on Cpk, which presumes the normal model; another model is in use here, so the verdict "
        "is on Ppk.",
    )
