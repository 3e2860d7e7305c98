"""Upper points of A-squared for families with all parameters estimated, one generated file per family.

Made by `python -m tests.calibration.null_points`, which says how: samples of each size are drawn from the family at
each grid point, fitted by maximum likelihood, and the upper points of A-squared taken. The files are data; run the
script to renew them.
"""

from __future__ import annotations

from importlib import import_module

PROBABILITIES = (0.95, 0.9, 0.75, 0.5, 0.25, 0.15, 0.1, 0.05, 0.025, 0.01, 0.005, 0.001)
"""Chance of a larger value, for each column of a table."""

TABLES = (
    "exponential",
    "half_normal",
    "rayleigh",
    "logistic",
    "gumbel_max",
    "gamma",
    "folded_normal",
    "inverse_gaussian",
    "gev",
    "lognormal_threshold",
    "weibull_threshold",
    "gamma_threshold",
    "johnson_su",
    "johnson_sb",
)
"""Families that have a file here."""

SAME_AS = {"weibull": "gumbel_max", "gumbel_min": "gumbel_max", "loglogistic": "logistic"}
"""Families whose A-squared is that of another one by a change of scale or sign."""


Grid = tuple[tuple[float, ...], ...]
Points = tuple[tuple[tuple[float, ...], ...], ...]


def points(name: str) -> tuple[Grid, tuple[int, ...], Points]:
    """Grid of shape coordinates, sample sizes, and for each grid point the table sizes x probabilities."""
    module = import_module(f"sheetqc.stats.null_points.{name}")
    return module.GRID, module.SIZES, module.POINTS
