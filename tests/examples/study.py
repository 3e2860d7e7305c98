"""What an example workbook asks: header, characteristics, measured rows."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

ORDER = (
    "Id",
    "Name",
    "Unit",
    "Nominal",
    "LSL",
    "USL",
    "Natural lower bound",
    "Kind",
    "Resolution",
    "Subgroup size",
    "Class",
    "Claimed index",
    "Claimed value",
)
"""Headings of the pump works' form, from left to right."""

Entry = str | float | int | datetime.datetime | datetime.date | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Asked:
    """A study to be written into a workbook; a label or heading that is not among the keys is left out."""

    title: str
    header: dict[str, Entry]
    characteristics: Sequence[dict[str, Entry]]
    columns: dict[str, Sequence[Entry]]
    decimals: dict[str, int] = field(default_factory=dict)

    @property
    def headings(self) -> list[str]:
        """Headings of the characteristics, each that any of them uses: the form's in its order, then others."""
        used = list(dict.fromkeys(name for row in self.characteristics for name in row))
        return [name for name in ORDER if name in used] + [name for name in used if name not in ORDER]

    def rows(self) -> Iterable[tuple[Entry, ...]]:
        """The measured rows."""
        return zip(*self.columns.values(), strict=True)


def subgroups(count: int, size: int) -> list[Entry]:
    """Labels 1, 1, 1, ... 2, 2, 2, ..."""
    return [number for number in range(1, count + 1) for _ in range(size)]


def times(start: str, minutes: float, count: int) -> list[Entry]:
    """Moments at even distance, within shifts from 6:00 to 22:00."""
    moment = datetime.datetime.fromisoformat(start)
    moments: list[Entry] = []
    for _ in range(count):
        moments.append(moment)
        moment += datetime.timedelta(minutes=minutes)
        if moment.hour >= 22:
            moment = (moment + datetime.timedelta(days=1)).replace(hour=6, minute=0)
    return moments
