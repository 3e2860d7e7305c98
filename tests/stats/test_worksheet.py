"""Spreadsheet expressions of every family, recalculated by LibreOffice over a grid that reaches both tails."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from sheetqc.stats.families import FAMILIES, Family
from sheetqc.stats.families.worksheet import minus_log_one_minus, one_minus_exp
from tests.stats.family_cases import MEMBERS, case_of
from tests.stats.recalculation import evaluated, missing_office

ALL = [f for f, _ in MEMBERS]
PROBABILITIES = (1e-12, 1e-7, 0.00135, 0.03, 0.5, 0.9)
TOLERANCE = 1e-9
"""Relative; the gamma tail sum is good to ten digits, the other expressions to twelve and more."""
# the spreadsheet offers only the lower gamma and beta quantile: 1 - q keeps digits of q down to about 1e-7
FROM_BELOW_ONLY = ("gamma", "gamma_threshold", "beta")

Row = tuple[str, str, float]


def _points(f: Family, theta: tuple[float, ...]) -> list[float]:
    inner = [float(v) for v in f.quantile(PROBABILITIES, theta)]
    inner += [float(v) for v in f.upper_quantile(PROBABILITIES, theta)]
    low, high = (float(v) for v in f.support(theta))
    beyond = ([low - 1.0, low] if np.isfinite(low) else []) + ([high + 1.0] if np.isfinite(high) else [])
    return inner + beyond


def _close_to(x: float, f: Family, theta: tuple[float, ...]) -> float:
    """A value good to about seven digits, on the same side of every end of the support."""
    ends = [float(v) for v in f.support(theta) if np.isfinite(v)]
    nearest = min(ends, key=lambda end: abs(x - end), default=0.0)
    return nearest + (x - nearest) * (1 + 1e-7)


def _rows(f: Family, theta: tuple[float, ...]) -> list[Row]:
    """Label, formula and the value expected."""
    sheet = f.worksheet
    cells = {name: repr(float(v)) for name, v in zip(f.parameter_names, theta, strict=True)}
    rows: list[Row] = []
    for x in _points(f, theta):
        for what, value in (
            ("density", f.density(x, theta)),
            ("cdf", f.cdf(x, theta)),
            ("survival", f.survival(x, theta)),
        ):
            if what == "density" and x in tuple(float(v) for v in f.support(theta)):
                continue
            formula = getattr(sheet, what).format(x=f"({x!r})", **cells)
            rows.append((f"{f.name}{theta} {what} at {x}", formula, float(value)))
    for p in PROBABILITIES:
        low, high = float(f.quantile(p, theta)), float(f.upper_quantile(p, theta))
        if sheet.quantile:
            rows.append((f"{f.name}{theta} quantile {p}", sheet.quantile.format(p=repr(p), **cells), low))
            if f.name not in FROM_BELOW_ONLY or p > 1e-4:
                rows.append((f"{f.name}{theta} upper {p}", sheet.upper_quantile.format(q=repr(p), **cells), high))
        else:
            start = f"({_close_to(low, f, theta)!r})"
            rows.append((f"{f.name}{theta} correction {p}", sheet.correction.format(p=p, start=start, **cells), low))
            start = f"({_close_to(high, f, theta)!r})"
            formula = sheet.upper_correction.format(q=p, start=start, **cells)
            rows.append((f"{f.name}{theta} upper correction {p}", formula, high))
    return rows


@pytest.mark.office
@pytest.mark.skipif(missing_office(), reason="LibreOffice (soffice) is not installed")
def test_every_expression_agrees_when_recalculated(tmp_path: Path) -> None:
    rows = [row for f in ALL for theta in case_of(f).thetas for row in _rows(f, theta)]
    values = evaluated([formula for _, formula, _ in rows], tmp_path)
    wrong = []
    for (label, formula, expected), got in zip(rows, values, strict=True):
        # a quantile near 0 of a family that reaches both sides is the difference of larger numbers
        floor = 1e-3 if " quantile" in label or "upper" in label else 1e-300
        if not isinstance(got, int | float) or abs(got - expected) > TOLERANCE * max(abs(expected), floor):
            wrong.append(f"{label}: expected {expected!r}, got {got!r} from {formula:.200}")
    assert not wrong, "\n".join([f"{len(wrong)} of {len(rows)}", *wrong[:40]])


def test_expressions_fit_into_a_cell_and_name_no_prefix() -> None:
    """Excel takes at most 8192 characters; cell references of 20 characters leave room."""
    for f in FAMILIES:
        cells = dict.fromkeys((*f.parameter_names, "x", "p", "q", "start"), "A" * 20)
        sheet = f.worksheet
        for what in ("density", "cdf", "survival", "quantile", "upper_quantile", "correction", "upper_correction"):
            text = getattr(sheet, what).format(**cells)
            assert len(text) < 8192
            assert "_xlfn" not in text
            assert text.count("(") == text.count(")")


def test_helpers_keep_small_numbers() -> None:
    """The same expressions evaluated by Python."""
    from math import exp, log, log1p, sinh

    names = {"EXP": exp, "SINH": sinh, "LN": log}

    def value(text: str) -> float:
        condition, yes, no = _split_if(text)
        return float(eval(yes if eval(condition, names) else no, names))

    for t in (1e-20, 1e-3, 0.5, 40.0, 60.0, 800.0):
        assert value(one_minus_exp(repr(t))) == pytest.approx(-np.expm1(-t), rel=1e-14)
    for q in (1e-20, 1e-5, 0.0009999, 0.0010001, 0.5, 0.999):
        assert value(minus_log_one_minus(repr(q))) == pytest.approx(-log1p(-q), rel=1e-12)


def _split_if(text: str) -> tuple[str, str, str]:
    inner, depth, parts = text[3:-1], 0, [""]
    for letter in inner:
        depth += (letter == "(") - (letter == ")")
        if letter == "," and depth == 0:
            parts.append("")
        else:
            parts[-1] += letter
    return parts[0], parts[1], parts[2]
