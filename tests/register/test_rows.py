from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sheetqc.register.rows import STATES, rows_of_answer
from tests.register.answers import characteristic, document

REPORT = Path("a.answered.json")


def test_every_field() -> None:
    (row,) = rows_of_answer(document(characteristic()), REPORT, Path("a.answered.xlsx"), 5.0)
    book = row.workbook
    assert (book.supplier, book.part_number, book.part_name) == ("Maple Ridge Seals", "PN-7", "Ring")
    assert (book.lot, book.date, book.name, book.sha256) == ("L1", "2026-03-01", "study.xlsx", "ab")
    assert (row.id, row.name, row.unit, row.critical_class) == ("D12", "Seal face flatness", "µm", "critical")
    assert (row.count, row.state, row.requirement, row.index) == (50, "likely", 1.33, "Ppk")
    assert (row.estimate, row.lower, row.upper, row.claimed) == (1.5, 1.2, 1.8, 1.7)
    assert (row.expected_ppm, row.model, row.stable) == (12.5, "lognormal", True)
    assert row.reason == "The lower bound, 1.20, is below 1.33."
    assert row.next_step == "Send 40 more values."
    assert row.concerns == ("few-values",)


@pytest.mark.parametrize("field", sorted(characteristic()))
@pytest.mark.parametrize("value", [None, "text", 7, [], {}, [None], {"estimate": "x"}, True])
def test_fields_of_any_type_are_survived(field: str, value: Any) -> None:
    (row,) = rows_of_answer(document(characteristic(**{field: value})), REPORT, None, 0.0)
    assert row.state in STATES
    assert isinstance(row.reason, str)


@pytest.mark.parametrize("key", ["study", "source", "findings", "tool"])
@pytest.mark.parametrize("value", [None, "text", []])
def test_heads_of_any_type_are_survived(key: str, value: Any) -> None:
    (row,) = rows_of_answer({**document(characteristic()), key: value}, REPORT, None, 0.0)
    assert row.workbook.name


@pytest.mark.parametrize("content", [None, [], "text", {}, {"characteristics": None}, {"characteristics": {}}])
def test_what_is_no_answer(content: Any) -> None:
    with pytest.raises(ValueError, match="no list of characteristics"):
        rows_of_answer(content, REPORT, None, 0.0)


def test_missing_index_and_unknown_state() -> None:
    verdict = {"state": "splendid", "requirement": None, "index": "Cpk", "reasons": []}
    (row,) = rows_of_answer(document(characteristic(verdict=verdict)), REPORT, None, 0.0)
    assert (row.state, row.estimate, row.lower, row.reason) == ("no verdict", None, None, "")


def test_infinite_numbers_are_none() -> None:
    (row,) = rows_of_answer(document(characteristic(count=float("nan"))), REPORT, None, 0.0)
    assert row.count is None


def test_texts_are_on_one_line_and_numbers_become_texts() -> None:
    (row,) = rows_of_answer(document(characteristic(), supplier=" Maple\n Ridge ", part_number=4711), REPORT, None, 0.0)
    assert (row.workbook.supplier, row.workbook.part_number) == ("Maple Ridge", "4711")
