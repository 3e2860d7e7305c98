"""Steady processes are left in peace, moving ones are found out, and where."""

import numpy as np
import pytest

import sheetqc
from sheetqc.finding import Cell
from sheetqc.judgement.charts import groups_of
from sheetqc.judgement.movement import evidence_of_groups, evidence_of_row
from sheetqc.judgement.steadiness import FALSE_ALARM
from sheetqc.study import Characteristic, Sample

BORE = Characteristic(id="D1")


def row(n: int = 125, seed: int = 1) -> np.ndarray:
    return np.random.default_rng(seed).normal(10, 0.1, n)


def assess(values: np.ndarray, **more: object):
    return sheetqc.assess(values.tolist(), lower=9.0, upper=11.0, kind="two-sided dimension", **more)  # type: ignore[arg-type]


def test_a_steady_process_is_called_unsteady_in_about_1_of_100_studies() -> None:
    rng = np.random.default_rng(2)
    groups = tuple(tuple(range(5 * g, 5 * g + 5)) for g in range(25))
    single = grouped = 0
    for _ in range(1500):
        z = rng.normal(size=125)
        looks = evidence_of_row(z)
        single += any(e.p_value * len(looks) < FALSE_ALARM for e in looks)
        looks = evidence_of_groups(z, groups)
        grouped += any(e.p_value * len(looks) < FALSE_ALARM for e in looks)
    # 1500 studies: 15 expected at most, three standard errors are 12
    assert single <= 27
    assert grouped <= 27


def shifted() -> np.ndarray:
    x = row()
    x[60:] += 0.2
    return x


def drifting() -> np.ndarray:
    return row() + 0.003 * np.arange(125)


def spreading() -> np.ndarray:
    x = row()
    x[62:] = 10 + 3 * (x[62:] - 10)
    return x


def remembering() -> np.ndarray:
    x = row()
    for i in range(1, len(x)):
        x[i] = 10 + 0.7 * (x[i - 1] - 10) + (x[i] - 10)
    return x


def with_a_flyer() -> np.ndarray:
    x = row()
    x[40] += 0.9
    return x


@pytest.mark.parametrize(
    ("values", "words"),
    [
        (shifted(), "the level moved after value"),
        (drifting(), "the level rises"),
        (spreading(), "the spread changed"),
        (remembering(), "resembles the one before"),
        (with_a_flyer(), "value 41 stands apart"),
    ],
)
def test_a_moving_process_is_found_out(values: np.ndarray, words: str) -> None:
    found = assess(values)
    assert found.stability.stable is False
    assert words in found.stability.text
    assert found.verdict.state == "no verdict"
    assert any(f.code == "not-steady" and f.level == "stop" for f in found.findings)


def test_subgroups_that_differ_are_found_out() -> None:
    x = row() + np.repeat(np.random.default_rng(5).normal(0, 0.15, 25), 5)
    found = assess(x, subgroups=5)
    assert found.stability.stable is False
    assert found.stability.chart == "X-bar and R"
    assert "subgroup means differ" in found.stability.text


def test_a_steady_process_is_steady_with_its_chart() -> None:
    single, fives, tens = assess(row()), assess(row(), subgroups=5), assess(row(120), subgroups=10)
    assert [a.stability.stable for a in (single, fives, tens)] == [True, True, True]
    assert single.stability.chart == "individuals and moving range"
    assert fives.stability.chart == "X-bar and R"
    assert tens.stability.chart == "X-bar and s"
    assert fives.subgroup_count == 25
    assert fives.subgroup_size == 5


def test_the_chart_has_the_limits_of_the_handbook() -> None:
    # NIST/SEMATECH e-Handbook, 6.3.2.2 (individuals): mean +- 3 MR-bar / 1.128, UCL of the moving range 3.267 MR-bar
    x = row()
    track = assess(x).stability
    mean_range = float(np.abs(np.diff(x)).mean())
    assert track.location is not None
    assert track.spread is not None
    assert track.location.upper[0] == pytest.approx(x.mean() + 3 * mean_range / 1.128, rel=1e-4)
    assert track.spread.upper[0] == pytest.approx(3.267 * mean_range, rel=1e-3)


def test_a_signal_names_its_cells() -> None:
    from sheetqc.judgement.assemble import assessment_of
    from sheetqc.judgement.terms import Terms
    from sheetqc.study import Limits

    x = with_a_flyer()
    sample = Sample(
        characteristic="D1", values=tuple(x.tolist()), cells=tuple(Cell("Run", 10 + i, 3) for i in range(125))
    )
    asked = Characteristic(id="D1", limits=Limits(lower=9.0, upper=11.0), kind="two-sided dimension")
    signals = assessment_of(asked, sample, Terms()).stability.signals
    assert any([str(c) for c in s.cells] == ["'Run'!C50"] for s in signals)


def test_a_skewed_steady_process_is_steady() -> None:
    rng = np.random.default_rng(6)
    unsteady = sum(
        sheetqc.assess(np.exp(rng.normal(0, 0.5, 100)).tolist(), upper=20, kind="leak rate").stability.stable is False
        for _ in range(30)
    )
    assert unsteady <= 2


@pytest.mark.parametrize(
    ("subgroups", "size", "groups"),
    [
        (("a", "a", "b", "b"), None, ((0, 1), (2, 3))),
        (("a", "b", "a", "b"), None, ((0, 2), (1, 3))),
        (None, 2, ((0, 1), (2, 3))),
        (None, 3, None),
        (None, None, None),
        (("a", "b", "c", "d"), None, None),
        (("a", "b", "b", "c"), None, None),
    ],
)
def test_groups(subgroups: tuple[str, ...] | None, size: int | None, groups: object) -> None:
    sample = Sample(characteristic="D1", values=(1.0, 2.0, 3.0, 4.0), subgroups=subgroups)
    assert groups_of(Characteristic(id="D1", subgroup_size=size), sample) == groups


def test_too_few_points_tell_nothing() -> None:
    found = assess(row(7))
    assert found.stability.stable is None
    assert "cannot be told" in found.stability.text


@pytest.mark.parametrize("n", [3, 4, 6, 12])
@pytest.mark.parametrize("size", [None, 2, 3, 5])
def test_very_small_studies_are_taken_without_a_crash(n: int, size: int | None) -> None:
    found = sheetqc.assess(row(n).tolist(), upper=11.0, subgroups=size)
    assert found.verdict.state == "no verdict"
