"""Names of sheets: those there are, and free ones near those wanted."""

from __future__ import annotations

import re
from collections.abc import Sequence

LONGEST = 31  # UTF-16 units
_ILLEGAL = re.compile(r"[\[\]:*?/\\\x00-\x1f]")
_RESERVED = frozenset(("history",))


def free_sheet_names(wanted: Sequence[str], taken: Sequence[str]) -> tuple[str, ...]:
    """Sheet names as near as can be to the wanted ones, none of them taken.

    Parameters
    ----------
    wanted : names in the order in which they are given out
    taken : names of the sheets there are already

    Returns
    -------
    tuple of str : as many as wanted; at most 31 UTF-16 units, without the characters []:*?/\\, without a leading or
        trailing apostrophe, different from one another and from those taken whatever their case
    """
    used = {name.casefold() for name in taken} | _RESERVED
    given = []
    for name in wanted:
        free = _free(_legal(name), used)
        used.add(free.casefold())
        given.append(free)
    return tuple(given)


def _legal(name: str) -> str:
    text = _ILLEGAL.sub("_", name).strip().strip("'").strip()
    return _shortened(text, LONGEST) or "Sheet"


def _free(name: str, used: set[str]) -> str:
    if name.casefold() not in used:
        return name
    number = 2
    while True:
        ending = f" ({number})"
        tried = _shortened(name, LONGEST - len(ending)) + ending
        if tried.casefold() not in used:
            return tried
        number += 1


def _shortened(text: str, units: int) -> str:
    """The longest beginning of at most so many UTF-16 units that does not end in a blank or an apostrophe."""
    while len(text.encode("utf-16-le", "surrogatepass")) > 2 * units:
        text = text[:-1]
    return text.rstrip(" '")
