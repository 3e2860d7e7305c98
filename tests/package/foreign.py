"""Workbooks as other people's programs write them, one maker each; FOREIGN is the register the tests run over."""

from __future__ import annotations

import datetime
import io
import struct
import zlib
from collections.abc import Callable
from pathlib import Path

import openpyxl
import xlsxwriter
from openpyxl.chart import BarChart, Reference
from openpyxl.comments import Comment
from openpyxl.formatting.rule import CellIsRule, ColorScaleRule
from openpyxl.styles import Font, PatternFill
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.table import Table

from tests.package.packages import contents, packed

MACROS = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(range(256)) * 40  # a stand-in; it is only ever copied
STRICT = {
    b"http://schemas.openxmlformats.org/spreadsheetml/2006/main": b"http://purl.oclc.org/ooxml/spreadsheetml/main",
    b"http://schemas.openxmlformats.org/officeDocument/2006/relationships": b"http://purl.oclc.org/ooxml/officeDocument/relationships",
    b"http://schemas.openxmlformats.org/drawingml/2006/": b"http://purl.oclc.org/ooxml/drawingml/",
}


def picture(width: int = 8, height: int = 8) -> io.BytesIO:
    """A small picture (PNG), all of one colour."""

    def chunk(kind: bytes, data: bytes) -> bytes:
        return struct.pack(">L", len(data)) + kind + data + struct.pack(">L", zlib.crc32(kind + data))

    rows = b"".join(b"\0" + bytes((40, 90, 160)) * width for _ in range(height))
    header = struct.pack(">2L5B", width, height, 8, 2, 0, 0, 0)
    data = chunk(b"IHDR", header) + chunk(b"IDAT", zlib.compress(rows)) + chunk(b"IEND", b"")
    return io.BytesIO(b"\x89PNG\r\n\x1a\n" + data)


def plain(path: Path) -> Path:
    """Numbers, text and a formula (openpyxl)."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Runout"
    for row in range(1, 31):
        sheet.append([row, 0.01 * row, f"part {row}", f"=B{row}*2"])
    book.save(path)
    return path


def furnished(path: Path) -> Path:
    """A chart, a table, validations, conditional formats, comments, names and an autofilter (openpyxl)."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "O'Hara & Söhne"
    for row in [("Id", "Value"), *((f"P{i}", i * 1.5) for i in range(1, 12))]:
        sheet.append(row)
    chart = BarChart()
    chart.add_data(Reference(sheet, min_col=2, min_row=1, max_row=12), titles_from_data=True)
    sheet.add_chart(chart, "E2")
    sheet.add_table(Table(displayName="Findings", ref="A1:B12"))
    validation = DataValidation(type="list", formula1='"yes,no"')
    sheet.add_data_validation(validation)
    validation.add("D1")
    sheet.conditional_formatting.add("B2:B12", CellIsRule("greaterThan", ["9"], font=Font(color="FF0000")))
    sheet.conditional_formatting.add(
        "B2:B12", ColorScaleRule("min", None, "FFFFFF", None, None, None, "max", None, "00FF00")
    )
    sheet["A2"].comment = Comment("Please look here", "Inspector")
    sheet["A1"].fill = PatternFill("solid", fgColor="FFDDEE")
    sheet["A1"].number_format = '0.000" mm"'
    sheet.print_title_rows = "1:1"
    sheet.print_area = "A1:B12"
    book.defined_names["limits"] = DefinedName("limits", attr_text="'O''Hara & Söhne'!$B$2:$B$3")
    hidden = book.create_sheet("Kept back")
    hidden.sheet_state = "veryHidden"
    hidden["A1"] = "=limits"
    book.create_chartsheet("Picture only").add_chart(BarChart())
    book.active = 1
    book.save(path)
    return path


def crowded(path: Path) -> Path:
    """Pictures, charts, a chart sheet, sparklines, header pictures, links and a protected sheet (XlsxWriter)."""
    book = xlsxwriter.Workbook(str(path))
    sheet = book.add_worksheet("Logo & Daten")
    sheet.insert_image("D2", "logo.png", {"image_data": picture()})
    sheet.set_header("&L&G", {"image_left": "logo.png", "image_data_left": picture(9, 4)})
    sheet.write_column("A1", [1, 4, 2, 5])
    sheet.add_sparkline("B1", {"range": "'Logo & Daten'!A1:A4"})
    sheet.conditional_format("A1:A4", {"type": "data_bar", "data_bar_2010": True})
    sheet.write_url("C1", "external:other%20book.xlsx#Sheet1!A1", None, "elsewhere")
    sheet.insert_textbox("F2", "See there", {"textlink": "='Logo & Daten'!$A$1"})
    sheet.insert_checkbox("C3", True)
    sheet.protect("secret")
    chart = book.add_chart({"type": "column"})
    chart.add_series({"values": "='Logo & Daten'!$A$1:$A$4", "trendline": {"type": "linear"}})
    sheet.insert_chart("D9", chart)
    whole = book.add_chartsheet("Graph")
    other = book.add_chart({"type": "pie"})
    other.add_series({"values": "='Logo & Daten'!$A$1:$A$4"})
    whole.set_chart(other)
    spill = book.add_worksheet("Spill")
    spill.write_dynamic_array_formula("A1:A4", "=SORT('Logo & Daten'!A1:A4)", None, 1)
    spill.embed_image("C1", "cell.png", {"image_data": picture(5, 5)})
    spill.activate()
    book.define_name("Logo", "='Logo & Daten'!$A$1")
    book.close()
    return path


def macros(path: Path) -> Path:
    """Macros, which are a stand-in here and are copied as they are."""
    path = path.with_suffix(".xlsm")
    stream = path.with_suffix(".bin")
    stream.write_bytes(MACROS)
    book = xlsxwriter.Workbook(str(path))
    book.add_worksheet("Form").insert_button("B2", {"macro": "say_hello", "caption": "Go"})
    book.add_vba_project(str(stream))
    book.close()
    stream.unlink()
    return path


def since_1904(path: Path) -> Path:
    """Days counted from 1904."""
    book = xlsxwriter.Workbook(str(path), {"date_1904": True})
    book.add_worksheet().write_datetime("A1", datetime.date(2026, 3, 1), book.add_format({"num_format": "yyyy-mm-dd"}))
    book.close()
    return path


def _retold(path: Path, change: Callable[[dict[str, bytes]], dict[str, bytes]], base: Callable[[Path], Path]) -> Path:
    base(path)
    return packed(path, change(contents(path)))


def strict(path: Path) -> Path:
    """The strict dialect."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        told = {}
        for name, content in members.items():
            for old, new in STRICT.items():
                content = content.replace(old, new) if name.endswith((".xml", ".rels")) else content
            told[name] = content
        return told

    return _retold(path, change, plain)


def elsewhere(path: Path) -> Path:
    """The workbook part at another place, absolute targets, back-slashes, escapes and other case."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        moved = {
            "xl/workbook.xml": "Some Folder/Book One.xml",
            "xl/_rels/workbook.xml.rels": "Some Folder/_rels/Book One.xml.rels",
            "xl/styles.xml": "STYLES.XML",
            "xl/worksheets/sheet1.xml": "Some Folder/sheets/first sheet.xml",
        }
        told = {moved.get(name, name): content for name, content in members.items()}
        types = told["[Content_Types].xml"]
        types = types.replace(b"/xl/workbook.xml", b"/Some%20Folder/Book%20One.xml")
        types = types.replace(b"/xl/styles.xml", b"/styles.xml")
        told["[Content_Types].xml"] = types.replace(
            b"/xl/worksheets/sheet1.xml", b"/some folder/Sheets/First%20Sheet.xml"
        )
        told["_rels/.rels"] = told["_rels/.rels"].replace(b'"xl/workbook.xml"', b'"/Some%20Folder/Book One.xml"')
        links = told["Some Folder/_rels/Book One.xml.rels"]
        links = links.replace(b'"/xl/worksheets/sheet1.xml"', b'"sheets\\first%20sheet.xml"')
        links = links.replace(b'"/xl/theme/theme1.xml"', b'"../xl/./theme/theme1.xml"')
        told["Some Folder/_rels/Book One.xml.rels"] = links.replace(b'"styles.xml"', b'"../Styles.xml"')
        return told

    return _retold(path, change, plain)


def unstyled(path: Path) -> Path:
    """No styles part at all."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        del members["xl/styles.xml"]
        links = members["xl/_rels/workbook.xml.rels"]
        start = links.rindex(b"<Relationship ", 0, links.index(b"styles.xml"))
        end = links.index(b"/>", start) + 2
        members["xl/_rels/workbook.xml.rels"] = links[:start] + links[end:]
        types = members["[Content_Types].xml"]
        start = types.rindex(b"<Override ", 0, types.index(b"/xl/styles.xml"))
        members["[Content_Types].xml"] = types[:start] + types[types.index(b"/>", start) + 2 :]
        return members

    return _retold(path, change, plain)


def bare_styles(path: Path) -> Path:
    """A styles part without fonts, fills, borders and formats."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        members["xl/styles.xml"] = (
            b'<styleSheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">'
            b'<numFmts count="7"><numFmt numFmtId="10" formatCode="0.0000%"/></numFmts></styleSheet>'
        )
        return members

    return _retold(path, change, plain)


def miscounted(path: Path) -> Path:
    """Counts that are wrong, and a part of extensions in the styles."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        styles = members["xl/styles.xml"].replace(b'<cellXfs count="', b'<cellXfs count="9')
        styles = styles.replace(b"<fonts count=", b'<fonts xmlns:u="urn:u" u:known="1" count=')
        extension = b'<extLst><ext uri="{0}"><u:x xmlns:u="urn:u"/></ext></extLst></styleSheet>'
        members["xl/styles.xml"] = styles.replace(b"</styleSheet>", extension)
        return members

    return _retold(path, change, furnished)


def wrapped(path: Path) -> Path:
    """A prefix on every element, an ignorable namespace, alternate content and a comment in the workbook part."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        members["xl/workbook.xml"] = (
            b'<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\r\n<x:workbook '
            b'xmlns:x="http://schemas.openxmlformats.org/spreadsheetml/2006/main" '
            b'xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships" '
            b'xmlns:mc="http://schemas.openxmlformats.org/markup-compatibility/2006" '
            b'xmlns:un="urn:unused" mc:Ignorable="un"><!-- kept --><x:workbookPr un:mark="1"/>'
            b'<mc:AlternateContent><mc:Choice Requires="un"><un:path url="c:\\"/></mc:Choice></mc:AlternateContent>'
            b'<x:bookViews><x:workbookView activeTab="0"/></x:bookViews>'
            b'<x:sheets><x:sheet name="Runout" sheetId="65534" r:id="rId1"/></x:sheets>'
            b'<x:calcPr calcId="191029"/><x:extLst><x:ext uri="{1}"><un:y/></x:ext></x:extLst></x:workbook>'
        )
        return members

    return _retold(path, change, plain)


def utf16(path: Path) -> Path:
    """The workbook part in UTF-16, its relationships with a byte-order mark."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        text = members["xl/workbook.xml"].decode("utf-8")
        members["xl/workbook.xml"] = ('<?xml version="1.0" encoding="UTF-16"?>' + text).encode("utf-16")
        members["xl/_rels/workbook.xml.rels"] = b"\xef\xbb\xbf" + members["xl/_rels/workbook.xml.rels"]
        return members

    return _retold(path, change, plain)


def template(path: Path) -> Path:
    """A template."""
    book = openpyxl.Workbook()
    book.template = True
    book.save(path.with_suffix(".xltx"))
    return path.with_suffix(".xltx")


def extras(path: Path) -> Path:
    """Parts that nothing here understands: custom XML, printer settings, connections, queries, active content."""

    def change(members: dict[str, bytes]) -> dict[str, bytes]:
        types = members["[Content_Types].xml"]
        members["[Content_Types].xml"] = types.replace(
            b"</Types>", b'<Default Extension="bin" ContentType="application/x-anything"/></Types>'
        )
        kind = b"http://schemas.openxmlformats.org/officeDocument/2006/relationships/"
        more = b"".join(
            b'<Relationship Id="RID%d" Type="%s%s" Target="%s"/>' % (number, kind, name, target)
            for number, (name, target) in enumerate(
                [
                    (b"connections", b"connections.xml"),
                    (b"customXml", b"../customXml/item1.xml"),
                    (b"ctrlProp", b"gone.xml"),
                ],
                start=90,
            )
        )
        links = members["xl/_rels/workbook.xml.rels"]
        members["xl/_rels/workbook.xml.rels"] = links.replace(b"</Relationships>", more + b"</Relationships>")
        members["xl/connections.xml"] = b"<not even xml"
        members["customXml/item1.xml"] = b"<a/>"
        members["xl/printerSettings/printerSettings1.bin"] = bytes(range(256))
        members["xl/activeX/activeX1.bin"] = b"\xd0\xcf\x11\xe0" * 9
        return members

    return _retold(path, change, plain)


FOREIGN: tuple[Callable[[Path], Path], ...] = (
    plain,
    furnished,
    crowded,
    macros,
    since_1904,
    strict,
    elsewhere,
    unstyled,
    bare_styles,
    miscounted,
    wrapped,
    utf16,
    template,
    extras,
)
