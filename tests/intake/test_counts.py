"""Counts of defects: rows of qc:counts."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sheetqc import intake
from sheetqc.errors import NothingToAnswer
from sheetqc.study import Study
from tests.intake.building import Formula, cells, codes, finding, table, write


def _study(path: Path, *rows: list[Any]) -> Study:
    return intake.read(write(path / "s.xlsx", {"Defects": table("B2", [["qc:counts"], *rows])}))


def test_all_columns(tmp_path: Path) -> None:
    study = _study(
        tmp_path,
        ["Category", "Count", "Period", "Inspected", "Cost"],
        ["Scratch", 12, "week 1", 500, 30.5],
        ["Dent", 3, "week 1", 500, 12],
    )
    counts = study.counts[0]
    assert counts.categories == ("Scratch", "Dent")
    assert counts.counts == (12, 3)
    assert counts.periods == ("week 1", "week 1")
    assert counts.inspected == (500, 500)
    assert counts.costs == (30.5, 12)
    assert [str(c) for c in counts.cells] == ["'Defects'!C4", "'Defects'!C5"]
    assert codes(study) == []


def test_counts_alone_are_enough_to_be_answered(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Defect type", "Number"], ["Scratch", 12], ["Total", Formula("=SUM(C4:C4)", 12)])
    assert study.characteristics == ()
    assert study.counts[0].counts == (12,)
    assert study.counts[0].periods is None
    assert study.counts[0].inspected is None


def test_rows_that_cannot_be_used(tmp_path: Path) -> None:
    study = _study(tmp_path, ["Category", "Count"], ["Scratch", 12], ["Dent", "many"], [None, 4], ["Burr", -1])
    assert study.counts[0].categories == ("Scratch",)
    assert cells(finding(study, "count-not-usable")) == ["'Defects'!C5", "'Defects'!C6", "'Defects'!C7"]


def test_counts_as_texts(tmp_path: Path) -> None:
    assert _study(tmp_path, ["Category", "Count"], ["Scratch", "1.200"], ["Dent", "1.234.000"]).counts[0].counts == (
        1200,
        1234000,
    )


def test_optional_column_with_a_gap_is_left_out(tmp_path: Path) -> None:
    counts = _study(tmp_path, ["Category", "Count", "Cost"], ["Scratch", 12, 5], ["Dent", 2, None]).counts[0]
    assert counts.counts == (12, 2)
    assert counts.costs is None


def test_nothing_usable_is_returned(tmp_path: Path) -> None:
    with pytest.raises(NothingToAnswer):
        _study(tmp_path, ["Colour", "Weather"], ["red", "wet"])
