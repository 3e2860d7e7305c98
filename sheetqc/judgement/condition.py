"""A condition that a capability statement rests on and that does not hold."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.finding import Cell, Finding


@dataclass(frozen=True, slots=True, kw_only=True)
class Condition:
    """Why no verdict can be given: `reason` and `remedy` are full sentences."""

    code: str
    reason: str
    remedy: str
    cells: tuple[Cell, ...] = ()

    def finding(self) -> Finding:
        """The condition as a finding of the weight "stop"."""
        return Finding(code=self.code, level="stop", text=f"{self.reason} {self.remedy}", cells=self.cells)
