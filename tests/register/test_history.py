from __future__ import annotations

import os
import zipfile
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from sheetqc.register import Judged, collect, write
from sheetqc.register.history import COLUMNS, series
from tests.register.answers import characteristic, document, put


def _study(folder: Path, name: str, when: float, lower: float = 1.2, id_: str = "D12", **study: Any) -> None:
    indices = {"Ppk": {"estimate": lower + 0.3, "lower": lower, "upper": lower + 0.6}}
    state = "shown" if lower >= 1.33 else "likely"
    known = {"lot": name, "date": "", **study}
    report = put(folder, name, document(characteristic(id_, state, indices=indices, claim=None), sha256=name, **known))
    os.utime(report, (when, when))


def _series(folder: Path) -> list[list[str]]:
    groups = series([row for row in collect(folder) if isinstance(row, Judged)])
    return [[row.workbook.lot for row in group] for group in groups]


def test_by_the_time_of_the_answer(tmp_path: Path) -> None:
    _study(tmp_path, "a", 3e8)
    _study(tmp_path, "b", 2e8)
    assert _series(tmp_path) == [["b", "a"]]


def test_by_the_date_of_the_study_where_all_state_one(tmp_path: Path) -> None:
    _study(tmp_path, "a", 2e8, date="2026-03-02")
    _study(tmp_path, "b", 3e8, date="2026-03-01")
    assert _series(tmp_path) == [["b", "a"]]
    _study(tmp_path, "c", 1e8, date="March")  # a date that cannot be ordered: the answers' times hold for all
    assert _series(tmp_path) == [["c", "a", "b"]]


@pytest.mark.parametrize("other", [{"supplier": "Else"}, {"part_number": "PN-8"}, {"id_": "X"}])
def test_other_things_are_no_series(tmp_path: Path, other: dict[str, str]) -> None:
    _study(tmp_path, "a", 1e8)
    _study(tmp_path, "b", 2e8, **other)  # type: ignore[arg-type]
    assert _series(tmp_path) == []


def test_without_a_part_number_nothing_belongs_together(tmp_path: Path) -> None:
    _study(tmp_path, "a", 1e8, part_number=None)
    _study(tmp_path, "b", 2e8, part_number=None)
    assert _series(tmp_path) == []


def test_the_series_that_needs_a_person_comes_first(tmp_path: Path) -> None:
    _study(tmp_path, "a", 1e8, lower=1.5, part_number="good")
    _study(tmp_path, "b", 2e8, lower=1.6, part_number="good")
    _study(tmp_path, "c", 1e8, lower=1.5, part_number="Bad")
    _study(tmp_path, "d", 2e8, lower=0.5, part_number="bad")
    assert _series(tmp_path) == [["c", "d"], ["a", "b"]]


def test_sheet_shows_what_was_asked_before(tmp_path: Path) -> None:
    _study(tmp_path, "a", 1e8, lower=1.2)
    _study(tmp_path, "b", 2e8, lower=1.4)
    write(collect(tmp_path), tmp_path / "register.xlsx")
    sheet = openpyxl.load_workbook(tmp_path / "register.xlsx")["Over time"]
    rows = [[c.value for c in row[: len(COLUMNS)]] for row in sheet.iter_rows()]
    (start,) = [n for n, row in enumerate(rows) if row[0] == "Part"]
    heads, first, second = rows[start : start + 3]
    assert heads == [c.heading for c in COLUMNS]
    before, asked = heads.index("Before"), heads.index("Asked for before")
    assert (first[before], first[asked]) == (None, None) or first[asked] == ""
    assert (second[before], second[asked]) == ("◕ likely", "Send 40 more values.")
    assert (second[heads.index("Verdict")], second[heads.index("Lower bound")]) == ("● shown", 1.4)
    with zipfile.ZipFile(tmp_path / "register.xlsx") as package:
        charts = [package.read(n).decode() for n in package.namelist() if n.startswith("xl/charts/chart")]
    lines = [c for c in charts if "<c:lineChart>" in c]
    assert len(lines) == 1
    column = openpyxl.utils.get_column_letter(heads.index("Estimate") + 1)
    assert f"'Over time'!${column}${start + 2}:${column}${start + 3}" in lines[0]


def test_no_sheet_without_a_series(tmp_path: Path) -> None:
    _study(tmp_path, "a", 1e8)
    write(collect(tmp_path), tmp_path / "register.xlsx")
    assert "Over time" not in openpyxl.load_workbook(tmp_path / "register.xlsx").sheetnames
