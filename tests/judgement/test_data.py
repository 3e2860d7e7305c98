"""What data can carry."""

import numpy as np
import pytest

from sheetqc.finding import Cell
from sheetqc.judgement.data import data_view, reading_step
from sheetqc.study import Characteristic, LeftOut, Limits, Sample

BORE = Characteristic(id="D1", limits=Limits(lower=9.0, upper=11.0))


def view_of(values: list[float], asked: Characteristic = BORE, **more: object) -> set[str]:
    return {c.code for c in data_view(asked, Sample(characteristic="D1", values=tuple(values), **more)).conditions}  # type: ignore[arg-type]


def steady(n: int = 60, digits: int = 3) -> list[float]:
    return [round(float(v), digits) for v in np.random.default_rng(3).normal(10, 0.1, n)]


def test_good_data_meet_no_condition() -> None:
    assert view_of(steady()) == set()


@pytest.mark.parametrize(
    ("values", "code"),
    [
        (steady(29), "too-few"),
        ([10.0, 10.1], "fewer-than-three"),
        ([], "fewer-than-three"),
        ([10.0] * 40, "all-equal"),
        (steady(60, 1), "resolution-too-coarse"),
        (sorted(steady()), "order-lost"),
        (sorted(steady(), reverse=True), "order-lost"),
    ],
)
def test_conditions_of_values(values: list[float], code: str) -> None:
    assert code in view_of(values)


def test_thirty_values_are_enough() -> None:
    assert "too-few" not in view_of(steady(30))


def test_conditions_of_limits() -> None:
    assert view_of(steady(), Characteristic(id="D1")) == {"no-limits"}
    crossed = Characteristic(
        id="D1",
        limits=Limits(lower=11.0, upper=9.0),
        cells=(("lower", Cell("C", 5, 3)), ("upper", Cell("C", 5, 4))),
    )
    found = data_view(crossed, Sample(characteristic="D1", values=tuple(steady())))
    assert [c.code for c in found.conditions] == ["limits-crossed"]
    assert [str(c) for c in found.conditions[0].cells] == ["'C'!C5", "'C'!D5"]


def test_censored_values_name_their_cells() -> None:
    values = tuple(steady())
    sample = Sample(
        characteristic="D1",
        values=values,
        cells=tuple(Cell("M", 5 + i, 2) for i in range(60)),
        censored=("<",) + ("",) * 59,
    )
    condition = data_view(BORE, sample).conditions[0]
    assert condition.code == "censored-values"
    assert [c.address for c in condition.cells] == ["B5"]


def test_left_out_values_are_told_with_their_reason() -> None:
    sample = Sample(
        characteristic="D1",
        values=tuple(steady()),
        left_out=(LeftOut(value=12.0, cell=Cell("M", 9, 2), reason="dropped on the floor"),),
    )
    texts = [f.text for f in data_view(BORE, sample).findings]
    assert any("B9: dropped on the floor" in text for text in texts)


def test_a_value_below_its_natural_bound_is_told() -> None:
    asked = Characteristic(id="F", limits=Limits(upper=1.0, natural_lower=0.0))
    values = (-0.01, *np.abs(steady()))
    found = data_view(
        asked, Sample(characteristic="F", values=values, cells=tuple(Cell("M", i, 1) for i in range(1, 62)))
    )
    finding = next(f for f in found.findings if f.code == "beyond-natural-bound")
    assert [c.address for c in finding.cells] == ["A1"]


@pytest.mark.parametrize(
    ("values", "step"),
    [
        ([1.0, 2.0, 5.0], 1.0),
        ([0.12, 0.15, 0.11], 0.01),
        ([0.0125, 0.0150, 0.0175], 0.0005),
        ([100.0, 250.0, 300.0], 50.0),
        ([12.002, 12.004, 12.008], 0.002),
        ([-0.5, 0.0, 1.5], 0.5),
    ],
)
def test_the_step_of_readings(values: list[float], step: float) -> None:
    assert reading_step(np.array(values)) == pytest.approx(step)


def test_unrounded_values_have_no_step() -> None:
    assert reading_step(np.random.default_rng(1).normal(size=20)) is None
