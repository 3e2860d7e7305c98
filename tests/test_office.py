"""The outside judge itself: it finds a stored value that is wrong, and lets a right one pass."""

from __future__ import annotations

from pathlib import Path

import pytest
import xlsxwriter

from tests.office import converted, differences, office, same


def test_values_are_the_same_but_for_the_last_digits() -> None:
    assert same(1.0, 1.0 + 1e-12)
    assert not same(1.0, 1.0 + 1e-6)
    assert not same(1.0, "1.0")
    assert not same(True, 1)
    assert same(None, "")
    assert not same("shown", "likely")


@pytest.mark.parametrize("stored", [5.0, 5.1])
@office
def test_a_wrong_stored_value_is_found(stored: float, tmp_path: Path) -> None:
    book = tmp_path / "book.xlsx"
    with xlsxwriter.Workbook(str(book)) as workbook:
        sheet = workbook.add_worksheet("S")
        sheet.write("A1", 2)
        sheet.write_formula("A2", "=A1+3", None, stored)
    count, wrong = differences(book, converted([book], "xlsx", tmp_path)[0])
    assert count == 1
    assert len(wrong) == (0 if stored == 5.0 else 1)
