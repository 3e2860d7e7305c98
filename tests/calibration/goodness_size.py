"""How often a 5 % Anderson-Darling test rejects a family that is right: `python -m tests.calibration.goodness_size`.

Prints the share of p-values at or below 0.05 for every family at typical shapes and 30, 50 and 125 values.
"""

from __future__ import annotations

import sys

import numpy as np

from sheetqc.stats import a_squared
from sheetqc.stats.families import family
from sheetqc.stats.goodness import normal_p_value
from sheetqc.stats.null_distribution import has_table, tabulated_p_value

SEED = 20260403
SIZES = (30, 50, 125)
SAMPLES = 5000

SHAPES: dict[str, tuple[tuple[float, ...], ...]] = {
    "normal": ((0.0, 1.0),),
    "lognormal": ((0.0, 0.5),),
    "lognormal_threshold": ((0.0, 0.3, 5.0), (0.0, 0.6, 5.0)),
    "weibull": ((1.5, 1.0),),
    "weibull_threshold": ((1.8, 1.0, 5.0), (3.0, 1.0, 5.0)),
    "gamma": ((0.8, 1.0), (3.0, 1.0), (30.0, 1.0)),
    "gamma_threshold": ((2.0, 1.0, 5.0), (6.0, 1.0, 5.0)),
    "exponential": ((1.0,),),
    "half_normal": ((1.0,),),
    "folded_normal": ((0.0, 1.0), (1.0, 1.0), (2.5, 1.0)),
    "rayleigh": ((1.0,),),
    "logistic": ((0.0, 1.0),),
    "loglogistic": ((0.0, 0.3),),
    "gumbel_max": ((0.0, 1.0),),
    "gumbel_min": ((0.0, 1.0),),
    "gev": ((0.0, 1.0, -0.3), (0.0, 1.0, 0.1)),
    "inverse_gaussian": ((1.0, 0.5), (1.0, 6.0)),
    "johnson_su": ((0.0, 1.3, 0.0, 1.0), (-1.5, 1.8, 0.0, 1.0)),
    "johnson_sb": ((0.0, 1.2, 0.0, 1.0), (1.5, 1.5, 0.0, 1.0)),
}


def rejected_share(name: str, theta: tuple[float, ...], n: int, samples: int, level: float = 0.05) -> float:
    """Share of samples of the family that its own test rejects."""
    f = family(name)
    rng = np.random.default_rng((SEED, n))
    x = f.sample(np.tile(theta, (samples, 1)), n, rng)
    scores = f.normal_scale(x)
    if scores is not None:
        fitted = np.stack([scores.mean(axis=-1), scores.std(axis=-1, ddof=1)], axis=-1)
        p = [normal_p_value(float(a), n) for a in a_squared(scores, "normal", fitted)]
    else:
        assert has_table(name)
        fitted = f.fit(x)
        statistics = a_squared(x, f, fitted)
        p = [tabulated_p_value(name, float(a), tuple(t), n) for a, t in zip(statistics, fitted.tolist(), strict=True)]
    return float(np.mean(np.array(p) <= level))


def main() -> None:
    """Prints the table."""
    for name in sys.argv[1:] or SHAPES:
        for theta in SHAPES[name]:
            shares = [rejected_share(name, theta, n, SAMPLES) for n in SIZES]
            print(f"{name:20}{theta!s:28}" + "".join(f"{100 * s:8.1f} %" for s in shares), flush=True)


if __name__ == "__main__":
    main()
