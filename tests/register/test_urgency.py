from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sheetqc.register.rows import Judged, Workbook
from sheetqc.register.urgency import by_urgency, chance_wrong, weight

BOOK = Workbook(report=Path("a.answered.json"), copy=None, changed=0.0, name="a.xlsx")


def _row(**fields: Any) -> Judged:
    known = {"state": "likely", "requirement": 1.33, "estimate": 1.5, "lower": 1.2, "upper": 1.8}
    return Judged(workbook=BOOK, id="D", **{**known, **fields})


def test_chance_from_the_bound() -> None:
    # lower bound exactly at the claim: by the meaning of a 95 % bound, 5 %
    assert chance_wrong(_row(lower=1.33)) == pytest.approx(0.05)
    assert chance_wrong(_row(lower=1.33, confidence=0.9)) == pytest.approx(0.10)
    assert chance_wrong(_row(estimate=1.33)) == pytest.approx(0.5)
    # estimate below the claim by as much as the bound is below the estimate
    assert chance_wrong(_row(estimate=1.1, lower=0.87)) == pytest.approx(0.95)


def test_the_claim_counts_where_it_is_higher() -> None:
    assert chance_wrong(_row(claimed=1.5)) == pytest.approx(0.5)
    assert chance_wrong(_row(claimed=1.0)) == chance_wrong(_row())


@pytest.mark.parametrize(
    "missing", [{"requirement": None}, {"estimate": None}, {"lower": None}, {"state": "no verdict"}]
)
def test_nothing_known_is_one_half(missing: dict[str, Any]) -> None:
    assert chance_wrong(_row(**missing)) == 0.5


def test_no_spread() -> None:
    assert chance_wrong(_row(estimate=1.4, lower=1.4)) == 0.0
    assert chance_wrong(_row(estimate=1.2, lower=1.2)) == 1.0


@pytest.mark.parametrize(
    ("words", "expected"),
    [
        ("Critical", 3.0),
        ("CC", 3.0),
        ("safety-relevant", 3.0),
        ("Significant", 2.0),
        ("SC", 2.0),
        ("", 1.0),
        ("minor", 1.0),
    ],
)
def test_weights(words: str, expected: float) -> None:
    assert weight(words) == expected


def test_order() -> None:
    shown = _row(lower=1.4, estimate=1.9, critical_class="critical")
    critical = _row(estimate=1.33, critical_class="critical")
    bad = _row(estimate=0.9, lower=0.7)
    unknown = _row(state="no verdict")
    assert by_urgency([shown, unknown, bad, critical]) == [critical, bad, unknown, shown]
