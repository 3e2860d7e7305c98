"""Where things stand in the blank intake workbook; rows and columns count from 0, as the writer does."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """Room for values and characteristics, and the places that formulas refer to."""

    rows: int
    characteristics: int

    sheet_names = ("Study", "Characteristics", "Measurements", "Gauge", "Counts", "Kinds and models")

    @property
    def first_characteristic(self) -> int:
        """Row of the first characteristic on its sheet."""
        return 4

    @property
    def last_characteristic(self) -> int:
        """Row of the last characteristic on its sheet."""
        return self.first_characteristic + self.characteristics - 1

    @property
    def ids(self) -> str:
        """The Ids as an absolute reference."""
        return f"=Characteristics!$A${self.first_characteristic + 1}:$A${self.last_characteristic + 1}"
