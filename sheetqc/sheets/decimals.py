"""How many decimals a number of a characteristic is shown with."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

INDEX = "0.00"
INDEX_IN_FULL = "0.0000"
"""Where an index is listed as it is, not cut off to two decimals."""

MOMENT = "0.00;-0.00;0.00"
"""Looks like an index but is rounded, not cut off."""
PROBABILITY = '[<0.001]"< 0.001";0.000'
RATE = '[<0.01]"< 0.01";[<10]0.00;#,##0'
OBSERVED_RATE = "#,##0"
"""Of a counted rate, which is a number of parts over all and can be exactly 0."""

SHARE = "0%"
COUNT = "0"

MOST = 9


@dataclass(frozen=True, slots=True, kw_only=True)
class Decimals:
    """Number formats that follow the resolution of the readings."""

    reading: int
    """Decimals of a single value."""

    @property
    def value(self) -> str:
        """Of a value or a limit."""
        return decimal_format(self.reading)

    @property
    def mean(self) -> str:
        """Of a mean or a quantile, which say one digit more than a value."""
        return decimal_format(self.reading + 1)

    @property
    def spread(self) -> str:
        """Of a standard deviation."""
        return decimal_format(self.reading + 2)


def decimal_format(decimals: int) -> str:
    """A number format with so many decimals."""
    return "0" if decimals <= 0 else "0." + "0" * min(decimals, MOST)


def decimals_of(values: Sequence[float], limits: Sequence[float | None], resolution: float | None) -> Decimals:
    """Decimals that show the readings and their limits in full, within reason.

    Parameters
    ----------
    values : shape (n,)
    limits : limits, None where there is none
    resolution : step of the readings, when it was declared
    """
    given = [limit for limit in limits if limit is not None]
    known = [_digits_after_point(v) for v in (*values[:200], *given, *([resolution] if resolution else []))]
    most = max(known, default=2)
    return Decimals(reading=min(most, _sensible(values)))


def _digits_after_point(value: float) -> int:
    exponent = Decimal(f"{value:.10g}").normalize().as_tuple().exponent
    return max(0, -exponent) if isinstance(exponent, int) else 0


def _sensible(values: Sequence[float]) -> int:
    """Enough decimals to see a hundredth of the spread, however many digits were sent."""
    spread = max(values, default=0.0) - min(values, default=0.0)
    if spread <= 0:
        return 6
    return max(0, 3 - math.floor(math.log10(spread)))
