"""The charts: every one drawn where its data allow it, on cells that hold numbers, told apart without colour."""

from __future__ import annotations

import zipfile
from collections.abc import Iterator
from itertools import pairwise
from typing import Any

import pytest
from lxml import etree
from openpyxl.utils import range_boundaries

from sheetqc.sheets.charts import CHARTS
from sheetqc.sheets.words import Words
from tests.sheets.conftest import Written

C = "{http://schemas.openxmlformats.org/drawingml/2006/chart}"
A = "{http://schemas.openxmlformats.org/drawingml/2006/main}"
D = "{http://schemas.openxmlformats.org/drawingml/2006/spreadsheetDrawing}"


@pytest.fixture(scope="module")
def parts(written: Written) -> dict[str, Any]:
    """Charts and drawings of the new sheets."""
    with zipfile.ZipFile(written.additions) as file:
        names = [n for n in file.namelist() if n.startswith(("xl/charts/chart", "xl/drawings/drawing"))]
        return {name: etree.fromstring(file.read(name)) for name in names}


def charts(parts: dict[str, Any]) -> Iterator[Any]:
    """The charts alone."""
    return (root for name, root in parts.items() if name.startswith("xl/charts/"))


def test_every_kind_of_chart_has_a_title_and_alternative_text() -> None:
    say = Words()
    for kind in CHARTS:
        assert say(f"chart.{kind.key}", unit=", mm", track="Single values")
        assert "D12" in say(f"alt.{kind.key}", id="D12", n=3)
    assert len({kind.key for kind in CHARTS}) == len(CHARTS)


def test_a_full_characteristic_has_every_chart_and_each_is_described(written: Written, parts: dict[str, Any]) -> None:
    told = [e.get("descr") for root in parts.values() for e in root.iter(f"{D}cNvPr")]
    assert all(told)
    say, first = Words(), written.answer.assessments[0]
    for kind in CHARTS:
        assert say(f"alt.{kind.key}", id="D12", n=first.count) in told


def test_every_question_but_the_last_has_a_picture() -> None:
    assert {kind.question for kind in CHARTS} == {"data", "steady", "shape", "capable"}


def _ranges(root: Any) -> Iterator[tuple[str, str, str]]:
    """Series, role and reference of every range a chart draws from."""
    for series in root.iter(f"{C}ser"):
        for role in ("xVal", "yVal", "plus", "minus"):
            for element in series.iter(f"{C}{role}"):
                for formula in element.iter(f"{C}f"):
                    yield str(series.find(f"{C}idx").get("val")), role, str(formula.text)


def test_charts_draw_from_their_own_sheet_and_places_are_numbers(written: Written, parts: dict[str, Any]) -> None:
    book = written.values()
    seen = 0
    for root in charts(parts):
        for _, role, reference in _ranges(root):
            sheet, _, span = reference.rpartition("!")
            name = sheet.strip("'").replace("''", "'")
            assert name in written.names
            left, top, right, bottom = range_boundaries(span.replace("$", ""))
            for row in book[name].iter_rows(min_row=top, max_row=bottom, min_col=left, max_col=right):
                for cell in row:
                    seen += 1
                    numeric = isinstance(cell.value, (int, float))
                    assert numeric or (role == "yVal" and cell.value == "#N/A"), f"{reference} {cell.coordinate}"
    assert seen > 3000


def test_series_of_a_chart_run_in_step(parts: dict[str, Any]) -> None:
    for root in charts(parts):
        sizes: dict[str, set[int]] = {}
        for series, role, reference in _ranges(root):
            if role in ("xVal", "yVal"):
                _, top, _, bottom = range_boundaries(reference.rpartition("!")[2].replace("$", ""))
                sizes.setdefault(series, set()).add(bottom - top)
        assert all(len(several) == 1 for several in sizes.values())


def test_nothing_is_left_to_defaults_that_changed_between_versions(parts: dict[str, Any]) -> None:
    for root in charts(parts):
        assert root.find(f"{C}roundedCorners").get("val") == "0"
        for series in root.iter(f"{C}ser"):
            assert series.find(f"{C}smooth").get("val") == "0"
        for labels in root.iter(f"{C}dLbls"):
            assert labels.find(f"{C}showLegendKey").get("val") == "0"
        assert all(axis.find(f"{C}delete").get("val") == "0" for axis in root.iter(f"{C}valAx"))


ROLES = {
    "limit": ("lower limit", "upper limit"),
    "control": ("lower control limit", "upper control limit"),
    "centre": ("mean", "centre line"),
    "required": ("required",),
    "band": ("band of 95 of 100 samples",),
}
"""Lines that must be told apart without colour."""


def test_roles_are_told_apart_by_dash_and_width(parts: dict[str, Any]) -> None:
    looks: dict[str, set[tuple[str, str]]] = {role: set() for role in ROLES}
    for root in charts(parts):
        for series in root.iter(f"{C}ser"):
            name = series.findtext(f"{C}tx/{C}v")
            line = series.find(f"{C}spPr/{A}ln")
            for role, names in ROLES.items():
                if name in names and line is not None and line.find(f"{A}solidFill") is not None:
                    dash = line.find(f"{A}prstDash")
                    looks[role].add((line.get("w"), "solid" if dash is None else dash.get("val")))
    assert all(len(several) == 1 for several in looks.values()), looks
    dashes = [next(iter(several))[1] for several in looks.values()]
    assert len(set(dashes)) == len(dashes)


def test_places_of_the_curve_rise(written: Written) -> None:
    sheet = written.values()["QC P7"]
    column = next(cell.column for cell in sheet[2] if cell.value == "Place")
    places = [c.value for (c,) in sheet.iter_rows(min_row=3, min_col=column, max_col=column) if c.value is not None]
    assert len(places) > 30
    assert all(a < b for a, b in pairwise(places))
