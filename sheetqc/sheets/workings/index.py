"""The index by the quantile method of ISO 22514-2, as formulas and as the values they give."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.sheets.cells import NONE, Column, Placed, Value
from sheetqc.sheets.expressions import literal
from sheetqc.sheets.workings.inputs import Inputs

_NO = literal(NONE)


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """References of the limits and what stands there."""

    lower: Placed
    upper: Placed

    @property
    def count(self) -> str:
        """Expression: how many limits there are."""
        return f"COUNT({self.lower.ref},{self.upper.ref})"

    @property
    def both(self) -> bool:
        """Whether there are two limits now."""
        return self.lower.is_number and self.upper.is_number

    @property
    def any(self) -> bool:
        """Whether there is a limit now."""
        return self.lower.is_number or self.upper.is_number


def limits_of(inputs: Inputs) -> Limits:
    """The limits among the entry cells."""
    return Limits(lower=inputs.lower, upper=inputs.upper)


def ppk(limits: Limits, low: Placed, median: Placed, high: Placed) -> tuple[str, Value]:
    """Ppk from the three quantiles: the smaller of the shares of the nearer limit's distance."""
    lower, upper = limits.lower, limits.upper
    above = f"({upper.ref}-{median.ref})/({high.ref}-{median.ref})"
    below = f"({median.ref}-{lower.ref})/({median.ref}-{low.ref})"
    formula = (
        f"IF({limits.count}=0,{_NO},MIN(IF(ISNUMBER({upper.ref}),{above},9E+99),"
        f"IF(ISNUMBER({lower.ref}),{below},9E+99)))"
    )
    return formula, _least(limits, np.array([[low.number, median.number, high.number]]))


def pp(limits: Limits, low: Placed, high: Placed) -> tuple[str, Value]:
    """Pp from the outer quantiles; only with both limits."""
    lower, upper = limits.lower, limits.upper
    formula = f"IF({limits.count}=2,({upper.ref}-{lower.ref})/({high.ref}-{low.ref}),{_NO})"
    if not (lower.is_number and upper.is_number):
        return formula, NONE
    return formula, (upper.number - lower.number) / (high.number - low.number)


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """Quantile triples of parameter values on the border of likelihood regions, a row each."""

    low: Column
    median: Column
    high: Column

    @property
    def count(self) -> int:
        """How many triples there are."""
        return len(self.low.values)

    def part(self, first: int, count: int) -> Region:
        """Some of the rows, counted from 0."""
        return Region(
            low=self.low.part(first, count), median=self.median.part(first, count), high=self.high.part(first, count)
        )

    @property
    def triples(self) -> NDArray[np.float64]:
        """The numbers, shape (count, 3)."""
        return np.array([self.low.values, self.median.values, self.high.values], dtype=float).T


def least_ppk(limits: Limits, region: Region) -> tuple[str, Value]:
    """The smallest Ppk over a region. SUMPRODUCT makes every spreadsheet take the ranges whole."""
    above, below = _sides(limits, region)
    formula = (
        f"IF({limits.count}=0,{_NO},MIN(IF(ISNUMBER({limits.upper.ref}),SUMPRODUCT(MIN({above})),9E+99),"
        f"IF(ISNUMBER({limits.lower.ref}),SUMPRODUCT(MIN({below})),9E+99)))"
    )
    return formula, _least(limits, region.triples)


def greatest_ppk(limits: Limits, region: Region) -> tuple[str, Value]:
    """The largest Ppk over a region; the smaller of two sides is (a + b - |a - b|) / 2."""
    above, below = _sides(limits, region)
    both = f"SUMPRODUCT(MAX(({above}+{below}-ABS({above}-{below}))/2))"
    formula = (
        f"IF({limits.count}=0,{_NO},IF({limits.count}=2,{both},"
        f"IF(ISNUMBER({limits.upper.ref}),SUMPRODUCT(MAX({above})),SUMPRODUCT(MAX({below})))))"
    )
    values = _ppk_values(limits, region.triples)
    return formula, NONE if values is None else float(values.max())


def extreme_pp(limits: Limits, region: Region, which: str) -> tuple[str, Value]:
    """The smallest (`which` is MIN) or largest (MAX) Pp over a region."""
    lower, upper = limits.lower, limits.upper
    spread = f"({region.high.ref}-{region.low.ref})"
    formula = f"IF({limits.count}=2,SUMPRODUCT({which}(({upper.ref}-{lower.ref})/{spread})),{_NO})"
    if not (lower.is_number and upper.is_number):
        return formula, NONE
    values = (upper.number - lower.number) / (region.triples[:, 2] - region.triples[:, 0])
    return formula, float(values.min() if which == "MIN" else values.max())


def _sides(limits: Limits, region: Region) -> tuple[str, str]:
    low, median, high = region.low.ref, region.median.ref, region.high.ref
    return (
        f"({limits.upper.ref}-{median})/({high}-{median})",
        f"({median}-{limits.lower.ref})/({median}-{low})",
    )


def _ppk_values(limits: Limits, triples: NDArray[np.float64]) -> NDArray[np.float64] | None:
    low, median, high = triples.T
    sides = []
    if limits.upper.is_number:
        sides.append((limits.upper.number - median) / (high - median))
    if limits.lower.is_number:
        sides.append((median - limits.lower.number) / (median - low))
    return np.min(sides, axis=0) if sides else None


def _least(limits: Limits, triples: NDArray[np.float64]) -> Value:
    values = _ppk_values(limits, triples)
    return NONE if values is None else float(values.min())
