"""Numbers as people write them."""

import pytest

from sheetqc.judgement import wording


@pytest.mark.parametrize(
    ("value", "text"),
    [(0.0, "0"), (12.0, "12"), (0.012345, "0.01235"), (-3.5, "-3.5"), (1234567.0, "1234567"), (2e-7, "2e-07")],
)
def test_number(value: float, text: str) -> None:
    assert wording.number(value) == text


@pytest.mark.parametrize(("value", "text"), [(1.329, "1.32"), (1.33, "1.33"), (1.669999, "1.66"), (-0.005, "-0.01")])
def test_an_index_is_never_rounded_up(value: float, text: str) -> None:
    assert wording.index(value) == text


@pytest.mark.parametrize(("value", "text"), [(0.0004, "below 0.001"), (0.0123, "0.012"), (0.456, "0.46")])
def test_probability(value: float, text: str) -> None:
    assert wording.probability(value) == text


@pytest.mark.parametrize(("value", "text"), [(24000.0, "2.4 %"), (32.4, "32 ppm"), (0.001, "below 0.01 ppm")])
def test_ppm(value: float, text: str) -> None:
    assert wording.ppm(value) == text


def test_listed() -> None:
    assert wording.listed(["a"]) == "a"
    assert wording.listed(["a", "b", "c"]) == "a, b and c"
    assert wording.listed(list("abcdefgh"), most=3) == "a, b, c and 5 more"


def test_plural() -> None:
    assert wording.plural(1, "value") == "1 value"
    assert wording.plural(12345, "value") == "12 345 values"
