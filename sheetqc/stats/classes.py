"""Classes of a histogram: how many, and how many values fall into each."""

from __future__ import annotations

import math
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError


def sturges_classes(n: int) -> int:
    """Number of classes for n values.

    Reference: Sturges (1926), J. Amer. Statist. Assoc. 21, 65-66: 1 + log2 n, rounded up.
    """
    if n < 1:
        raise DataError("without values there are no classes")
    return (n - 1).bit_length() + 1


def scott_classes(x: ArrayLike) -> int:
    """Number of classes over the range of the values.

    Parameters
    ----------
    x : shape (n,), n >= 2, not all equal

    Reference: Scott (1979), Biometrika 66, 605-610: width (24 sqrt(pi))^(1/3) s n^(-1/3), the best one for a normal
    density.
    """
    values = measured_values(x)
    width = (24 * math.sqrt(math.pi)) ** (1 / 3) * values.std(ddof=1) * len(values) ** (-1 / 3)
    return _over_the_range(values, width)


def freedman_diaconis_classes(x: ArrayLike) -> int:
    """Number of classes over the range of the values, not moved by a few wild ones.

    Where half of the values are equal the quartiles give no width and Scott's rule is taken.

    Parameters
    ----------
    x : shape (n,), n >= 2, not all equal

    Reference: Freedman & Diaconis (1981), Z. Wahrscheinlichkeitstheorie 57, 453-476: width 2 IQR n^(-1/3), quartiles
    interpolated between order statistics at (n - 1) p.
    """
    values = measured_values(x)
    low, high = np.quantile(values, [0.25, 0.75])
    if high <= low:
        return scott_classes(values)
    return _over_the_range(values, float(2 * (high - low) * len(values) ** (-1 / 3)))


def _over_the_range(values: np.ndarray[tuple[int], np.dtype[np.float64]], width: float) -> int:
    return max(1, math.ceil(float(np.ptp(values)) / width))


def class_counts(x: ArrayLike, borders: ArrayLike, closed: Literal["left", "right"] = "left") -> tuple[int, ...]:
    """How many values fall into each class.

    Parameters
    ----------
    x : shape (n,)
    borders : shape (k + 1,), rising, reaching over all values
    closed : the side of a class that a value on its border belongs to; the outermost borders always belong

    Raises
    ------
    DataError : borders that do not rise, or a value beyond them
    """
    values = measured_values(x, at_least=1, varying=False)
    edges = measured_values(borders)
    if np.any(np.diff(edges) <= 0):
        raise DataError("the borders of classes have to rise")
    if values.min() < edges[0] or values.max() > edges[-1]:
        raise DataError(f"the values from {values.min():g} to {values.max():g} reach beyond the classes")
    side: Literal["left", "right"] = "right" if closed == "left" else "left"
    place = np.searchsorted(edges, values, side=side) - 1
    place = np.clip(place, 0, len(edges) - 2)
    return tuple(int(count) for count in np.bincount(place, minlength=len(edges) - 1))
