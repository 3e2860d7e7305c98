"""The example workbooks: made from a fixed seed, and current in the repository."""

from __future__ import annotations

import zipfile
from pathlib import Path
from typing import Any

import pytest

from tests.examples import own_style
from tests.examples.draws import Draw, read, several
from tests.examples.make import EXAMPLES, FOLDER, make
from tests.examples.study import subgroups, times
from tests.office import opened

NAMES = [name for name, _ in EXAMPLES]


@pytest.fixture(scope="module")
def fresh(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("examples")
    make(folder)
    return folder


def cells(path: Path) -> dict[str, Any]:
    """Everything that a workbook says: sheets with their state, and every cell with its value and number format."""
    book = opened(path, keep_vba=path.suffix == ".xlsm")
    sheets = {
        sheet.title: [(c.coordinate, c.value, c.number_format) for row in sheet.iter_rows() for c in row]
        for sheet in book.worksheets
    }
    names = {name: defined.attr_text for name, defined in book.defined_names.items()}
    return {"order": book.sheetnames, "states": [s.sheet_state for s in book.worksheets], "names": names} | sheets


def test_the_same_seed_gives_the_same_bytes(fresh: Path, tmp_path: Path) -> None:
    for path in make(tmp_path):
        assert path.read_bytes() == (fresh / path.name).read_bytes(), path.name


@pytest.mark.parametrize("name", NAMES)
def test_the_workbooks_are_current(name: str, fresh: Path) -> None:
    assert cells(FOLDER / name) == cells(fresh / name), "run: python -m tests.examples.make"
    with zipfile.ZipFile(FOLDER / name) as kept, zipfile.ZipFile(fresh / name) as made:
        assert sorted(kept.namelist()) == sorted(made.namelist())


def test_the_folder_holds_nothing_else() -> None:
    results = (".answered", ".returned")
    kept = {p.name for p in FOLDER.iterdir() if p.suffix != ".png" and not p.stem.endswith(results)}
    assert kept == {*NAMES, "README.md"}


def test_every_example_is_told_of() -> None:
    text = (FOLDER / "README.md").read_text(encoding="utf-8")
    assert [name for name in NAMES if f"`{name}`" not in text] == []


def test_a_draw_depends_on_its_name_alone() -> None:
    first, other = Draw("a").uniform(), Draw("b").uniform()
    assert first != other
    assert Draw("a").uniform() == first


def test_draws_have_the_shape_they_are_named_for() -> None:
    count = 4000
    draw = Draw("shapes")
    for values, median in (
        (several(count, lambda: draw.normal(5.0, 2.0)), 5.0),
        (several(count, lambda: draw.lognormal(3.0, 0.4)), 3.0),
        (several(count, lambda: draw.weibull(2.0, 3.0)), 2.0 * 0.693147 ** (1 / 3)),
        (several(count, lambda: draw.rayleigh(1.5)), 1.5 * 1.177410),
        (several(count, lambda: draw.gumbel(1.0, 0.5)), 1.0 + 0.5 * 0.366513),
    ):
        below = sum(1 for v in values if v < median) / count
        assert abs(below - 0.5) < 4 * 0.5 / count**0.5


def test_readings_step_by_the_resolution() -> None:
    assert read([1.23456, 2.0], "0.005") == [1.235, 2.0]
    assert read([23.6], "1") == [24.0]


def test_rows_of_a_shift_stay_in_it() -> None:
    assert subgroups(2, 3) == [1, 1, 1, 2, 2, 2]
    moments = [str(moment) for moment in times("2026-02-09T21:50", 7, 3)]
    assert moments == ["2026-02-09 21:50:00", "2026-02-09 21:57:00", "2026-02-10 06:00:00"]


def test_the_own_style_has_furniture_that_a_copy_could_lose(fresh: Path) -> None:
    path = fresh / "bearing-bush-own-style.xlsx"
    with zipfile.ZipFile(path) as archive:
        names = archive.namelist()
        values = archive.read("xl/worksheets/sheet2.xml").decode()
    for kind in ("xl/media/", "xl/charts/", "xl/chartsheets/", "xl/comments", "xl/drawings/vmlDrawing"):
        assert any(name.startswith(kind) for name in names), kind
    assert values.count("<conditionalFormatting") == 2
    assert "<mergeCell " in values
    assert "<sheetProtection " in values
    book = opened(path)
    assert book[own_style.NOTES].sheet_state == "hidden"
    assert book.sheetnames == [own_style.COVER, own_style.VALUES, own_style.CHART, own_style.NOTES]
