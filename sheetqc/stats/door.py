"""The check at the door of every public statistic: what comes in is an array of finite numbers that can vary."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.errors import DataError


def measured_values(x: ArrayLike, *, at_least: int = 2, varying: bool = True) -> NDArray[np.float64]:
    """The values as an array of shape (n,).

    Raises
    ------
    DataError : values that are no numbers, nan or infinite, too few, or all equal
    """
    try:
        values = np.asarray(x, dtype=float)
    except (TypeError, ValueError) as error:
        raise DataError("the values are not all numbers") from error
    if values.ndim != 1:
        raise DataError(f"expected one row of values, got an array of {values.ndim} dimensions")
    if len(values) < at_least:
        raise DataError(f"at least {at_least} values are needed, there are {len(values)}")
    if not np.all(np.isfinite(values)):
        raise DataError("a value is missing or infinite")
    if varying and values.min() == values.max():
        raise DataError("all values are equal")
    return values
