"""Makes sheetqc/stats/ppcc_table.json by simulation: python -m tests.stats.make_ppcc_table"""

import json
from pathlib import Path

import numpy as np
from scipy import special

from sheetqc.stats.normality import filliben_medians

SEED = 20261201
REPETITIONS = 40_000
COUNTS = [3, 4, 5, 6, 8, 10, 15, 20, 30, 50, 75, 100, 150, 250, 500, 1000, 2500, 5000]
PROBABILITIES = [0.0005, 0.001, 0.0025, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.975, 0.995]
INTO = Path(__file__).parents[2] / "sheetqc" / "stats" / "ppcc_table.json"


def log_one_minus_r(n: int, rng: np.random.Generator) -> np.ndarray:
    scores = special.ndtri(filliben_medians(n))
    found = []
    for _ in range(REPETITIONS // 500):
        x = np.sort(rng.normal(size=(500, n)), axis=1)
        x -= x.mean(axis=1, keepdims=True)
        r = x @ scores / np.sqrt((scores @ scores) * np.sum(x * x, axis=1))
        found.append(np.log(np.maximum(1 - r, 1e-15)))
    return np.concatenate(found)


def main() -> None:
    rng = np.random.default_rng(SEED)
    table = [
        [round(float(q), 5) for q in np.quantile(log_one_minus_r(n, rng), 1 - np.array(PROBABILITIES))] for n in COUNTS
    ]
    data = {
        "how": f"python -m tests.stats.make_ppcc_table; seed {SEED}, {REPETITIONS} normal samples for each n",
        "n": COUNTS,
        "probability": PROBABILITIES,
        "log_one_minus_r": table,
    }
    INTO.write_text(json.dumps(data, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
