"""Workbooks that can be read but should be left alone, and those whose formulas wait for an answer."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.workbook.protection import WorkbookProtection

from sheetqc.errors import CannotGraft
from sheetqc.package import Limits, check, graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import macros, plain, since_1904, strict
from tests.package.packages import contents, packed

RELATION = b"http://schemas.openxmlformats.org/officeDocument/2006/relationships/"


def protected(path: Path) -> Path:
    book = openpyxl.Workbook()
    book.security = WorkbookProtection(lockStructure=True)
    book.save(path)
    return path


def _linked(path: Path, lists: str, kind: bytes, part: str) -> Path:
    members = contents(plain(path))
    link = b'<Relationship Id="rId99" Type="%s" Target="/%s"/></Relationships>' % (kind, part.encode())
    members[lists] = members[lists].replace(b"</Relationships>", link)
    members[part] = b"<a/>"
    return packed(path, members)


def shared(path: Path) -> Path:
    return _linked(
        path, "xl/_rels/workbook.xml.rels", RELATION + b"revisionHeaders", "xl/revisions/revisionHeaders.xml"
    )


def signed(path: Path) -> Path:
    kind = b"http://schemas.openxmlformats.org/package/2006/relationships/digital-signature/origin"
    return _linked(path, "_rels/.rels", kind, "_xmlsignatures/origin.sigs")


@pytest.mark.parametrize(
    ("maker", "words"),
    [(protected, "structure"), (shared, "shared"), (signed, "signature")],
    ids=lambda value: str(value)[:20],
)
def test_left_alone_unless_told_otherwise(maker: Callable[[Path], Path], words: str, tmp_path: Path) -> None:
    original = maker(tmp_path / "original.xlsx")
    additions = write_additions(tmp_path / "additions.xlsx")
    assert words in check(original).reason
    with pytest.raises(CannotGraft, match=words):
        graft(original, additions, tmp_path / "copy.xlsx")
    assert not (tmp_path / "copy.xlsx").exists()
    graft(original, additions, tmp_path / "copy.xlsx", even_if_protected=True)
    assert sheet_names(tmp_path / "copy.xlsx")[-1] == "Answer D12"


def test_facts_tell_what_a_workbook_is(tmp_path: Path) -> None:
    facts = check(macros(tmp_path / "m.xlsx"))
    assert (facts.kind, facts.macro_enabled, facts.sheets, facts.reason) == ("xlsm", True, ("Form",), "")
    assert check(strict(tmp_path / "s.xlsx")).strict
    assert check(since_1904(tmp_path / "d.xlsx")).date_1904
    facts = check(plain(tmp_path / "p.xlsx"))
    assert (facts.kind, facts.macro_enabled, facts.strict, facts.date_1904) == ("xlsx", False, False, False)


def _form(path: Path, formula: str, name: str = "") -> Path:
    book = openpyxl.Workbook()
    book.active["A1"] = formula
    book.active["A2"] = "qc.D12.Ppk as text asks for nothing"
    if name:
        book.defined_names["mine"] = DefinedName("mine", attr_text=name)
    book.calculation.fullCalcOnLoad = False
    book.save(path)
    return path


@pytest.mark.parametrize(
    ("formula", "name", "asked"),
    [
        ("=qc.D12.Ppk", "", True),
        ("=IF(QC.D12.Ppk>1.33,1,0)", "", True),
        ("=mine", "qc.D12.Ppk*2", True),
        ("=B1*2", "", False),
        ("=abqc.D12", "", False),
    ],
)
def test_recalculated_on_opening_only_where_formulas_wait_for_it(
    formula: str, name: str, asked: bool, tmp_path: Path
) -> None:
    original = _form(tmp_path / "form.xlsx", formula, name)
    assert check(original).mentions_own_names is asked
    graft(original, write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    assert (b'fullCalcOnLoad="1"' in contents(tmp_path / "copy.xlsx")["xl/workbook.xml"]) is asked


def test_sheets_too_large_to_look_through_are_said_to_be_unread(tmp_path: Path) -> None:
    original = _form(tmp_path / "form.xlsx", "=qc.D12.Ppk")
    assert check(original, limits=Limits(formula_scan=10)).mentions_own_names is None
