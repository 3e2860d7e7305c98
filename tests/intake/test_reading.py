"""Files that cannot be served: each ends in an error of ours that says what is wrong, where, and what to do."""

from __future__ import annotations

import contextlib
import hashlib
import io
import random
import shutil
import struct
import subprocess
import zipfile
from pathlib import Path

import openpyxl
import pytest

from sheetqc import intake
from sheetqc.errors import (
    DamagedWorkbook,
    EncryptedWorkbook,
    MissingWorkbook,
    NotAWorkbook,
    NothingToAnswer,
    UnsafeWorkbook,
    WorkbookError,
)
from sheetqc.intake import container
from tests.intake.building import CHARACTERISTICS, VALUES, bore, column, table, write


def _good(path: Path) -> Path:
    pages = {"Spec": CHARACTERISTICS, "Run": {"A1": "qc:measurements", "A2": "D12", **column("A3", VALUES)}}
    return write(path, pages)


def _refused(path: Path, kind: type[WorkbookError]) -> WorkbookError:
    before = path.read_bytes() if path.is_file() else b""
    with pytest.raises(kind) as caught:
        intake.read(path)
    assert type(caught.value) is kind
    assert caught.value.file == path
    assert before == (path.read_bytes() if path.is_file() else b"")
    return caught.value


def test_missing_file(tmp_path: Path) -> None:
    assert "none.xlsx" in str(_refused(tmp_path / "none.xlsx", MissingWorkbook))


def test_folder(tmp_path: Path) -> None:
    _refused(tmp_path, NotAWorkbook)


def test_empty_file(tmp_path: Path) -> None:
    path = tmp_path / "empty.xlsx"
    path.write_bytes(b"")
    _refused(path, DamagedWorkbook)


@pytest.mark.parametrize("content", [b"just text", b"%PDF-1.7 ...", b"\x89PNG\r\n\x1a\n" + bytes(50), b"Id;LSL\n1;2\n"])
def test_another_kind_of_file(tmp_path: Path, content: bytes) -> None:
    path = tmp_path / "other.xlsx"
    path.write_bytes(content)
    assert "workbook" in str(_refused(path, NotAWorkbook))


def test_archive_without_a_workbook(tmp_path: Path) -> None:
    path = tmp_path / "photos.xlsx"
    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("photo.jpg", b"123")
    _refused(path, NotAWorkbook)


@pytest.mark.parametrize("share", [0.3, 0.7, 0.98])
def test_truncated_file(tmp_path: Path, share: float) -> None:
    whole = _good(tmp_path / "whole.xlsx").read_bytes()
    path = tmp_path / "part.xlsx"
    path.write_bytes(whole[: int(len(whole) * share)])
    assert "save it again" in str(_refused(path, DamagedWorkbook))


def _rewritten(source: Path, into: Path, part: str, content: bytes) -> Path:
    with zipfile.ZipFile(source) as old, zipfile.ZipFile(into, "w", zipfile.ZIP_DEFLATED) as new:
        for info in old.infolist():
            new.writestr(info.filename, content if info.filename == part else old.read(info))
    return into


@pytest.mark.parametrize("part", ["xl/workbook.xml", "xl/worksheets/sheet2.xml", "xl/sharedStrings.xml", "_rels/.rels"])
def test_parts_that_are_no_longer_whole(tmp_path: Path, part: str) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        content = archive.read(part)
    path = _rewritten(good, tmp_path / "bad.xlsx", part, content[: len(content) // 2])
    _refused(path, DamagedWorkbook)


def test_flipped_bytes_in_a_sheet(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        info = archive.getinfo("xl/worksheets/sheet2.xml")
    data = bytearray(good.read_bytes())
    start = info.header_offset + 30 + len(info.filename)
    for place in range(start + 20, start + 60):
        data[place] ^= 0xFF
    path = tmp_path / "flipped.xlsx"
    path.write_bytes(data)
    _refused(path, DamagedWorkbook)


@pytest.mark.parametrize("styles", [b"<styleSheet><fonts><broken", b"<s><cellXfs><xf fontId='x'/></cellXfs></s>", b""])
def test_styles_that_are_broken_do_not_matter(tmp_path: Path, styles: bytes) -> None:
    path = _rewritten(_good(tmp_path / "g.xlsx"), tmp_path / "b.xlsx", "xl/styles.xml", styles)
    assert intake.read(path).samples[0].values == tuple(VALUES)


def test_document_type_is_refused(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        text = archive.read("xl/worksheets/sheet2.xml").decode()
    bomb = text.replace("<worksheet", '<!DOCTYPE w [<!ENTITY a "12">]><worksheet', 1)
    _refused(_rewritten(good, tmp_path / "b.xlsx", "xl/worksheets/sheet2.xml", bomb.encode()), DamagedWorkbook)


def test_a_part_that_unpacks_out_of_all_proportion(tmp_path: Path) -> None:
    path = _rewritten(_good(tmp_path / "g.xlsx"), tmp_path / "b.xlsx", "xl/theme/theme1.xml", bytes(80 << 20))
    assert "times its size" in str(_refused(path, UnsafeWorkbook))


def test_too_much_to_unpack(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(container, "MOST_BYTES", 4096)
    _refused(_good(tmp_path / "g.xlsx"), UnsafeWorkbook)


def compound_file(*names: str) -> bytes:
    """A file of the old compound format with streams of these names."""
    header = bytearray(512)
    header[:8] = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
    struct.pack_into("<HH", header, 28, 0xFFFE, 9)
    struct.pack_into("<L", header, 48, 1)
    struct.pack_into("<109L", header, 76, 0, *[0xFFFFFFFF] * 108)
    fat = struct.pack("<128L", 0xFFFFFFFD, 0xFFFFFFFE, *[0xFFFFFFFF] * 126)
    directory = bytearray()
    for name in ("Root Entry", *names):
        entry = bytearray(128)
        text = name.encode("utf-16-le") + b"\0\0"
        entry[: len(text)] = text
        struct.pack_into("<H", entry, 64, len(text))
        directory += entry
    return bytes(header) + fat + bytes(directory).ljust(512, b"\0")


def test_password_is_told_apart_from_damage(tmp_path: Path) -> None:
    path = tmp_path / "secret.xlsx"
    path.write_bytes(compound_file("EncryptionInfo", "EncryptedPackage"))
    assert "password" in str(_refused(path, EncryptedWorkbook))


def test_document_of_another_program(tmp_path: Path) -> None:
    path = tmp_path / "letter.xls"
    path.write_bytes(compound_file("WordDocument"))
    _refused(path, NotAWorkbook)


def test_old_workbook_that_is_damaged(tmp_path: Path) -> None:
    path = tmp_path / "old.xls"
    path.write_bytes(compound_file("Workbook"))
    _refused(path, DamagedWorkbook)


def test_no_tag(tmp_path: Path) -> None:
    path = write(tmp_path / "plain.xlsx", {"A": {"A1": "Id", "A2": 5}})
    error = _refused(path, NothingToAnswer)
    assert "qc:characteristics" in str(error)


def test_no_tag_on_a_visible_sheet(tmp_path: Path) -> None:
    from tests.intake.building import Page

    path = write(tmp_path / "h.xlsx", {"A": {"A1": 5}, "B": Page({"A1": "qc:measurements"}, hidden=True)})
    assert "'B'" in str(_refused(path, NothingToAnswer))


def test_measurements_alone_say_what_to_add(tmp_path: Path) -> None:
    path = write(tmp_path / "m.xlsx", {"Run": {"A1": "qc:measurements", "A2": "D12", "A3": 12}})
    assert "qc:characteristics" in str(_refused(path, NothingToAnswer))


@pytest.mark.parametrize("below", [[], [[5, 6]], [["Colour", "Weather"], ["red", "wet"]], [["Id", "LSL"]]])
def test_characteristics_tag_without_anything_usable(tmp_path: Path, below: list[list[object]]) -> None:
    path = write(tmp_path / "c.xlsx", {"Spec": table("C4", [["qc:characteristics"], *below])})
    error = _refused(path, NothingToAnswer)
    assert str(error.cell) == "'Spec'!C4"
    assert "Id" in str(error)


def test_errors_are_one_line_without_a_traceback(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    from sheetqc.cli import main

    path = tmp_path / "secret.xlsx"
    path.write_bytes(compound_file("EncryptedPackage"))
    assert main(["read", str(path)]) == 1
    shown = capsys.readouterr()
    assert shown.out == ""
    assert len(shown.err.splitlines()) == 1


def test_source_is_the_file(tmp_path: Path) -> None:
    study = bore(tmp_path, VALUES)
    data = (tmp_path / "study.xlsx").read_bytes()
    assert study.source.name == "study.xlsx"
    assert study.source.bytes == len(data)
    assert study.source.sha256 == hashlib.sha256(data).hexdigest()


@pytest.mark.parametrize("ending", [".xlsx", ".xlsm", ".xltx", ".XLSX", ".dat"])
def test_what_a_file_is_does_not_hang_on_its_name(tmp_path: Path, ending: str) -> None:
    assert intake.read(_good(tmp_path / f"book{ending}")).samples[0].values == tuple(VALUES)


def test_wrong_dimension_is_not_believed(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        text = archive.read("xl/worksheets/sheet2.xml").decode()
    assert 'ref="A1:A10"' in text
    path = _rewritten(good, tmp_path / "d.xlsx", "xl/worksheets/sheet2.xml", text.replace("A1:A10", "A1").encode())
    assert intake.read(path).samples[0].values == tuple(VALUES)


def test_prefixed_elements_and_rows_without_numbers(tmp_path: Path) -> None:
    """Other writers use a namespace prefix, inline strings, and leave references out."""
    good = _good(tmp_path / "good.xlsx")
    rows = [["qc:characteristics"], ["Id", "USL"], ["D12", 13], [], ["qc:measurements"], ["D12"], [12], [12.5]]

    def cell(value: object) -> str:
        if isinstance(value, str):
            return f'<x:c t="inlineStr"><x:is><x:t>{value}</x:t></x:is></x:c>'
        return f"<x:c><x:v>{value}</x:v></x:c>"

    body = "".join(f"<x:row>{''.join(map(cell, row))}</x:row>" for row in rows)
    sheet = (
        '<?xml version="1.0"?><x:worksheet xmlns:x="http://schemas.openxmlformats.org/spreadsheetml/2006/main">'
        f"<x:sheetData>{body}</x:sheetData></x:worksheet>"
    )
    path = _rewritten(good, tmp_path / "p.xlsx", "xl/worksheets/sheet2.xml", sheet.encode())
    path = _rewritten(path, tmp_path / "q.xlsx", "xl/worksheets/sheet1.xml", sheet.replace("qc:", "").encode())
    study = intake.read(path)
    assert study.samples[0].values == (12, 12.5)
    assert str(study.samples[0].cells[0]) == "'Run'!A7"


def test_strict_dialect(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    into = tmp_path / "strict.xlsx"
    swaps = (
        (
            b"http://schemas.openxmlformats.org/spreadsheetml/2006/main",
            b"http://purl.oclc.org/ooxml/spreadsheetml/main",
        ),
        (
            b"http://schemas.openxmlformats.org/officeDocument/2006/relationships",
            b"http://purl.oclc.org/ooxml/officeDocument/relationships",
        ),
    )
    with zipfile.ZipFile(good) as old, zipfile.ZipFile(into, "w") as new:
        for info in old.infolist():
            data = old.read(info)
            for transitional, strict in swaps:
                data = data.replace(transitional, strict)
            new.writestr(info.filename, data)
    assert intake.read(into).samples[0].values == tuple(VALUES)


def test_reading_aids_and_rich_text_in_shared_strings(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        text = archive.read("xl/sharedStrings.xml").decode()
    plain = "<si><t>qc:measurements</t></si>"
    assert plain in text
    rich = "<si><r><t>qc:mea</t></r><r><rPr><b/></rPr><t>surements</t></r><rPh sb='0' eb='1'><t>yomi</t></rPh></si>"
    path = _rewritten(good, tmp_path / "r.xlsx", "xl/sharedStrings.xml", text.replace(plain, rich).encode())
    assert intake.read(path).samples[0].values == tuple(VALUES)


def test_workbooks_of_openpyxl(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "It's"
    for row in (["qc:characteristics"], ["Id", "LSL"], ["D12", 11], [], ["qc:measurements"], ["D12"], [12.25]):
        sheet.append(row)
    path = tmp_path / "o.xlsx"
    book.save(path)
    study = intake.read(path)
    assert study.samples[0].values == (12.25,)
    assert str(study.samples[0].cells[0]) == "'It''s'!A7"


def test_a_million_formatted_empty_rows_cost_little(tmp_path: Path) -> None:
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        text = archive.read("xl/worksheets/sheet2.xml").decode()
    buffer = io.StringIO()
    buffer.write(text.partition("</sheetData>")[0])
    for row in range(20, 300_000):
        buffer.write(f'<row r="{row}" s="1" customFormat="1"><c r="A{row}" s="1"/><c r="B{row}" s="1"/></row>')
    buffer.write('<row r="300001"><c r="A300001"><v>12.5</v></c></row>')
    buffer.write("</sheetData>" + text.partition("</sheetData>")[2])
    path = _rewritten(good, tmp_path / "m.xlsx", "xl/worksheets/sheet2.xml", buffer.getvalue().encode())
    sample = intake.read(path).samples[0]
    assert sample.values == (*VALUES, 12.5)
    assert str(sample.cells[-1]) == "'Run'!A300001"


def _converted(workbook: Path, ending: str, into: Path) -> Path:
    office = shutil.which("soffice")
    if office is None:
        pytest.skip("LibreOffice is not there")
    profile = f"-env:UserInstallation={(into / 'profile').as_uri()}"
    command = [office, profile, "--headless", "--convert-to", ending, "--outdir", str(into), str(workbook)]
    subprocess.run(command, check=True, capture_output=True, timeout=180)
    return into / f"{workbook.stem}.{ending}"


@pytest.mark.office
@pytest.mark.parametrize("ending", ["xls", "ods"])
def test_workbooks_of_other_makes_are_read_by_their_values(tmp_path: Path, ending: str) -> None:
    study = intake.read(_converted(_good(tmp_path / "good.xlsx"), ending, tmp_path))
    assert study.samples[0].values == tuple(VALUES)
    assert str(study.samples[0].cells[0]) == "'Run'!A3"
    assert [f.code for f in study.findings] == ["values-only"]


def test_characteristics_alone_say_that_values_are_missing(tmp_path: Path) -> None:
    error = _refused(write(tmp_path / "c.xlsx", {"Spec": CHARACTERISTICS}), NothingToAnswer)
    assert "qc:measurements" in str(error)
    assert {f.code for f in error.findings} == {"no-values"}


@pytest.mark.parametrize("seed", range(80))
def test_whatever_happens_to_a_file_the_error_is_ours(tmp_path: Path, seed: int) -> None:
    chance = random.Random(seed)
    good = _good(tmp_path / "good.xlsx")
    with zipfile.ZipFile(good) as archive:
        name = chance.choice([n for n in archive.namelist() if not n.startswith("docProps")])
        data = bytearray(archive.read(name))
    for _ in range(chance.randint(1, 4)):
        place = chance.randrange(len(data))
        data[place : place + chance.choice([0, 1, 1, 9])] = chance.choice(
            [b"", b"<", b"-1", b"\xff", b"99999999999", b"x"]
        )
    path = _rewritten(good, tmp_path / "bad.xlsx", name, bytes(data))
    with contextlib.suppress(WorkbookError):
        assert intake.understood_text(intake.read(path))
