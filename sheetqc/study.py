"""Records of what was asked: a study as read from a workbook. Frozen; nothing reaches back into one."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from sheetqc.finding import Cell, Finding

Stage = Literal["preliminary", "ongoing"]
IndexName = Literal["Ppk", "Cpk"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Source:
    """The workbook a study was read from."""

    name: str
    sha256: str
    bytes: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """Limits of a characteristic, in its unit; None where there is none.

    `natural_lower` and `natural_upper` are bounds no value can pass (flatness >= 0); they are no specification.
    """

    lower: float | None = None
    upper: float | None = None
    nominal: float | None = None
    natural_lower: float | None = None
    natural_upper: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Characteristic:
    """One characteristic to be judged.

    `requirement` is the smallest acceptable index, None where the study's own applies;
    `cells` gives the cell of each field that was filled in, by field name ("lower", "upper", "requirement", ...).
    """

    id: str
    name: str = ""
    unit: str = ""
    limits: Limits = Limits()
    kind: str = ""
    model: str = ""
    requirement: float | None = None
    subgroup_size: int | None = None
    resolution: float | None = None
    critical_class: str = ""
    claimed_index: str = ""
    claimed_value: float | None = None
    note: str = ""
    cells: tuple[tuple[str, Cell], ...] = ()

    def cell(self, name: str) -> Cell | None:
        """The cell a field was read from, or None where it was not filled in."""
        return dict(self.cells).get(name)


@dataclass(frozen=True, slots=True, kw_only=True)
class LeftOut:
    """A measured value kept out of the study on the sender's word."""

    value: float | None
    cell: Cell
    reason: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Sample:
    """The measured values of one characteristic in time order; the tuples run in step.

    `cells` tells where each value stands; `subgroups`, `times` and `streams` are labels, None where not given.
    `censored` holds per value "" (measured), "<" (below the value) or ">" (above it); empty when all are measured.
    `copied` marks values whose cell does not hold a plain number (a repaired text): formulas cannot refer to them.
    `order_known` is False when the rows are known not to stand in time order.
    """

    characteristic: str
    values: tuple[float, ...]
    cells: tuple[Cell, ...] = ()
    subgroups: tuple[str, ...] | None = None
    times: tuple[str, ...] | None = None
    streams: tuple[str, ...] | None = None
    censored: tuple[str, ...] = ()
    copied: tuple[bool, ...] = ()
    left_out: tuple[LeftOut, ...] = ()
    order_known: bool = True


@dataclass(frozen=True, slots=True, kw_only=True)
class GaugeStudy:
    """Repeat measurements of parts by appraisers for one characteristic; the tuples run in step."""

    characteristic: str
    values: tuple[float, ...]
    parts: tuple[str, ...]
    appraisers: tuple[str, ...]
    trials: tuple[str, ...] = ()
    cells: tuple[Cell, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class DefectCounts:
    """Counts of defects by category; the tuples run in step, the optional ones are None where not given."""

    categories: tuple[str, ...]
    counts: tuple[float, ...]
    periods: tuple[str, ...] | None = None
    inspected: tuple[float, ...] | None = None
    costs: tuple[float, ...] | None = None
    cells: tuple[Cell, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Header:
    """What the workbook says of the study as a whole. Empty or None where not filled in."""

    part_number: str = ""
    part_name: str = ""
    supplier: str = ""
    lot: str = ""
    date: str = ""
    prepared_by: str = ""
    requirement: float | None = None
    requirement_on: IndexName = "Ppk"
    confidence: float = 0.95
    stage: Stage | None = None
    note: str = ""
    cells: tuple[tuple[str, Cell], ...] = ()

    def cell(self, name: str) -> Cell | None:
        """The cell a field was read from, or None where it was not filled in."""
        return dict(self.cells).get(name)


@dataclass(frozen=True, slots=True, kw_only=True)
class Study:
    """One workbook's study, as read."""

    source: Source
    header: Header = Header()
    characteristics: tuple[Characteristic, ...] = ()
    samples: tuple[Sample, ...] = ()
    gauge_studies: tuple[GaugeStudy, ...] = ()
    counts: tuple[DefectCounts, ...] = ()
    findings: tuple[Finding, ...] = ()
    findings_of: tuple[tuple[str, Finding], ...] = field(default=())
    """Findings about one characteristic, each with its Id."""

    def sample(self, characteristic: str) -> Sample | None:
        """The sample of a characteristic, by Id."""
        return next((s for s in self.samples if s.characteristic == characteristic), None)
