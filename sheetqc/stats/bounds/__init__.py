"""Bounds that carry the uncertainty of the model choice."""

from sheetqc.stats.bounds.guard_region import Guard
from sheetqc.stats.bounds.index import (
    Bounds,
    RateBounds,
    pp_bounds,
    ppk_bounds,
    ppk_lower,
    ppk_of_triples,
    ppk_upper,
    rate_bounds,
)
from sheetqc.stats.bounds.union import ModelUnion, Prior, UnionFit, model_union, triples_of

__all__ = [
    "Bounds",
    "Guard",
    "ModelUnion",
    "Prior",
    "RateBounds",
    "UnionFit",
    "model_union",
    "pp_bounds",
    "ppk_bounds",
    "ppk_lower",
    "ppk_of_triples",
    "ppk_upper",
    "rate_bounds",
    "triples_of",
]
