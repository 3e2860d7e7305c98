"""Dates and times from the day numbers a workbook stores."""

from __future__ import annotations

import datetime

_EPOCH_1900 = datetime.datetime(1899, 12, 30)  # the 1900 system counts a 29 February 1900 that never was
_EPOCH_1904 = datetime.datetime(1904, 1, 1)


def moment(serial: float, epoch_1904: bool) -> str:
    """A day number as text: a date, a date with time, or a time of day (below 1)."""
    epoch = _EPOCH_1904 if epoch_1904 else _EPOCH_1900
    days = serial + 1 if not epoch_1904 and 1 <= serial < 60 else serial
    try:
        at = epoch + datetime.timedelta(seconds=round(days * 86400))
    except (OverflowError, ValueError):
        return f"{serial:.15g}"
    if 0 <= serial < 1:
        return at.strftime("%H:%M:%S")
    if at.time() == datetime.time():
        return at.date().isoformat()
    return at.isoformat(sep=" ")
