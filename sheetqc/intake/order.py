"""Whether times that were written beside values run forward."""

from __future__ import annotations

import datetime
import re
from collections.abc import Callable, Sequence

Moment = float
"""A point in time as a number that grows with it."""

_ISO = re.compile(r"(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})(?:[ T]+(\d{1,2}):(\d{2})(?::(\d{2})(?:\.\d+)?)?)?Z?")
_WRITTEN = re.compile(r"(\d{1,2})([./-])(\d{1,2})\2(\d{2,4})(?:[ T,]+(\d{1,2}):(\d{2})(?::(\d{2})(?:\.\d+)?)?)?")
_NUMBER = re.compile(r"\d+(?:\.\d+)?")


def first_backward(times: Sequence[str]) -> int | None:
    """The place of the first time that lies before the one above it; None when they run forward or cannot be told.

    Times of day alone cannot tell, since a night lies between; nor can times of which one cannot be read.
    """
    filled = [(place, text) for place, text in enumerate(times) if text]
    backward: list[int] = []
    for reader in _READERS:
        moments = [reader(text) for _, text in filled]
        known = [m for m in moments if m is not None]
        if len(known) < len(moments) or not known:
            continue
        place = next((filled[i + 1][0] for i in range(len(known) - 1) if known[i + 1] < known[i]), None)
        if place is None:
            return None
        backward.append(place)
    return min(backward) if backward else None


def _iso(text: str) -> Moment | None:
    match = _ISO.fullmatch(text)
    return None if match is None else _moment(match[1], match[2], match[3], match[4], match[5], match[6])


def _day_first(text: str) -> Moment | None:
    match = _WRITTEN.fullmatch(text)
    return None if match is None else _moment(match[4], match[3], match[1], match[5], match[6], match[7])


def _month_first(text: str) -> Moment | None:
    match = _WRITTEN.fullmatch(text)
    if match is None or match[2] == ".":
        return None
    return _moment(match[4], match[1], match[3], match[5], match[6], match[7])


def _number(text: str) -> Moment | None:
    return float(text) if _NUMBER.fullmatch(text) else None


_READERS: tuple[Callable[[str], Moment | None], ...] = (_iso, _day_first, _month_first, _number)


def _moment(year: str, month: str, day: str, *clock: str | None) -> Moment | None:
    hour, minute, second = (int(part or 0) for part in clock)
    full = int(year) + (2000 if len(year) == 2 else 0)
    try:
        at = datetime.datetime(full, int(month), int(day), hour, minute, second, tzinfo=datetime.UTC)
    except ValueError:
        return None
    return at.timestamp()
