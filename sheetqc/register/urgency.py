"""Which rows need a person first: those whose claim is most likely wrong, weighted by what is at stake."""

from __future__ import annotations

from collections.abc import Iterable
from statistics import NormalDist

from sheetqc.register.rows import Judged

_NORMAL = NormalDist()

_WEIGHTS = (
    (("critical", "safety", "cc", "kritisch", "critique", "critico", "crítico"), 3.0),
    (("significant", "special", "major", "important", "sc", "haupt", "majeur"), 2.0),
)


def weight(critical_class: str) -> float:
    """Weight of a characteristic's class: 3 critical or safety, 2 significant or major, 1 otherwise."""
    words = critical_class.lower().replace("-", " ").replace("/", " ").split()
    return next((w for names, w in _WEIGHTS if any(word.startswith(names) for word in words)), 1.0)


def chance_wrong(row: Judged) -> float:
    """Rough chance that the sender's claim does not hold: the claimed index, or else the requirement, being reached.

    The index is taken as normal about its estimate, with the spread that its one-sided bound implies. Where there is
    no verdict or nothing to compare, nothing is known: one half.
    """
    claim = row.requirement if row.claimed is None else max(row.claimed, row.requirement or row.claimed)
    if claim is None or row.estimate is None or row.lower is None or row.state == "no verdict":
        return 0.5
    spread = (row.estimate - row.lower) / _NORMAL.inv_cdf(min(max(row.confidence, 0.501), 0.9999))
    if spread <= 0:
        return float(row.estimate < claim)
    return _NORMAL.cdf((claim - row.estimate) / spread)


def by_urgency(rows: Iterable[Judged]) -> list[Judged]:
    """The rows, those first that need a person most; equals in their given order."""
    return sorted(rows, key=lambda row: -chance_wrong(row) * weight(row.critical_class))
