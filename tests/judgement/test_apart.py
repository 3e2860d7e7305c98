"""Values that stand apart are told and kept."""

import numpy as np

import sheetqc
from sheetqc.finding import Cell
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.terms import Terms
from sheetqc.study import Characteristic, Limits, Sample


def test_a_flyer_is_named_with_its_cell_and_kept() -> None:
    x = np.random.default_rng(1).normal(10, 0.1, 80)
    x[30] = 11.0
    asked = Characteristic(id="D1", limits=Limits(lower=9.0, upper=12.0), kind="two-sided dimension", model="normal")
    sample = Sample(
        characteristic="D1", values=tuple(x.tolist()), cells=tuple(Cell("Run", 5 + i, 2) for i in range(80))
    )
    found = assessment_of(asked, sample, Terms())
    finding = next(f for f in found.findings if f.code == "stands-apart")
    assert [str(c) for c in finding.cells] == ["'Run'!B35"]
    assert "Value 31 (11)" in finding.text
    assert "with and" in finding.text
    assert found.count == 80
    assert found.summary is not None
    assert found.summary.maximum == 11.0


def test_sound_samples_are_left_in_peace() -> None:
    rng = np.random.default_rng(2)
    told = 0
    for _ in range(100):
        x = rng.normal(10, 0.1, 60)
        found = sheetqc.assess(x.tolist(), lower=9.0, upper=11.0, model="normal")
        told += any(f.code == "stands-apart" for f in found.findings)
    assert told <= 4


def test_a_long_tail_is_no_outlier() -> None:
    x = np.exp(np.random.default_rng(3).normal(0, 0.7, 100))
    found = sheetqc.assess(x.tolist(), upper=40.0, kind="leak rate")
    assert not any(f.code == "stands-apart" for f in found.findings)
