"""The small parts of intake: units, names of characteristics, places in words, formats, times, the quick lane."""

from __future__ import annotations

import io
import random

import pytest

from sheetqc.finding import Cell
from sheetqc.intake.doubts import Doubts, listed, places
from sheetqc.intake.naming import Names, without_unit
from sheetqc.intake.ooxml import Format, is_date_code
from sheetqc.intake.order import first_backward
from sheetqc.intake.serials import moment
from sheetqc.intake.sheetxml import SheetReader, area_of
from sheetqc.intake.units import factor, is_unit
from sheetqc.study import Characteristic


@pytest.mark.parametrize(
    ("typed", "wanted", "by"),
    [
        ("mm", "mm", 1), ("µm", "mm", 1e-3), ("μm", "mm", 1e-3), ("[mm]", "µm", 1e3),
        ("in", "mm", 25.4), ("MPa", "bar", 10),
        ("Nm", "Ncm", 100), ("MN", "mN", 1e9), ("mm", "g", None), ("HRC", "hrc", 1),
        ("widgets", "mm", None), ("KG", "g", 1e3),
    ],
)  # fmt: skip
def test_units_convert(typed: str, wanted: str, by: float | None) -> None:
    assert factor(typed, wanted) == (None if by is None else pytest.approx(by, rel=1e-12))


def test_known_units() -> None:
    assert is_unit(" (µm) ")
    assert not is_unit("OK")


def test_unit_behind_a_heading() -> None:
    assert without_unit("D12 [mm]") == ("D12", "mm")
    assert without_unit("D12") == ("D12", "")


def test_names() -> None:
    names = Names(
        [Characteristic(id="D12", name="Bore"), Characteristic(id="D-12x", name="Bore"), Characteristic(id="7")]
    )
    assert names.exact("d12") == "D12"
    assert names.exact("Bore") is None, "two are called so"
    assert names.candidates("Bore") == ("D12", "D-12x")
    assert names.loose("D12: reading") == "D12"
    assert names.loose("D-12x [mm]") == "D-12x"
    assert names.loose("7 days") is None, "a number alone says too little"
    assert names.exact("") is None


def test_places_in_words() -> None:
    run = [Cell("Run 1", row, 3) for row in (12, 13, 14, 20)]
    assert places([*run, Cell("B", 1, 1)]) == "'B'!A1, 'Run 1'!C12:C14, C20"
    many = [Cell("S", 2 * i, 1) for i in range(1, 40)]
    assert places(many).endswith("and 27 more places")


def test_listed() -> None:
    assert listed([]) == ""
    assert listed(["a"]) == "a"
    assert listed(["a", "b", "c"]) == "a, b and c"
    assert listed(["a", "b", "c"], most=2) == "a, b and 1 more"


def test_weightiest_findings_come_first() -> None:
    doubts = Doubts()
    for level in ("note", "stop", "caution"):
        doubts.add(level, level, "x.")  # type: ignore[arg-type]
    assert [f.level for f in doubts.study] == ["stop", "caution", "note"]


@pytest.mark.parametrize(
    "code", ["dd.mm.yyyy", "h:mm", "[h]:mm", "yyyy", "mmm-yy", "[$-407]d. mmmm yyyy", "ss.000", "m/d/yy"]
)
def test_date_codes(code: str) -> None:
    assert is_date_code(code)


@pytest.mark.parametrize(
    "code", ["General", "0.00", '0.0" days"', "0\\m", "#,##0", "0.00E+00", "[Red]0", "@", "0_m", "Standard"]
)
def test_codes_that_are_no_dates(code: str) -> None:
    assert not is_date_code(code)


@pytest.mark.parametrize(
    ("serial", "epoch_1904", "text"),
    [
        (45000, False, "2023-03-15"), (45000.25, False, "2023-03-15 06:00:00"), (0.5, False, "12:00:00"),
        (43538, True, "2023-03-15"), (1, False, "1900-01-01"), (61, False, "1900-03-01"),
        (1e12, False, "1000000000000"),
    ],
)  # fmt: skip
def test_day_numbers(serial: float, epoch_1904: bool, text: str) -> None:
    assert moment(serial, epoch_1904) == text


def test_areas() -> None:
    area = area_of("$AB$7:A2")
    assert area is not None
    assert (area.top, area.left, area.bottom, area.right) == (2, 1, 7, 28)
    assert area_of("7:8") is None


def test_backward_times() -> None:
    assert first_backward(["2026-01-01", "2026-01-02"]) is None
    assert first_backward(["2026-01-02", "", "2026-01-01"]) == 2
    assert first_backward(["x", "2026-01-01"]) is None
    assert first_backward([]) is None


def _sheet_xml(chance: random.Random, dressed: bool) -> bytes:
    """A sheet of random cells; `dressed` gives every row a form that only the parser takes."""
    rows = []
    for row in range(1, 200):
        cells = []
        for letter in "ABCDZ":
            kind = chance.randint(0, 4)
            reference = f'r="{letter}{row}"'
            if kind == 0:
                cells.append(f"<c {reference}><v>{chance.uniform(-5, 5)!r}</v></c>")
            elif kind == 1:
                cells.append(f'<c {reference} s="1" t="s"><v>{chance.randint(0, 2)}</v></c>')
            elif kind == 2:
                cells.append(f'<c {reference} s="{chance.randint(0, 1)}"/>')
            elif kind == 3:
                cells.append(f'<c {reference} s="1"><v>{chance.randint(0, 99)}</v></c>')
        hidden = ' hidden="1"' if chance.random() < 0.2 else ""
        mark = "<!-- x -->" if dressed else ""
        rows.append(f'<row r="{row}" spans="1:5"{hidden}>{mark}{"".join(cells)}</row>')
    name = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
    return f'<worksheet xmlns="{name}"><sheetData>{"".join(rows)}</sheetData></worksheet>'.encode()


@pytest.mark.parametrize("seed", range(5))
def test_quick_lane_and_parser_read_the_same(seed: int) -> None:
    reader = SheetReader(["a", " ", "qc:study"], [Format(), Format(percent=True)], False)
    quick, slow = (
        reader.sheet("S", True, io.BytesIO(_sheet_xml(random.Random(seed), dressed))) for dressed in (False, True)
    )
    assert len(quick.rows) > 150
    assert quick == slow
