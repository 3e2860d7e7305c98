"""Part names, sheet names, references in formulas, number formats and colours."""

from __future__ import annotations

import pytest
from lxml import etree

from sheetqc.package import free_sheet_names
from sheetqc.package.colours import make_plain, theme_colours
from sheetqc.package.numberformats import shows_date
from sheetqc.package.partname import PartName
from sheetqc.package.references import renamed, sheet_of


@pytest.mark.parametrize(
    ("source", "reference", "target"),
    [
        ("xl/workbook.xml", "worksheets/sheet1.xml", "xl/worksheets/sheet1.xml"),
        ("xl/workbook.xml", "/xl/styles.xml", "xl/styles.xml"),
        ("xl/worksheets/sheet1.xml", "../drawings/drawing1.xml", "xl/drawings/drawing1.xml"),
        ("xl/workbook.xml", "sheets\\my%20sheet.xml", "xl/sheets/my sheet.xml"),
        ("xl/workbook.xml", "./a/./b.xml#there", "xl/a/b.xml"),
        ("", "xl/workbook.xml", "xl/workbook.xml"),
        ("xl/workbook.xml", "../../etc/passwd", None),
        ("xl/workbook.xml", "#Sheet1!A1", None),
        ("xl/workbook.xml", "", None),
    ],
)
def test_a_reference_leads_to_a_part(source: str, reference: str, target: str | None) -> None:
    found = PartName(source).target(reference)
    assert (found.text if found else None) == target


def test_two_spellings_of_a_name_have_one_key() -> None:
    assert PartName("/XL/Work%20Book.xml").key == PartName("xl\\work book.xml").key
    assert PartName("xl/workbook.xml").relationships == PartName("xl/_rels/workbook.xml.rels")
    assert PartName("").relationships == PartName("_rels/.rels")


@pytest.mark.parametrize("other", ["xl/added/worksheets/sheet1.xml", "styles.xml", "xl/my part #1 50%.xml"])
def test_a_reference_leads_back(other: str) -> None:
    source = PartName("xl/worksheets/sheet1.xml")
    assert source.target(source.reference_to(PartName(other))) == PartName(other)


@pytest.mark.parametrize(
    ("wanted", "taken", "given"),
    [
        (["D12"], [], ["D12"]),
        (["D12"], ["d12"], ["D12 (2)"]),
        (["a", "A"], ["a (2)"], ["a", "A (3)"]),
        (["Straße"], ["STRASSE"], ["Straße (2)"]),
        (["a/b\\c:d*e?f[g]"], [], ["a_b_c_d_e_f_g_"]),
        (["'quoted'"], [], ["quoted"]),
        (["", "History"], [], ["Sheet", "History (2)"]),
        (["x" * 40, "x" * 40], [], ["x" * 31, "x" * 27 + " (2)"]),
        (["😀" * 20], [], ["😀" * 15]),
    ],
)
def test_free_sheet_names(wanted: list[str], taken: list[str], given: list[str]) -> None:
    assert list(free_sheet_names(wanted, taken)) == given
    assert all(len(name.encode("utf-16-le")) <= 62 for name in free_sheet_names(wanted, taken))


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("Data!A1+'Data'!B2", "'New one'!A1+'New one'!B2"),
        ("DATA!A1", "'New one'!A1"),
        ('"Data!A1"&Data!A1', "\"Data!A1\"&'New one'!A1"),
        ("'My Data'!A1+OtherData!A1+Data.x!A1", "'My Data'!A1+OtherData!A1+Data.x!A1"),
        ("SUM(Data:Last!A1)", "SUM('New one:Last'!A1)"),
        ("'it''s'!A1", "'that''s'!A1"),
        ("ROWS(Tab[x])+Tab", "ROWS(Tab_2[x])+Tab"),
        ("Data", "Data"),
    ],
)
def test_names_in_formulas_are_renamed(formula: str, expected: str) -> None:
    sheets = {"data": "New one", "it's": "that's"}
    assert renamed(formula, sheets, {"tab": "Tab_2"}) == expected


@pytest.mark.parametrize(
    ("reference", "sheet"),
    [("'O''Hara'!$A$1", "O'Hara"), ("Data!$A$1", "Data"), ("#REF!", None), ("1.5", None), ("'Gone'!#REF!", "Gone")],
)
def test_the_sheet_of_a_reference(reference: str, sheet: str | None) -> None:
    assert sheet_of(reference) == sheet


@pytest.mark.parametrize(
    ("code", "shows"),
    [
        ("yyyy-mm-dd", True),
        ("mmm", True),
        ("[$-407]d. mmm yy;@", True),
        ("General", False),
        ("0.00", False),
        ('0.0" days"', False),
        ("[Red]0.0", False),
        ("hh:mm:ss", False),
        ("[h]:mm", False),
        ("0.0\\d", False),
    ],
)
def test_which_number_formats_show_a_day(code: str, shows: bool) -> None:
    assert shows_date(code) is shows


def test_theme_colours_become_plain() -> None:
    theme = etree.fromstring(
        '<a:theme xmlns:a="urn:a"><a:clrScheme><a:dk1><a:sysClr val="windowText" lastClr="101010"/></a:dk1>'
        '<a:accent1><a:srgbClr val="336699"/></a:accent1></a:clrScheme></a:theme>'
    )
    colours = theme_colours(theme)
    assert (colours[0], colours[1], colours[4]) == ("FFFFFF", "101010", "336699")
    font = etree.fromstring('<f><c theme="4"/><c theme="1" tint="0.5"/><c rgb="FF000001"/><c theme="99"/></f>')
    make_plain(font, colours)
    assert [colour.get("rgb") for colour in font] == ["FF336699", "FF888888", "FF000001", None]
