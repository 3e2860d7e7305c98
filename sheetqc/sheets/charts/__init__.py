"""The charts of a characteristic, one function each. The register `CHARTS` is the only list of what exists."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from sheetqc.sheets.charts.candidates import candidate_indices
from sheetqc.sheets.charts.common import Drawing
from sheetqc.sheets.charts.control import location_track, spread_track
from sheetqc.sheets.charts.histogram import histogram
from sheetqc.sheets.charts.probability import probability_plot
from sheetqc.sheets.charts.request import ChartRequest
from sheetqc.sheets.charts.time_order import time_order

__all__ = ["CHARTS", "ChartKind", "ChartRequest", "Drawing"]


@dataclass(frozen=True, slots=True, kw_only=True)
class ChartKind:
    """A chart: its key (also that of its alternative text), the question it stands beside, its height in rows."""

    key: str
    question: str
    rows: int
    draw: Callable[[ChartRequest], Drawing | None]


CHARTS: tuple[ChartKind, ...] = (
    ChartKind(key="time_order", question="data", rows=9, draw=time_order),
    ChartKind(key="location", question="steady", rows=7, draw=location_track),
    ChartKind(key="spread", question="steady", rows=6, draw=spread_track),
    ChartKind(key="histogram", question="shape", rows=12, draw=histogram),
    ChartKind(key="probability", question="shape", rows=11, draw=probability_plot),
    ChartKind(key="candidates", question="capable", rows=12, draw=candidate_indices),
)
