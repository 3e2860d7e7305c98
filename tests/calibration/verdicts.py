"""How often verdicts are wrong, and how often they are given: `python -m tests.calibration.verdicts` reruns it.

For each process a limit is placed so that the true quantile-method Ppk is exactly the requirement (1.33): "shown" is
then wrong, and so is "not met". Power is the share "shown" where the truth is 1.67. Upper, lower and both limits are
tried on the same values, with nothing declared, with the right kind declared and with the right model named.
"""

from __future__ import annotations

import argparse
import json
import time
from collections.abc import Iterator, Sequence
from dataclasses import asdict, dataclass
from pathlib import Path

import numpy as np

from sheetqc.kinds import KINDS
from sheetqc.stats.bounds import ModelUnion, model_union, ppk_bounds
from sheetqc.stats.families import family, names
from tests.calibration.populations import CALIBRATED, HELD_OUT, Array, Population

REQUIREMENT, BETTER = 1.33, 1.67
KNOWLEDGE = ("nothing", "kind", "model")
SIZES = (30, 50, 125, 300)
HERE = Path(__file__).parent


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """Shares of verdicts for one process, sample size, prior knowledge and kind of limits."""

    population: str
    held_out: bool
    n: int
    declared: str
    limits: str
    repetitions: int
    shown_at_requirement: float
    not_met_at_requirement: float
    shown_when_better: float


def declared(population: Population) -> Iterator[tuple[str, tuple[str, ...]]]:
    """What can be declared, with the candidate families that follow. Open bounds rest on the guard shapes alone."""
    yield "nothing", ("normal",)
    kind = next((k for k in KINDS if k.name == population.kind), None)
    if kind is not None:
        yield "kind", tuple(name for name in kind.families if name in names())
    if population.model:
        yield "model", (population.model,)


def limits_of(population: Population, index: float) -> dict[str, tuple[float | None, float | None]]:
    """Limits at which the true index is that much; with both limits it is so on both sides."""
    lower, upper = population.lower_limit(index), population.upper_limit(index)
    return {"upper": (None, upper), "lower": (lower, None), "both": (lower, upper)}


def rows_of(
    population: Population, n: int, repetitions: int, seed: int, *, held_out: bool, wanted: Sequence[str] = KNOWLEDGE
) -> list[Row]:
    """Every row of one process at one sample size."""
    key = sum(ord(c) * (i + 1) for i, c in enumerate(population.name))
    samples = population.draw(np.random.default_rng([seed, n, key]), repetitions, n)
    found = []
    for what, families in declared(population):
        if what not in wanted:
            continue
        unions = [_union(x, families, what) for x in samples]
        unions = [u for u in unions if u is not None]
        for side, at_requirement in limits_of(population, REQUIREMENT).items():
            better = limits_of(population, BETTER)[side]
            bounds = [ppk_bounds(u, *at_requirement) for u in unions]
            higher = [ppk_bounds(u, *better) for u in unions]
            found.append(
                Row(
                    population=population.name,
                    held_out=held_out,
                    n=n,
                    declared=what,
                    limits=side,
                    repetitions=len(unions),
                    shown_at_requirement=float(np.mean([(b.lower or 0.0) >= REQUIREMENT for b in bounds])),
                    not_met_at_requirement=float(np.mean([(b.upper or 0.0) < REQUIREMENT for b in bounds])),
                    shown_when_better=float(np.mean([(b.lower or 0.0) >= REQUIREMENT for b in higher])),
                )
            )
    return found


def _union(x: Array, families: Sequence[str], what: str) -> ModelUnion | None:
    usable = [name for name in families if not family(name).refusal(x)]
    prior = {"nothing": "open", "kind": "kind", "model": "model"}[what]
    return model_union(x, usable, prior=prior) if usable else None  # type: ignore[arg-type]


def markdown(rows: Sequence[Row]) -> str:
    """The table for people: per process and size, wrong "shown" / wrong "not met" / power, in per cent."""
    lines = [
        "# How often verdicts are wrong, and how often they are given",
        "",
        'Each cell, in per cent: share of "shown" at a true Ppk of 1.33 (wrong) / share of "not met" there (wrong) /',
        'share of "shown" at a true Ppk of 1.67 (power). Confidence 95 %; with R repetitions 5 % is known to',
        "2 * sqrt(0.05 * 0.95 / R). Written by `python -m tests.calibration.verdicts`.",
        "",
        f"Repetitions: {min(row.repetitions for row in rows)} to {max(row.repetitions for row in rows)}.",
    ]
    sizes = sorted({row.n for row in rows})
    for what, title in (
        ("nothing", "Nothing declared"),
        ("kind", "The right kind declared"),
        ("model", "The right model named"),
    ):
        for side in ("upper", "lower", "both"):
            chosen = [row for row in rows if row.declared == what and row.limits == side]
            if chosen:
                lines += ["", f"## {title}; {side} limit{'s' if side == 'both' else ''}", "", *_table(chosen, sizes)]
    return "\n".join(lines) + "\n"


def _table(rows: Sequence[Row], sizes: Sequence[int]) -> list[str]:
    lines = ["| process | " + " | ".join(f"n = {n}" for n in sizes) + " |", "|---" * (len(sizes) + 1) + "|"]
    for name in dict.fromkeys(row.population for row in rows):
        mine = {row.n: row for row in rows if row.population == name}
        mark = " (held out)" if next(iter(mine.values())).held_out else ""
        lines.append(f"| {name}{mark} | " + " | ".join(_cell([mine[n]]) if n in mine else "" for n in sizes) + " |")
    for title, chosen in (("mean", rows), ("mean, held out", [row for row in rows if row.held_out])):
        if chosen:
            cells = [_cell([row for row in chosen if row.n == n]) for n in sizes]
            lines.append(f"| **{title}** | " + " | ".join(cells) + " |")
    worst = [max((row.shown_at_requirement for row in rows if row.n == n), default=0.0) for n in sizes]
    return [*lines, '| **worst wrong "shown"** | ' + " | ".join(f"{100 * w:.1f}" for w in worst) + " |"]


def _cell(rows: Sequence[Row]) -> str:
    if not rows:
        return ""
    names_ = ("shown_at_requirement", "not_met_at_requirement", "shown_when_better")
    return " / ".join(f"{100 * np.mean([getattr(row, name) for row in rows]):.1f}" for name in names_)


def main(arguments: Sequence[str] | None = None) -> None:
    """Runs the simulation and writes verdicts.md and verdicts.json."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--repetitions", type=int, default=2000)
    parser.add_argument("--sizes", type=int, nargs="+", default=SIZES)
    parser.add_argument("--seed", type=int, default=20261)
    parser.add_argument("--declared", nargs="+", choices=KNOWLEDGE, default=KNOWLEDGE)
    parser.add_argument("--into", type=Path, default=HERE)
    chosen = parser.parse_args(arguments)
    rows: list[Row] = []
    start = time.perf_counter()
    for n in chosen.sizes:
        for held_out, populations in ((False, CALIBRATED), (True, HELD_OUT)):
            for population in populations:
                rows += rows_of(
                    population, n, chosen.repetitions, chosen.seed, held_out=held_out, wanted=chosen.declared
                )
                print(f"{time.perf_counter() - start:7.0f} s  n = {n}  {population.name}", flush=True)
        (chosen.into / "verdicts.json").write_text(json.dumps([asdict(r) for r in rows], indent=0), encoding="utf-8")
        (chosen.into / "verdicts.md").write_text(markdown(rows), encoding="utf-8")
    print(markdown(rows))


if __name__ == "__main__":
    main()
