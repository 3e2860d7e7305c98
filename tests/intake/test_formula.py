"""Simple formulas: computed as a spreadsheet does, or refused."""

from __future__ import annotations

import pytest

from sheetqc.intake.formula import NotSimple, Value, computed
from sheetqc.intake.sheet import Area

CELLS: dict[tuple[int, int], Value] = {(1, 1): 2.0, (2, 1): 3.0, (3, 1): "x", (1, 2): 4.0, (5, 1): True}


def _look_up(sheet: str, area: Area) -> list[Value]:
    if sheet not in ("", "Other one"):
        raise NotSimple
    shift = 100.0 if sheet else 0.0
    found: list[Value] = []
    for row in range(area.top, area.bottom + 1):
        for column in range(area.left, area.right + 1):
            value = CELLS.get((row, column))
            found.append(value + shift if isinstance(value, float) else value)
    return found


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=1+2*3", 7), ("=(1+2)*3", 9), ("=-2^2", 4), ("=2^3^1", 8), ("=10/4", 2.5), ("=50%", 0.5), ("=A1", 2),
        ("=$A$1+B1", 6), ("='Other one'!A1", 102), ("=SUM(A1:A3)", 5), ("=AVERAGE(A1:A2,7)", 4), ("=MAX(A1:B2)", 4),
        ("=MIN(A1:A2)-1", 1), ("=MEDIAN(1,9,2)", 2), ("=COUNT(A1:A5)", 2), ("=ROUND(2.345,2)", 2.35), ("=ABS(-3)", 3),
        ('=IF(A4="","",A4)', ""), ('=IF(A1="","",A1)', 2), ("=IF(A1>3,1,0)", 0), ('=A3&"-"&A1', "x-2"),
        ("=A1=B1", False),
        ('="a"="A"', True), ("=1e-3*2", 0.002), ("=A4", None), ("=ISBLANK(A4)", True), ('="say ""hi"""', 'say "hi"'),
    ],
)  # fmt: skip
def test_values(formula: str, value: Value) -> None:
    assert computed(formula, _look_up) == value


@pytest.mark.parametrize(
    "formula",
    [
        "=", "=1/0", "=A3+1", "=VLOOKUP(1,A1:B2,2)", "=NOW()", "=A1:A2", "=1+", "=(1", "=1 2", "={1,2}", "=Missing!A1",
        "=AVERAGE(A3:A4)", "=some_name", "=-1^0.5+(0-1)^0.5", "=A1;B1", "=#REF!", "=SUM(A1:A3", "=" + "1+" * 300 + "1",
    ],
)  # fmt: skip
def test_what_is_not_simple_is_refused(formula: str) -> None:
    with pytest.raises(NotSimple):
        computed(formula, _look_up)
