from __future__ import annotations

import json
import zipfile
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from sheetqc.register import Row, collect, write
from sheetqc.register import workbook as module
from sheetqc.register.listing import ASIDE_COLUMNS, JUDGED_COLUMNS, link
from tests.register.answers import characteristic, document, put

HEAD = 3
NASTY = (
    "=1+1",
    '=HYPERLINK("http://x")',
    "+cmd",
    "@SUM(A1)",
    "http://example.com",
    "{=1}",
    "0123",
    "-5",
    "a\x01b",
    "\ud800",
)


def _written(folder: Path, rows: tuple[Row, ...] | None = None) -> Any:
    write(collect(folder) if rows is None else rows, folder / "register.xlsx")
    return openpyxl.load_workbook(folder / "register.xlsx")


def _cells(sheet: Any) -> list[dict[str, Any]]:
    heads = [c.value for c in sheet[HEAD]]
    return [
        {head: cell for head, cell in zip(heads, row, strict=True) if head}
        for row in sheet.iter_rows(min_row=HEAD + 1)
        if any(cell.value is not None for cell in row)
    ]


def _formulas(book: Any) -> list[Any]:
    return [c for sheet in book for row in sheet.iter_rows() for c in row if c.data_type == "f"]


def test_one_row_a_characteristic(tmp_path: Path) -> None:
    put(tmp_path / "answered/s", "a", document(characteristic("A"), characteristic("B", "not met")))
    book = _written(tmp_path)
    assert book.sheetnames == ["Overview", "Characteristics", "Returned"]
    rows = _cells(book["Characteristics"])
    assert list(rows[0]) == [c.heading for c in JUDGED_COLUMNS]
    found = {r["Id"].value: r for r in rows}
    assert set(found) == {"A", "B"}
    row = found["A"]
    assert row["Verdict"].value == "◕ likely"
    assert found["B"]["Verdict"].value == "○ not met"
    assert (row["Supplier"].value, row["Part"].value, row["Lot"].value) == ("Maple Ridge Seals", "PN-7", "L1")
    assert (row["Values"].value, row["Required"].value, row["Estimate"].value) == (50, 1.33, 1.5)
    assert (row["Lower bound"].value, row["Claimed"].value, row["Expected ppm"].value) == (1.2, 1.7, 12.5)
    assert row["Main reason"].value == "The lower bound, 1.20, is below 1.33."
    assert row["Answer"].value == "a.answered.xlsx"
    assert row["Answer"].hyperlink.target.replace("\\", "/") == "answered/s/a.answered.xlsx"
    assert book["Characteristics"].tables["Judged"].ref == f"A3:S{HEAD + 2}"
    assert book["Characteristics"].tables["Judged"].autoFilter is not None
    assert row["Supplier"].font.name == "Arial"


@pytest.mark.parametrize("text", NASTY)
def test_supplier_text_is_never_more_than_text(tmp_path: Path, text: str) -> None:
    verdict = {"state": "likely", "requirement": 1.33, "index": "Ppk", "reasons": [text], "next_steps": [text]}
    findings = [{"code": text, "level": "stop"}]
    put(
        tmp_path,
        "a",
        document(characteristic(text, name=text, verdict=verdict, findings=findings), supplier=text, lot=text),
    )
    (tmp_path / "b.returned.json").write_text(json.dumps({"reason": text, "source": {"name": text}}))
    clean = _written(tmp_path / "none", ())
    known = len(_formulas(clean))
    book = _written(tmp_path)
    assert len(_formulas(book)) == known + 5  # those of the one supplier's row
    (row,) = _cells(book["Characteristics"])
    assert row["Supplier"].data_type == row["Lot"].data_type == row["Main reason"].data_type == "s"
    if text.isprintable():
        assert row["Supplier"].value == text
    with zipfile.ZipFile(tmp_path / "register.xlsx") as package:
        relations = [package.read(n).decode() for n in package.namelist() if n.endswith(".rels")]
    external = [r for text_ in relations for r in text_.split("<Relationship ") if "External" in r]
    assert external
    assert not any("http://x" in r.split("Target=")[1] or "example.com" in r for r in external)


def test_overview_counts_by_formula(tmp_path: Path) -> None:
    put(tmp_path, "a", document(characteristic("A", "shown"), characteristic("B", "shown"), sha256="1"))
    put(tmp_path, "b", document(characteristic("C", "not met"), sha256="2", supplier="maple ridge seals"))
    put(tmp_path, "c", document(characteristic("D", "no verdict"), sha256="3", supplier=None))
    _written(tmp_path)
    sheet = openpyxl.load_workbook(tmp_path / "register.xlsx", data_only=True)["Overview"]
    values = {row[1].value: [c.value for c in row[2:8]] for row in sheet.iter_rows() if row[1].value}
    assert values["● shown"][:2] == [2, 0.5]
    assert values["○ not met"][:2] == [1, 0.25]
    assert values["Maple Ridge Seals"][:5] == [2, 0, 0, 1, 0]
    assert values["(no supplier stated)"][:5] == [0, 0, 0, 0, 1]
    assert "4 characteristics in 3 answered workbooks; from 2 suppliers; 0 files returned unanswered." in values
    assert values["few values"][1] == 4


def test_overview_has_charts_with_a_description(tmp_path: Path) -> None:
    put(tmp_path, "a", document(characteristic("A")))
    _written(tmp_path)
    with zipfile.ZipFile(tmp_path / "register.xlsx") as package:
        charts = [n for n in package.namelist() if n.startswith("xl/charts/chart")]
        drawing = package.read("xl/drawings/drawing1.xml").decode()
    assert len(charts) == 2
    assert drawing.count('descr="Bars of') == 2


def test_first_for_a_person(tmp_path: Path) -> None:
    many = [characteristic(f"L{n}", "likely") for n in range(20)] + [characteristic("S", "shown")]
    worst = characteristic("W", "not met", indices={"Ppk": {"estimate": 0.5, "lower": 0.4, "upper": 0.6}})
    put(tmp_path, "a", document(*many, worst))
    sheet = _written(tmp_path)["Overview"]
    ids = [row[3].value for row in sheet.iter_rows() if row[2].value == "PN-7"]
    assert ids[0] == "W"
    assert len(ids) == 10
    assert "S" not in ids


def test_returned_have_their_own_sheet(tmp_path: Path) -> None:
    (tmp_path / "r.returned.json").write_text(json.dumps({"reason": "no tag", "source": {"name": "r.xlsx"}}))
    (tmp_path / "r.xlsx").touch()
    put(tmp_path, "bad", "{")
    put(tmp_path, "one", document(characteristic(), sha256="1"))
    put(tmp_path, "two", document(characteristic(), sha256="1"))
    rows = _cells(_written(tmp_path)["Returned"])
    assert list(rows[0]) == [c.heading for c in ASIDE_COLUMNS]
    assert [r["What"].value for r in rows] == ["returned", "unreadable", "repeated"]
    assert rows[0]["Reason"].value == "no tag"
    assert rows[0]["File"].hyperlink.target == "r.xlsx"


def test_nothing_yet(tmp_path: Path) -> None:
    book = _written(tmp_path)
    assert book["Characteristics"]["A4"].value == "none"
    assert book["Overview"]["C6"].value.startswith("=COUNTIFS")


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("a b.xlsx", "a%20b.xlsx"),
        ("a#1 50%.xlsx", "a%231%2050%25.xlsx"),
        ("Ü名.xlsx", "Ü名.xlsx"),
        ("a'&.xlsx", "a%27%26.xlsx"),
    ],
)
def test_links(tmp_path: Path, name: str, expected: str) -> None:
    assert link(tmp_path / "x" / name, tmp_path) == f"external:x/{expected}"
    assert link(tmp_path / name, tmp_path / "y") == f"external:../{expected}"


def test_replaced_in_one_step(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    put(tmp_path, "a", document(characteristic()))
    _written(tmp_path)
    before = (tmp_path / "register.xlsx").read_bytes()

    def fail(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(module, "add_judged", fail)
    with pytest.raises(OSError, match="No space"):
        write(collect(tmp_path), tmp_path / "register.xlsx")
    assert (tmp_path / "register.xlsx").read_bytes() == before
    assert not [p for p in tmp_path.iterdir() if p.suffix == ".tmp"]


def test_many_rows_and_suppliers(tmp_path: Path) -> None:
    for number in range(40):
        rows = [characteristic(f"D{n}") for n in range(25)]
        put(tmp_path, f"{number}", document(*rows, sha256=str(number), supplier=f"Supplier {number % 20}"))
    book = _written(tmp_path)
    assert len(_cells(book["Characteristics"])) == 1000
    sheet = book["Overview"]
    assert any("12 suppliers with most to look at, of 20" in str(row[1].value) for row in sheet.iter_rows())
