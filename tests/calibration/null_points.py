"""Makes the tables of upper points of A-squared: `python -m tests.calibration.null_points [FAMILY ...]`.

For every grid point and sample size: samples from the family, a maximum-likelihood fit of each, A-squared at the fit,
and its upper points. Takes about a quarter of an hour for all families on one core.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

from sheetqc.stats import a_squared, families
from sheetqc.stats.null_points import PROBABILITIES, TABLES
from sheetqc.stats.shape_coordinates import COORDINATES

SEED = 20260401
BATCH = 2000
INTO = Path(__file__).parents[2] / "sheetqc" / "stats" / "null_points"

# parameters to simulate at; for two coordinates the product of both lists
GRID: dict[str, list[tuple[float, ...]]] = {
    "exponential": [(1.0,)],
    "half_normal": [(1.0,)],
    "rayleigh": [(1.0,)],
    "logistic": [(0.0, 1.0)],
    "gumbel_max": [(0.0, 1.0)],
    "gamma": [(a, 1.0) for a in (1e4, 20.0, 5.0, 2.0, 1.0, 0.5, 0.2)],
    "folded_normal": [(r, 1.0) for r in (0.0, 0.5, 1.0, 1.5, 2.0, 3.0, 5.0)],
    "inverse_gaussian": [(1.0, ratio) for ratio in (1000.0, 20.0, 4.0, 1.0, 0.2, 0.05)],
    "gev": [(0.0, 1.0, xi) for xi in (-0.6, -0.4, -0.2, 0.0, 0.25, 0.6)],
    "lognormal_threshold": [(0.0, s, 0.0) for s in (0.05, 0.2, 0.4, 0.7, 1.0, 1.4)],
    "weibull_threshold": [(k, 1.0, 0.0) for k in (10.0, 3.5, 2.0, 1.5, 1.1, 0.8)],
    "gamma_threshold": [(a, 1.0, 0.0) for a in (50.0, 8.0, 3.0, 1.6, 1.0, 0.6)],
    "johnson_su": [(w * d, d, 0.0, 1.0) for d in (8.0, 2.5, 1.5, 1.0) for w in (0.0, 0.7, 2.2)],
    "johnson_sb": [(w * d, d, 0.0, 1.0) for d in (3.0, 1.5, 1.0, 0.7) for w in (0.0, 1.0, 2.5)],
}
# the more a fit costs the fewer samples and sizes; without a shape 40,000 samples at five sizes
WITHOUT_SHAPE = (40000, (12, 25, 50, 100, 250))
WITH_SHAPE = (12000, (15, 50, 200))
WITH_TWO_SHAPES = (6000, (15, 50, 200))


def upper_points(name: str, theta: tuple[float, ...], n: int, samples: int, seed: int) -> np.ndarray:
    """The upper points of A-squared, shape (probabilities,)."""
    family = families.family(name)
    rng = np.random.default_rng((SEED, seed, n))
    found = []
    for _ in range(samples // BATCH):
        x = family.sample(np.tile(theta, (BATCH, 1)), n, rng)
        found.append(a_squared(x, family, family.fit(x)))
    return np.quantile(np.concatenate(found), 1 - np.array(PROBABILITIES))


def write(name: str) -> None:
    """Simulates one family and writes its file."""
    grid = [COORDINATES[name](theta) for theta in GRID[name]]
    samples, sizes = (WITHOUT_SHAPE, WITH_SHAPE, WITH_TWO_SHAPES)[len(grid[0])]
    tables = [[upper_points(name, t, n, samples, i) for n in sizes] for i, t in enumerate(GRID[name])]
    lines = [
        f'"""Upper points of A-squared, {name}: {samples} samples a row, seed {SEED}.',
        "",
        "Made by tests.calibration.null_points.",
        '"""',
        "",
        "# fmt: off",
        f"SIZES = {sizes}",
        "GRID = (",
        *(f"    ({', '.join(f'{v:.6g}' for v in point)}{',' if len(point) == 1 else ''})," for point in grid),
        ")",
        "POINTS = (",
    ]
    for table in tables:
        lines.append("    (")
        lines += [f"        ({', '.join(f'{v:.4g}' for v in row)})," for row in table]
        lines.append("    ),")
    (INTO / f"{name}.py").write_text("\n".join([*lines, ")", ""]), encoding="utf-8")


if __name__ == "__main__":
    for chosen in sys.argv[1:] or TABLES:
        write(chosen)
        print(chosen, flush=True)
