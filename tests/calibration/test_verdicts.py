"""A reduced run of the simulation behind verdicts.md: errors stay where they belong, and verdicts are given."""

from __future__ import annotations

import json

import numpy as np
import pytest

from sheetqc.stats.bounds import model_union, ppk_bounds
from tests.calibration.populations import CALIBRATED, HELD_OUT
from tests.calibration.verdicts import main, markdown, rows_of

EVERY = {population.name: population for population in CALIBRATED + HELD_OUT}
REPETITIONS = 60
# 60 repetitions at a true share of 5 %: more than 9 wrong ones happen in 0.3 % of runs; the seed is fixed
MOST_WRONG = 9 / REPETITIONS


@pytest.mark.parametrize(
    "name",
    [
        "normal",
        "lognormal, sigma 0.5",
        "gamma, shape 2",
        "Student t, 5 df",
        "5 + lognormal, sigma 0.4",
        "normal rounded to sd/3",
    ],
)
def test_shown_is_rarely_wrong_with_nothing_declared(name):
    rows = rows_of(EVERY[name], 50, REPETITIONS, 7, held_out=False, wanted=("nothing",))
    assert {row.limits for row in rows} == {"upper", "lower", "both"}
    for row in rows:
        assert row.shown_at_requirement <= MOST_WRONG, row
        assert row.repetitions == REPETITIONS


@pytest.mark.parametrize("name", ["normal", "lognormal, sigma 0.25", "Weibull, shape 2.5", "Rayleigh"])
def test_a_named_model_is_calibrated_on_both_sides_and_powerful(name):
    rows = rows_of(EVERY[name], 50, 150, 7, held_out=False, wanted=("model",))
    upper = next(row for row in rows if row.limits == "upper")
    assert upper.shown_at_requirement <= 0.107  # 16 of 150: 0.3 % at a true share of 5 %
    assert upper.not_met_at_requirement <= 0.107
    assert upper.shown_when_better > 0.25


def test_knowledge_buys_power():
    rows = rows_of(EVERY["Rayleigh"], 125, 30, 3, held_out=False)
    power = {row.declared: row.shown_when_better for row in rows if row.limits == "upper"}
    assert power["nothing"] < power["kind"] < power["model"]


@pytest.mark.parametrize("name", ["normal", "lognormal, sigma 0.5", "Student t, 5 df"])
def test_far_from_the_requirement_a_verdict_is_given(name):
    population = EVERY[name]
    samples = population.draw(np.random.default_rng(2), 20, 125)
    unions = [model_union(x, ("normal",), prior="open") for x in samples]
    good = [ppk_bounds(u, None, population.upper_limit(4.5)).lower for u in unions]
    bad = [ppk_bounds(u, None, population.upper_limit(0.6)).upper for u in unions]
    assert np.mean(np.array(good) >= 1.33) > 0.8
    assert np.mean(np.array(bad) < 1.33) > 0.8


def test_the_command_writes_the_table(tmp_path, monkeypatch):
    monkeypatch.setattr("tests.calibration.verdicts.CALIBRATED", CALIBRATED[:1])
    monkeypatch.setattr("tests.calibration.verdicts.HELD_OUT", HELD_OUT[:1])
    main(["--repetitions", "3", "--sizes", "30", "--into", str(tmp_path)])
    rows = json.loads((tmp_path / "verdicts.json").read_text(encoding="utf-8"))
    assert {row["declared"] for row in rows} == {"nothing", "kind", "model"}
    text = (tmp_path / "verdicts.md").read_text(encoding="utf-8")
    assert "| normal |" in text
    assert "(held out)" in text


def test_markdown_shows_the_worst():
    rows = rows_of(EVERY["normal"], 30, 4, 1, held_out=False, wanted=("model",))
    assert '**worst wrong "shown"**' in markdown(rows)


def test_quantiles_of_the_populations_are_right():
    for population in CALIBRATED + HELD_OUT:
        x = population.draw(np.random.default_rng(1), 1, 40_000)[0]
        step = 0.6 if "rounded" in population.name else 0.0
        for value, share in ((population.low, 0.00135), (population.middle, 0.5), (population.high, 0.99865)):
            found = np.mean(x <= value)
            if not step:
                assert found == pytest.approx(share, abs=5 * np.sqrt(share * (1 - share) / len(x)))
