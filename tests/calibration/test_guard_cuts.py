"""The calibration of the guard shapes' cuts."""

from __future__ import annotations

import json
from importlib import resources

import numpy as np
import pytest

from sheetqc.stats.bounds import model_union, ppk_bounds
from sheetqc.stats.bounds.cuts import LEAST, guard_cuts
from tests.calibration.guard_cuts import INDEX, LEFT_OUT, OUTERMOST, OUTLYING, START, deficits, main, raised, shapes


def test_table_holds_every_shape_that_is_calibrated():
    text = resources.files("sheetqc.stats.bounds").joinpath("guard_cuts.json").read_text(encoding="utf-8")
    table = json.loads(text)
    assert tuple(table["lower"]) == shapes()
    for name, row in table["lower"].items():
        assert len(row) == len(table["sizes"])
        assert min(row) >= (LEAST if name in LEFT_OUT else START)
    assert set(OUTERMOST + OUTLYING) <= set(shapes())


def test_deficits_shrink_as_the_limit_comes_closer():
    x = np.random.default_rng(1).normal(0, 1, 80)
    far, near = deficits(x, 5.5), deficits(x, 3.5)
    assert np.all(far >= near - 0.02)
    assert near.min() >= 0


def test_normal_deficit_is_the_likelihood_ratio():
    x = np.random.default_rng(1).normal(0, 1, 80)
    row, limit = shapes().index("normal"), 5.0
    scales = np.linspace(0.5, 2.5, 4001)
    heights = [
        -80 * np.log(s) - 0.5 * np.sum(((x - limit + 3 * INDEX * s) / s) ** 2) - 40 * np.log(2 * np.pi) for s in scales
    ]
    free = -80 * np.log(x.std()) - 40 - 40 * np.log(2 * np.pi)
    found = deficits(x, limit)
    between = found[row] - found.min()
    assert found[row] >= free - max(heights) - 0.02
    assert between >= 0


@pytest.mark.parametrize("seed", [1, 2, 3, 4])
def test_bounds_agree_with_the_deficits(seed):
    """A limit is "shown" by the bound where every deficit exceeds its cut, but for the width of a hair."""
    x = np.random.default_rng(seed).gamma(4, 1, 125)
    cuts = guard_cuts(len(x), 0.95).lower[: len(shapes())]
    union = model_union(x, ("normal",), prior="open")
    limits = np.linspace(8, 40, 60)
    by_bound = next(u for u in limits if ppk_bounds(union, None, u).lower >= INDEX)
    by_deficit = next(u for u in limits if np.all(deficits(x, u) > cuts))
    assert by_bound == pytest.approx(by_deficit, rel=0.06)


def test_cuts_rise_until_a_process_is_rarely_passed():
    rng = np.random.default_rng(5)
    d = np.full((400, len(shapes())), 9.0)
    d[:, 3] = rng.exponential(2.0, 400)
    cuts = raised([("process", 0.05, d)])
    assert np.mean(np.all(d > cuts, axis=1)) < 0.09
    assert cuts[3] > 3.5
    assert set(np.delete(cuts, 3)) == {START, LEAST}


def test_the_command(capsys, monkeypatch):
    monkeypatch.setattr("tests.calibration.guard_cuts.CALIBRATED", ())
    monkeypatch.setattr("tests.calibration.guard_cuts.shapes", lambda: shapes()[:5])
    main(["--repetitions", "4", "--sizes", "30"])
    assert '"t, 3 df"' in capsys.readouterr().out
