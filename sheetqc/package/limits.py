"""Limits that protect this machine from what a file may unpack to."""

from __future__ import annotations

from dataclasses import dataclass

MIB = 1 << 20


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """What one workbook may ask of this machine.

    A deflated stream can unpack to about 1000 times its size; an honest sheet stays well below 300 times.
    """

    total: int = 2048 * MIB  # bytes, all members unpacked
    part: int = 128 * MIB  # bytes, one part that has to be parsed, unpacked
    ratio: float = 300.0  # unpacked over packed bytes of one member
    ratio_from: int = 16 * MIB  # bytes unpacked below which the ratio does not matter
    members: int = 20_000
    formula_scan: int = 24 * MIB  # bytes of sheets looked through for formulas that use an added name


DEFAULT_LIMITS = Limits()
