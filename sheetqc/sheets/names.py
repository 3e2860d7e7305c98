"""Defined names of results: qc.<Id>.<Quantity>."""

from __future__ import annotations

import re
from collections.abc import Sequence

_UNSAFE = re.compile(r"[^A-Za-z0-9_.]")
LONGEST = 255


def safe_ids(ids: Sequence[str]) -> tuple[str, ...]:
    """Ids as they can stand in a defined name, different from one another whatever their case."""
    used: set[str] = set()
    given = []
    for wanted in ids:
        base = _UNSAFE.sub("_", wanted.strip()) or "_"
        name, number = base, 2
        while name.casefold() in used:
            name, number = f"{base}_{number}", number + 1
        used.add(name.casefold())
        given.append(name)
    return tuple(given)


def defined_name(safe_id: str, quantity: str) -> str:
    """The defined name of a quantity."""
    return f"qc.{safe_id}.{quantity}"[:LONGEST]
