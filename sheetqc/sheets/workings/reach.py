"""Fits that are beyond the reach of spreadsheet functions, and what stands in for them in a picture."""

from __future__ import annotations

from sheetqc.assessment import ModelFit
from sheetqc.sheets.cells import Placed
from sheetqc.sheets.expressions import constant
from sheetqc.stats.families import Family, family

LARGEST_SHAPE = 1e5
"""Shape up to which spreadsheets compute gamma and beta tails to ten digits (measured with LibreOffice)."""

SHAPES = ("shape", "alpha", "beta")

SIX = 5.999954
"""Distance of the outer quantiles of ISO 22514-2 under the normal model, in standard deviations."""


def beyond_reach(fit: ModelFit) -> bool:
    """Whether a spreadsheet's own functions fail on a fit: it is normal for the eye, and its numbers are not live."""
    template = family(fit.family).worksheet.cdf
    iterated = "GAMMA." in template or "BETA." in template
    return iterated and any(value > LARGEST_SHAPE for name, value in fit.parameters if name in SHAPES)


def drawn_as(fit: ModelFit) -> tuple[Family, tuple[float, ...]]:
    """The family and parameters that a curve is drawn with."""
    if not beyond_reach(fit):
        return family(fit.family), tuple(value for _, value in fit.parameters)
    found = fit.quantiles
    return family("normal"), (found.median, (found.high - found.low) / SIX)


def drawn_references(
    fit: ModelFit, parameters: tuple[str, ...], low: Placed, median: Placed, high: Placed
) -> tuple[str, ...]:
    """References or expressions for the parameters that a curve is drawn with."""
    if not beyond_reach(fit):
        return parameters
    return median.ref, f"(({high.ref}-{low.ref})/{constant(SIX)})"
