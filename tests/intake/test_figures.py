"""Figures in texts: one reading where it is certain, two where it is not, none where it is none."""

from __future__ import annotations

import random

import pytest

from sheetqc.intake.figures import by_mark, decimal_mark, figure_in, limit_in, nearer


@pytest.mark.parametrize(
    ("text", "number"),
    [
        ("12", 12), ("12,5", 12.5), ("12.5", 12.5), (",5", 0.5), (".5", 0.5), ("-0,5", -0.5), ("1 234,5", 1234.5),
        ("1.234,5", 1234.5), ("1,234.5", 1234.5), ("1.234.567", 1234567), ("1'234.5", 1234.5), ("0,123", 0.123),
        ("1234,567", 1234.567), ("12,3456", 12.3456), ("1.5e-3", 0.0015), ("5.", 5), ("１２，５", 12.5),
    ],
)  # fmt: skip
def test_certain_figures(text: str, number: float) -> None:
    figure = figure_in(text)
    assert (figure.sense, figure.number) == ("number", number)


@pytest.mark.parametrize("text", ["1,234", "1.234", "12,345", "123.456", "-1,234"])
def test_figures_with_two_readings(text: str) -> None:
    figure = figure_in(text)
    assert figure.sense == "ambiguous"
    assert figure.thousands == pytest.approx(figure.number * 1000)
    assert by_mark(figure, figure.decimal) == figure.number
    assert by_mark(figure, "," if figure.decimal == "." else ".") == figure.thousands
    assert by_mark(figure, None) is None
    assert nearer(figure, abs(figure.number) * 2) == figure.number
    assert nearer(figure, abs(figure.number) * 900) == figure.thousands
    assert nearer(figure, abs(figure.number) * 1e9) is None
    assert nearer(figure, None) is None


@pytest.mark.parametrize("text", ["", "abc", "1,2,3", "1.2.3", "1,23.456,7", "+-3", "e5"])
def test_what_is_no_figure(text: str) -> None:
    assert figure_in(text).sense == "words"


@pytest.mark.parametrize(("text", "rest"), [("12 34", "34"), ("12:30", ":30"), ("12-13", "-13"), ("12 mm", "mm")])
def test_what_is_left_behind_a_figure_is_kept(text: str, rest: str) -> None:
    assert figure_in(text).rest == rest


def test_marks_and_rests() -> None:
    figure = figure_in("<= 0,5 mm")
    assert (figure.mark, figure.number, figure.rest) == ("<", 0.5, "mm")
    assert figure_in("> 3").mark == ">"
    assert limit_in("max. 0,05").number == 0.05
    assert limit_in("Minimum 350").number == 350


@pytest.mark.parametrize(
    ("texts", "mark"),
    [
        (["1,5", "2,345"], ","),
        (["1.5"], "."),
        (["1,5", "1.5"], None),
        (["1,234"], None),
        (["1.234,5"], ","),
        ([], None),
    ],
)
def test_decimal_mark_needs_evidence_without_contradiction(texts: list[str], mark: str | None) -> None:
    assert decimal_mark(texts) == mark


def test_whatever_is_written_in_either_manner_is_never_misread() -> None:
    chance = random.Random(7)
    for _ in range(2000):
        value = round(chance.uniform(-1, 1) * 10 ** chance.randint(-3, 6), chance.randint(0, 6))
        plain = f"{value:.{chance.randint(0, 6)}f}"
        grouped = f"{float(plain):,.{len(plain.partition('.')[2])}f}"
        text = chance.choice([plain, grouped])
        if chance.random() < 0.5:
            text = text.translate(str.maketrans(",.", ".,"))
        figure = figure_in(text)
        wanted = float(plain)
        if figure.sense == "number":
            assert figure.number == wanted, text
        else:
            assert figure.sense == "ambiguous", text
            assert wanted in (figure.number, figure.thousands), text
