"""A size that the values of a characteristic are expected near."""

from __future__ import annotations

from collections.abc import Iterable
from statistics import median

from sheetqc.intake.content import Held
from sheetqc.study import Characteristic

_ENOUGH = 501


def reference_size(contents: Iterable[Held], asked: Characteristic) -> float | None:
    """The median size of the plain numbers, else of the limits; None when there are neither."""
    plain: list[float] = []
    for held in contents:
        if isinstance(held, float) and held:
            plain.append(abs(held))
            if len(plain) >= _ENOUGH:
                break
    if plain:
        return median(plain)
    limits = asked.limits
    sizes = [abs(v) for v in (limits.nominal, limits.lower, limits.upper) if v]
    return median(sizes) if sizes else None
