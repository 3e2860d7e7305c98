"""The check at the door of every public statistic: what comes in is an array of finite numbers that can vary."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.errors import DataError

LARGEST = 1e150
"""Size beyond which squares and their sums leave double precision; nothing measured comes near it."""
SMALLEST_SPREAD = 1e-150
"""Distance of the extremes below which they do so at the other end."""


def measured_values(x: ArrayLike, *, at_least: int = 2, varying: bool = True) -> NDArray[np.float64]:
    """The values as an array of shape (n,).

    Raises
    ------
    DataError : values that are no numbers, nan or infinite, too few, all equal, or of a size nothing measured has
    """
    values = _numbers(x)
    if values.ndim != 1:
        raise DataError(f"expected one row of values, got an array of {values.ndim} dimensions")
    return _checked(values, at_least, varying)


def measured_rows(x: ArrayLike, *, at_least: int = 2, varying: bool = True) -> NDArray[np.float64]:
    """Samples of one size as an array of shape (..., n), each held to what `measured_values` asks of one."""
    return _checked(np.atleast_1d(_numbers(x)), at_least, varying)


def _numbers(x: ArrayLike) -> NDArray[np.float64]:
    try:
        return np.asarray(x, dtype=float)
    except (TypeError, ValueError) as error:
        raise DataError("the values are not all numbers") from error


def _checked(values: NDArray[np.float64], at_least: int, varying: bool) -> NDArray[np.float64]:
    n = values.shape[-1]
    if n < at_least:
        raise DataError(f"at least {at_least} values are needed, there {'is' if n == 1 else 'are'} {n}")
    if not values.size:
        return values
    if not np.all(np.isfinite(values)):
        raise DataError("a value is missing or infinite")
    largest = float(np.abs(values).max())
    if largest > LARGEST:
        raise DataError(f"a value is {largest:g} in size: nothing measured is")
    if varying:
        spread = float((values.max(axis=-1) - values.min(axis=-1)).min())
        if spread == 0:
            raise DataError("all values are equal")
        if spread < SMALLEST_SPREAD:
            raise DataError(f"the values differ by {spread:g} at most: give them in a smaller unit")
    return values
