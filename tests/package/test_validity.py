"""Copies judged by other programs: a validator of the format, and an office program."""

from __future__ import annotations

import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from sheetqc.package import graft, sheet_names
from tests.package.additions import write_additions
from tests.package.foreign import FOREIGN, crowded, furnished, plain, strict
from tests.package.packages import contents, packed

OFFICE = shutil.which("soffice")


def _complaints(path: Path) -> set[tuple[str, str]]:
    """What the validator openxml-audit says, as (part, text)."""
    audit = pytest.importorskip("openxml_audit", reason="the validator openxml-audit is not installed")
    result = audit.OpenXmlValidator(max_errors=1000).validate(str(path))
    return {(str(error.part_uri or ""), str(error.description)) for error in result.errors}


@pytest.mark.parametrize("maker", FOREIGN, ids=lambda maker: maker.__name__)
def test_no_new_complaint_of_a_validator(maker: Callable[[Path], Path], tmp_path: Path) -> None:
    original = maker(tmp_path / "original.xlsx")
    copy = tmp_path / f"copy{original.suffix}"
    graft(original, write_additions(tmp_path / "additions.xlsx"), copy)
    assert _complaints(copy) <= _complaints(original)


def test_the_validator_does_look_at_the_new_parts(tmp_path: Path) -> None:
    original = plain(tmp_path / "original.xlsx")
    graft(original, write_additions(tmp_path / "additions.xlsx"), tmp_path / "copy.xlsx")
    members = contents(tmp_path / "copy.xlsx")
    for name in ("xl/added/worksheets/sheet1.xml", "xl/added/charts/chart1.xml"):
        members[name] = (
            members[name].replace(b"<sheetData>", b"<bogus/><sheetData>").replace(b"<c:layout/>", b"<c:bogus/>")
        )
    new = _complaints(packed(tmp_path / "broken.xlsx", members)) - _complaints(original)
    assert {part for part, _ in new} == {"/xl/added/worksheets/sheet1.xml", "/xl/added/charts/chart1.xml"}


def _saved_by_office(path: Path, folder: Path) -> Path:
    profile = (folder / "profile").as_uri()
    kind = "xlsx:Calc MS Excel 2007 XML"
    command = [str(OFFICE), f"-env:UserInstallation={profile}", "--headless", "--convert-to", kind, "--outdir"]
    subprocess.run([*command, str(folder), str(path)], check=True, capture_output=True, timeout=120)
    return folder / f"{path.stem}.xlsx"


@pytest.mark.office
@pytest.mark.skipif(OFFICE is None, reason="LibreOffice is not installed")
@pytest.mark.parametrize("maker", [furnished, crowded, strict], ids=lambda maker: maker.__name__)
def test_an_office_program_opens_the_copy_and_keeps_the_marks(maker: Callable[[Path], Path], tmp_path: Path) -> None:
    original = maker(tmp_path / "original.xlsx")
    additions = write_additions(tmp_path / "additions.xlsx")
    copy = tmp_path / "copy.xlsx"
    graft(original, additions, copy)
    saved = _saved_by_office(copy, tmp_path / "saved")
    assert sheet_names(saved)[-2:] == ("Answer", "Answer D12")
    assert sheet_names(saved, earlier_answer=False) == sheet_names(saved)[:-2]
    again = tmp_path / "again.xlsx"
    graft(saved, additions, again)
    assert sheet_names(again) == sheet_names(saved)
