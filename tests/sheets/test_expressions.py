from __future__ import annotations

import re

import pytest

from sheetqc.sheets.cells import cut, shortened
from sheetqc.sheets.expressions import choice, constant, filled, first_true, literal, of_family, prefixed
from sheetqc.stats.families import FAMILIES, Family


@pytest.mark.parametrize(
    ("plain", "written"),
    [
        ("NORM.S.DIST(x,TRUE)", "_xlfn.NORM.S.DIST(x,TRUE)"),
        ("NORM.S.INV(BETA.INV(0.5,1,2))", "_xlfn.NORM.S.INV(_xlfn.BETA.INV(0.5,1,2))"),
        ("_xlfn.GAMMA.INV(1,2,3)", "_xlfn.GAMMA.INV(1,2,3)"),
        ("MAX(1,LN(2))", "MAX(1,LN(2))"),
    ],
)
def test_newer_functions_get_their_prefix_once(plain: str, written: str) -> None:
    assert prefixed(plain) == written


def test_what_is_filled_in_is_not_prefixed() -> None:
    assert filled("SUM({x})", x="'NORM.S.INV(1)'!$A$1") == "SUM('NORM.S.INV(1)'!$A$1)"


def test_texts_are_quoted() -> None:
    assert literal('a "b"') == '"a ""b"""'


def test_cases_are_nested() -> None:
    assert first_true(("a", "1"), ("b", "2"), otherwise="3") == "IF(a,1,IF(b,2,3))"


def test_a_single_expression_needs_no_choice() -> None:
    assert choice("k", ("x",)) == "x"
    assert choice("k", ("x", "y")) == "CHOOSE(k,x,y)"


@pytest.mark.parametrize(("value", "text"), [(1e-6, "1E-06"), (0.25, "0.25"), (-3.0, "-3.0"), (1e22, "1E+22")])
def test_constants_are_written_as_the_format_has_them(value: float, text: str) -> None:
    assert constant(value) == text


@pytest.mark.parametrize("member", FAMILIES, ids=lambda f: f.name)
@pytest.mark.parametrize("kind", ["density", "cdf", "survival"])
def test_every_family_has_its_expressions(member: Family, kind: str) -> None:
    references = tuple(f"$A${i + 1}" for i in range(len(member.parameter_names)))
    formula = of_family(member, kind, references, x="$B$1")
    # braces are left only around the constants of an array
    assert not re.search(r"\{(?![-0-9])", formula)
    assert "$B$1" in formula
    assert formula.count("(") == formula.count(")")


@pytest.mark.parametrize(("value", "shown"), [(1.3299, 1.32), (1.33, 1.33), (0.999999, 0.99), (-0.004, -0.01)])
def test_an_index_is_never_rounded_up(value: float, shown: float) -> None:
    assert cut(value) == pytest.approx(shown)


def test_stored_values_keep_eleven_digits() -> None:
    assert shortened(1 / 3) == 0.33333333333
    assert shortened("x") == "x"
    assert shortened(7) == 7
