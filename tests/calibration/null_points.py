"""Makes the tables of upper points of A-squared: `python -m tests.calibration.null_points [FAMILY ...]`.

For every grid point and sample size: samples from the family, a maximum-likelihood fit of each, A-squared at the fit,
and its upper points. Takes about a quarter of an hour for all families on one core.
"""

from __future__ import annotations

import itertools
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
    "inverse_gaussian": [(1.0, ratio) for ratio in (1000.0, 20.0, 4.0, 1.0, 0.2, 0.05)],
    "lognormal_threshold": [(0.0, s, 0.0) for s in (0.05, 0.2, 0.4, 0.7, 1.0, 1.4)],
    "weibull_threshold": [(k, 1.0, 0.0) for k in (10.0, 3.5, 2.0, 1.5, 1.1, 0.8)],
    "gamma_threshold": [(a, 1.0, 0.0) for a in (50.0, 8.0, 3.0, 1.6, 1.0, 0.6)],
    "johnson_sb": [(w * d, d, 0.0, 1.0) for d in (3.0, 1.5, 1.0, 0.7) for w in (0.0, 1.0, 2.5)],
}
# the more a fit costs the fewer samples and sizes; without a shape 40,000 samples at five sizes
WITHOUT_SHAPE = (40000, (12, 25, 50, 100, 250))
WITH_SHAPE = (12000, (15, 50, 200))
WITH_TWO_SHAPES = (6000, (15, 50, 200))

# families whose estimated shape says much about the sample it came from: parameters to draw at, and for each
# coordinate the edges of the classes of its estimate and the value each class stands for
Axis = tuple[tuple[float, ...], tuple[float, ...]]
CONDITIONAL: dict[str, tuple[list[tuple[float, ...]], list[Axis]]] = {
    "folded_normal": (
        [(r, 1.0) for r in np.linspace(0, 4, 41).tolist()],
        [((1e-9, 0.6, 0.85, 1.05, 1.3, 1.6, 2.0, 2.8), (0.0, 0.4, 0.75, 0.95, 1.17, 1.45, 1.8, 2.4, 3.2))],
    ),
    "gev": (
        [(0.0, 1.0, xi) for xi in np.linspace(-0.7, 0.7, 29).tolist()],
        [((-0.98, -0.7, -0.5, -0.3, -0.1, 0.1, 0.35), (-1.0, -0.82, -0.6, -0.4, -0.2, 0.0, 0.22, 0.5))],
    ),
    "johnson_su": (
        [(w * d, d, 0.0, 1.0) for d in (1.0, 1.25, 1.6, 2.0, 3.0, 6.0) for w in (0.0, 0.3, 0.7, 1.2, 2.5)],
        [((0.2, 0.4, 0.6, 0.8), (0.08, 0.3, 0.5, 0.7, 0.95)), ((0.35, 0.9, 2.2), (0.15, 0.6, 1.5, 4.0))],
    ),
}
CONDITIONAL_SAMPLES = {"folded_normal": 120000, "gev": 60000, "johnson_su": 36000}
CONDITIONAL_SIZES = (15, 30, 60, 200)
FEWEST = 400
"""A class with fewer samples takes the points of its nearest neighbour."""


def conditional_points(name: str, n: int) -> list[np.ndarray]:
    """Upper points within each class of the estimated coordinates, in the order of their product.

    Given the estimates the distribution of A-squared hardly depends on the true parameters, as these are close to
    sufficient; near a border of the shape that holds much better than a table by the true shape.
    """
    thetas, axes = CONDITIONAL[name]
    family = families.family(name)
    rng = np.random.default_rng((SEED, n))
    statistics, classes = [], []
    for _ in range(CONDITIONAL_SAMPLES[name] // (50 * len(thetas))):
        x = family.sample(np.repeat(np.array(thetas), 50, axis=0), n, rng)
        fitted = family.fit(x)
        statistics.append(a_squared(x, family, fitted))
        places = np.array([COORDINATES[name](tuple(t)) for t in fitted.tolist()])
        inside = [np.digitize(places[:, i], edges) for i, (edges, _) in enumerate(axes)]
        classes.append(np.ravel_multi_index(tuple(inside), tuple(len(middles) for _, middles in axes)))
    a, c = np.concatenate(statistics), np.concatenate(classes)
    cells = list(itertools.product(*(range(len(middles)) for _, middles in axes)))
    full = [i for i in range(len(cells)) if np.sum(c == i) >= FEWEST]
    found = {i: np.quantile(a[c == i], 1 - np.array(PROBABILITIES)) for i in full}

    def nearest(cell: tuple[int, ...]) -> int:
        return min(full, key=lambda j: sum(abs(p - q) for p, q in zip(cell, cells[j], strict=True)))

    return [found[nearest(cell)] for cell in cells]


def upper_points(name: str, theta: tuple[float, ...], n: int, samples: int, seed: int) -> np.ndarray:
    """The upper points of A-squared, shape (probabilities,)."""
    family = families.family(name)
    rng = np.random.default_rng((SEED, seed, n))
    found = []
    for _ in range(samples // BATCH):
        x = family.sample(np.tile(theta, (BATCH, 1)), n, rng)
        found.append(a_squared(x, family, family.fit(x)))
    return np.quantile(np.concatenate(found), 1 - np.array(PROBABILITIES))


Table = tuple[list[tuple[float, ...]], tuple[int, ...], str, list[list[np.ndarray]]]


def _by_shape(name: str) -> Table:
    grid = [COORDINATES[name](theta) for theta in GRID[name]]
    samples, sizes = (WITHOUT_SHAPE, WITH_SHAPE, WITH_TWO_SHAPES)[len(grid[0])]
    tables = [[upper_points(name, t, n, samples, i) for n in sizes] for i, t in enumerate(GRID[name])]
    return grid, sizes, f"{samples} samples a row", tables


def _conditional(name: str) -> Table:
    axes = CONDITIONAL[name][1]
    grid = list(itertools.product(*(middles for _, middles in axes)))
    by_size = [conditional_points(name, n) for n in CONDITIONAL_SIZES]
    tables = [[points[i] for points in by_size] for i in range(len(grid))]
    return grid, CONDITIONAL_SIZES, f"{CONDITIONAL_SAMPLES[name]} samples a size, by estimated shape", tables


def write(name: str) -> None:
    """Simulates one family and writes its file."""
    grid, sizes, samples, tables = _conditional(name) if name in CONDITIONAL else _by_shape(name)
    lines = [
        f'"""Upper points of A-squared, {name}: {samples}, seed {SEED}.',
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
