"""Counts of defects are ordered, with what is sure about the order."""

import json

import pytest

from sheetqc.finding import Cell
from sheetqc.judgement import judge
from sheetqc.judgement.counts_view import count_result
from sheetqc.study import DefectCounts, Source, Study


def block(*counts: float) -> DefectCounts:
    return DefectCounts(
        categories=tuple(["scratch", "pore", "burr", "dent"][: len(counts)]),
        counts=counts,
        cells=tuple(Cell("Counts", 5 + i, 2) for i in range(len(counts))),
    )


def test_the_most_frequent_comes_first_with_its_share() -> None:
    found, finding = count_result(block(120, 500, 380, 200), 0.95)
    assert found is not None
    assert [row.category for row in found.categories] == ["pore", "burr", "dent", "scratch"]
    assert found.categories[0].share == pytest.approx(500 / 1200)
    assert found.categories[0].lower < 500 / 1200 < found.categories[0].upper
    assert found.categories[-1].cumulative == pytest.approx(1.0)
    assert finding.level == "note"
    assert "surely" in finding.text


def test_a_narrow_lead_and_few_counts_are_told() -> None:
    _, finding = count_result(block(30, 28, 5), 0.95)
    assert finding.level == "caution"
    assert "may not be" in finding.text
    assert "1000" in finding.text


def test_the_chance_of_a_lead_is_that_of_a_fair_coin() -> None:
    # 8 heads or more of 10, and as many tails: 2 * 56/1024
    _, finding = count_result(block(8, 2), 0.95)
    assert "0.11" in finding.text


def test_counts_that_are_not_whole_are_told_with_their_cells() -> None:
    found, finding = count_result(block(3.5, 2), 0.95)
    assert found is None
    assert finding.code == "counts-unusable"
    assert finding.cells


def test_counts_stand_in_the_answer() -> None:
    study = Study(source=Source(name="a.xlsx", sha256="0", bytes=1), counts=(block(120, 500),))
    document = judge(study).to_dict()
    assert json.loads(json.dumps(document))["counts"][0]["total"] == 620
