"""Fits against the general-purpose fitter: `python -m tests.benchmarks.fits`.

Prints for each family, on 40 data sets of 50 and 40 of 125 values: how far the log-likelihood lies below the best the
general library finds from several starts (negative: above it), the time of one fit of each, and the time per fit when
2,000 resamples of 125 values are fitted at once. Ratios come from the same run on the same machine.
"""

from __future__ import annotations

import sys
import time
import warnings
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import scipy.stats as st
from scipy import optimize

from sheetqc.stats.families import Family, family

SETS = 40
SIZES = (50, 125)
RESAMPLES = 2000
SEED = 20260402


@dataclass(frozen=True)
class General:
    """The general library's distribution: `fixed` parameters of its fit, and its order of free parameters."""

    distribution: st.rv_continuous
    fixed: dict[str, float]
    free: tuple[int, ...]


GENERAL: dict[str, General] = {
    "weibull": General(st.weibull_min, {"floc": 0}, (0, 2)),
    "gamma": General(st.gamma, {"floc": 0}, (0, 2)),
    "lognormal": General(st.lognorm, {"floc": 0}, (0, 2)),
    "gumbel_max": General(st.gumbel_r, {}, (0, 1)),
    "logistic": General(st.logistic, {}, (0, 1)),
    "loglogistic": General(st.fisk, {"floc": 0}, (0, 2)),
    "folded_normal": General(st.foldnorm, {"floc": 0}, (0, 2)),
    "inverse_gaussian": General(st.invgauss, {"floc": 0}, (0, 2)),
    "gev": General(st.genextreme, {}, (0, 1, 2)),
    "johnson_su": General(st.johnsonsu, {}, (0, 1, 2, 3)),
}

# a process of the family for each data set, varied in shape
PROCESSES: dict[str, tuple[tuple[float, ...], ...]] = {
    "weibull": ((0.9, 2.0), (1.5, 3.0), (2.5, 80.0), (8.0, 1.0)),
    "gamma": ((0.8, 1.0), (2.0, 0.5), (4.0, 2.0), (30.0, 0.1)),
    "lognormal": ((0.0, 0.25), (1.0, 0.5), (-2.0, 1.0), (3.0, 0.1)),
    "gumbel_max": ((0.0, 1.0), (10.0, 0.3), (-5.0, 2.0), (100.0, 15.0)),
    "logistic": ((0.0, 1.0), (10.0, 0.3), (-5.0, 2.0), (100.0, 15.0)),
    "loglogistic": ((0.0, 0.2), (1.0, 0.5), (-2.0, 0.8), (3.0, 0.1)),
    "folded_normal": ((0.0, 1.0), (0.8, 1.0), (1.5, 1.0), (0.05, 0.01)),
    "inverse_gaussian": ((1.0, 1.0), (5.0, 60.0), (0.02, 0.01), (3.0, 300.0)),
    "gev": ((0.0, 1.0, 0.1), (4.0, 0.2, -0.2), (20.0, 5.0, 0.3), (1.0, 1.0, -0.1)),
    "johnson_su": ((0.0, 1.5, 0.0, 1.0), (-2.0, 1.8, 4.0, 0.3), (1.0, 2.5, 10.0, 2.0), (0.0, 1.1, 5.0, 1.0)),
}


@dataclass(frozen=True)
class Result:
    """One line of the table; times in seconds per fit."""

    name: str
    worst_gap: float
    own_single: float
    own_batch: float
    general: float


def data_sets(name: str, n: int) -> list[np.ndarray]:
    """The data sets of a family."""
    rng = np.random.default_rng((SEED, n))
    processes = PROCESSES[name]
    return [family(name).sample(np.array(processes[i % len(processes)]), n, rng) for i in range(SETS)]


def general_fit(general: General, x: np.ndarray) -> tuple[float, ...]:
    """The general library's own fit, from its own start."""
    with warnings.catch_warnings(), np.errstate(all="ignore"):
        warnings.simplefilter("ignore")
        return tuple(general.distribution.fit(x, **general.fixed))


def best_of_general(general: General, x: np.ndarray, starts: list[tuple[float, ...]], bounded: bool) -> float:
    """The best log-likelihood of the general densities, from its own fits and simplex searches from several starts.

    `bounded` keeps a shape of the extreme-value family where its likelihood is bounded.
    """
    free = list(general.free)

    def value(p: tuple[float, ...]) -> float:
        if bounded and p[0] > 1:
            return -1e300
        with np.errstate(all="ignore"):
            v = float(np.sum(general.distribution.logpdf(x, *p)))
        return v if np.isfinite(v) else -1e300

    best = -1e300
    for start in starts:
        full = np.array(start, dtype=float)

        def loss(q: np.ndarray, full: np.ndarray = full) -> float:
            p = full.copy()
            p[free] = q
            return -value(tuple(p))

        options = {"xatol": 1e-9, "fatol": 1e-9, "maxiter": 3000, "maxfev": 3000}
        found = optimize.minimize(loss, full[free], method="Nelder-Mead", options=options)
        best = max(best, -float(found.fun), value(start))
    return best


def _timed(call: Callable[[], object]) -> float:
    begin = time.perf_counter()
    call()
    return time.perf_counter() - begin


def measured(name: str) -> Result:
    """Gap and times of one family."""
    f, general = family(name), GENERAL[name]
    worst, own, other, count = -np.inf, 0.0, 0.0, 0
    f.fit(data_sets(name, 50)[0])
    for n in SIZES:
        for x in data_sets(name, n):
            own += _timed(lambda x=x: f.fit(x))
            other += _timed(lambda x=x: general_fit(general, x))
            count += 1
            reached = float(f.log_likelihood(x, f.fit(x)))
            worst = max(worst, best_of_general(general, x, _starts(general, x), name == "gev") - reached)
    many = resamples(f, data_sets(name, 125)[0])
    batch = min(_timed(lambda: f.fit(many)) for _ in range(3))
    return Result(name, worst, own / count, batch / RESAMPLES, other / count)


def resamples(f: Family, x: np.ndarray) -> np.ndarray:
    """2,000 samples from the family fitted to x."""
    rng = np.random.default_rng(SEED)
    return f.sample(np.tile(f.fit(x), (RESAMPLES, 1)), len(x), rng)


def _starts(general: General, x: np.ndarray) -> list[tuple[float, ...]]:
    """Its own fit, and that fit shaken twice."""
    rng = np.random.default_rng(SEED)
    centre = np.array(general_fit(general, x))
    starts = [tuple(centre)]
    for _ in range(2):
        shaken = centre.copy()
        for i in general.free:
            shaken[i] += 0.3 * rng.normal() * (abs(centre[i]) + 0.1 * x.std())
        shaken[-1] = abs(shaken[-1]) + 1e-6 * x.std()
        starts.append(tuple(shaken))
    return starts


def main() -> None:
    """Prints the table."""
    print(f"{'family':18}{'worst gap':>12}{'general':>12}{'single':>12}{'ratio':>8}{'batch':>12}{'ratio':>8}")
    results = []
    for name in sys.argv[1:] or GENERAL:
        r = measured(name)
        results.append(r)
        print(
            f"{r.name:18}{r.worst_gap:12.2g}{1e6 * r.general:9.0f} us{1e6 * r.own_single:9.0f} us"
            f"{r.general / r.own_single:8.0f}{1e6 * r.own_batch:9.1f} us{r.general / r.own_batch:8.0f}",
            flush=True,
        )
    total = sum(r.general for r in results) / sum(r.own_single for r in results)
    print(f"single fits in total {total:.0f} times faster; worst gap {max(r.worst_gap for r in results):.2g}")


if __name__ == "__main__":
    main()
