"""On what terms a characteristic is judged: requirement, index, confidence, seed."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.study import Characteristic, Header, IndexName, Stage

REQUIREMENT_BY_STAGE: dict[Stage, float] = {"preliminary": 1.67, "ongoing": 1.33}
"""Smallest acceptable index where the study names none (common practice, no source)."""

FEWEST_VALUES = 30
"""Values below which no statement is made (common practice: 30 to 50 measured values at least)."""

COMFORTABLE_VALUES = 50
"""Values below which a caution is given (common practice)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Terms:
    """Terms of one characteristic; `requirement_from` says in words where the requirement comes from."""

    requirement: float = 1.33
    requirement_from: str = "the default of sheetqc"
    index: IndexName = "Ppk"
    confidence: float = 0.95
    seed: int = 1


def terms_of(characteristic: Characteristic, header: Header) -> Terms:
    """The terms that hold for a characteristic: its own requirement, else the study's, else common practice."""
    requirement, origin = _requirement(characteristic, header)
    return Terms(
        requirement=requirement,
        requirement_from=origin,
        index=header.requirement_on,
        confidence=header.confidence,
    )


def _requirement(characteristic: Characteristic, header: Header) -> tuple[float, str]:
    if characteristic.requirement is not None:
        return characteristic.requirement, "the row of the characteristic"
    if header.requirement is not None:
        return header.requirement, "the study"
    if header.stage is not None:
        return REQUIREMENT_BY_STAGE[header.stage], f"common practice for a study called {header.stage}"
    return REQUIREMENT_BY_STAGE["ongoing"], "common practice, since the study names none"
