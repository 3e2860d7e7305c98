from __future__ import annotations

import numpy as np
import pytest

from sheetqc.sheets.axis import axis_around, decimals_within, nice_step
from sheetqc.sheets.decimals import decimal_format, decimals_of


@pytest.mark.parametrize(
    ("length", "pieces", "step"), [(1.0, 5, 0.2), (0.031, 6, 0.01), (97.0, 4, 25.0), (7.0, 7, 1.0), (3e-5, 6, 5e-6)]
)
def test_steps_are_round_numbers(length: float, pieces: int, step: float) -> None:
    assert nice_step(length, pieces) == pytest.approx(step)


@pytest.mark.parametrize("scale", [1e-6, 0.01, 1.0, 250.0, 1e7])
@pytest.mark.parametrize("place", [-5.0, 0.0, 1000.0])
def test_an_axis_holds_values_and_near_limits_with_room(scale: float, place: float) -> None:
    values = place + scale * np.linspace(-2, 2, 9)
    limit = place + scale * 4
    axis = axis_around(list(values), [limit])
    assert axis.minimum < values.min()
    assert axis.maximum > limit
    assert round(axis.length / axis.step, 6) == pytest.approx(round(axis.length / axis.step))


def test_a_far_limit_does_not_squeeze_the_values() -> None:
    axis = axis_around([1.0, 2.0], [500.0])
    assert axis.maximum < 5


def test_an_axis_does_not_begin_below_a_natural_bound() -> None:
    assert axis_around([0.001, 0.02], [0.03], floor=0.0).minimum == 0.0


def test_equal_values_have_an_axis() -> None:
    axis = axis_around([3.0, 3.0], [])
    assert axis.minimum < 3.0 < axis.maximum


@pytest.mark.parametrize(
    ("step", "shown"), [(0.005, "0.000"), (0.25, "0.00"), (5.0, "0"), (2.5, "0.0"), (0.01, "0.00")]
)
def test_labels_show_what_the_steps_need(step: float, shown: str) -> None:
    axis = axis_around([0.0, 4 * step], [], pieces=4)
    object_ = type(axis)(minimum=0.0, maximum=4 * step, step=step)
    assert object_.number_format == shown


def test_places_are_finer_than_can_be_drawn() -> None:
    axis = axis_around([0.0, 0.03], [])
    assert 10.0 ** -decimals_within(axis) < axis.length / 1e4


@pytest.mark.parametrize(
    ("values", "reading"),
    [((25.012, 25.01, 25.0), 3), ((1.0, 2.0, 40.0), 0), ((0.1 + 0.2, 0.4, 0.7), 1), ((1e-7, 3e-7, 2.5e-7), 8)],
)
def test_decimals_follow_the_readings(values: tuple[float, ...], reading: int) -> None:
    assert decimals_of(values, (), None).reading == reading


def test_decimals_of_endless_numbers_stop_where_nothing_more_is_said() -> None:
    values = tuple(float(v) for v in 25 + np.random.default_rng(1).standard_normal(50) / 3)
    assert decimals_of(values, (None, 26.5), None).reading <= 3


def test_mean_and_spread_say_more_than_a_reading() -> None:
    shown = decimals_of((25.01, 25.02), (), None)
    assert (shown.value, shown.mean, shown.spread) == ("0.00", "0.000", "0.0000")
    assert decimal_format(-1) == "0"
