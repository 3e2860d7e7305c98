"""A small project of macros, as a macro-enabled workbook carries it, by its published description [MS-OVBA].

It holds the source of its modules and no compiled code, which the description allows: a spreadsheet program compiles
the source when it opens the workbook. It was written by this script and not by a spreadsheet program; its structure is
tested here and by LibreOffice, which shows the macros. The macro itself only writes the date into a cell.
"""

from __future__ import annotations

import struct

from tests.examples.compound_file import Entry, compound_file

PROJECT_ID = "{2E0A6F2C-41B7-4D0E-9C55-5B0A7C0D1E11}"
INTAKE = 'Attribute VB_Name = "Intake"\r\nSub StampDate()\r\n    ActiveCell.Value = Date\r\nEnd Sub\r\n'
_WORKBOOK, _SHEET = "0{00020819-0000-0000-C000-000000000046}", "0{00020820-0000-0000-C000-000000000046}"
_OLE = "*\\G{00020430-0000-0000-C000-000000000046}#2.0#0#C:\\Windows\\System32\\stdole2.tlb#OLE Automation"


def vba_project(sheets: list[str]) -> bytes:
    """The part vbaProject.bin: a module for the workbook, one for each sheet (by code name), and one macro."""
    documents = ["ThisWorkbook", *sheets]
    sources = {"ThisWorkbook": _document("ThisWorkbook", _WORKBOOK)}
    sources |= {name: _document(name, _SHEET) for name in sheets}
    sources["Intake"] = INTAKE
    modules = [Entry(name, compressed(text.encode("cp1252"))) for name, text in sources.items()]
    vba = Entry(
        "VBA",
        below=[
            Entry("dir", compressed(_directory(documents, ["Intake"]))),
            Entry("_VBA_PROJECT", struct.pack("<HHBH", 0x61CC, 0xFFFF, 0, 0)),
            *modules,
        ],
    )
    return compound_file(
        [
            vba,
            Entry("PROJECT", _project(documents, ["Intake"]).encode("cp1252")),
            Entry("PROJECTwm", b"".join(_both(name) for name in sources) + b"\0\0"),
        ]
    )


def _both(name: str) -> bytes:
    return name.encode("cp1252") + b"\0" + name.encode("utf-16-le") + b"\0\0"


def _document(name: str, base: str) -> str:
    flags = {"GlobalNameSpace": False, "Creatable": False, "PredeclaredId": True, "Exposed": True}
    flags |= {"TemplateDerived": False, "Customizable": True}
    lines = [f'Attribute VB_Name = "{name}"', f'Attribute VB_Base = "{base}"']
    lines += [f"Attribute VB_{flag} = {value}" for flag, value in flags.items()]
    return "\r\n".join(lines) + "\r\n"


def compressed(content: bytes) -> bytes:
    """A compressed container of one chunk of literal bytes ([MS-OVBA] 2.4.1)."""
    if len(content) > 3600:
        raise ValueError("more than one chunk is not written here")
    body = b"".join(b"\0" + content[at : at + 8] for at in range(0, len(content), 8))
    return b"\x01" + struct.pack("<H", (len(body) + 2 - 3) | 0xB000) + body


def _record(kind: int, content: bytes = b"") -> bytes:
    return struct.pack("<HL", kind, len(content)) + content


def _directory(documents: list[str], procedural: list[str]) -> bytes:
    """The stream dir ([MS-OVBA] 2.3.4.2)."""
    information = [
        _record(0x0001, struct.pack("<L", 1)),
        _record(0x0002, struct.pack("<L", 0x409)),
        _record(0x0014, struct.pack("<L", 0x409)),
        _record(0x0003, struct.pack("<H", 1252)),
        _record(0x0004, b"VBAProject"),
        _record(0x0005) + _record(0x0040),
        _record(0x0006) + _record(0x003D),
        _record(0x0007, struct.pack("<L", 0)),
        _record(0x0008, struct.pack("<L", 0)),
        struct.pack("<HLLH", 0x0009, 4, 1, 1),
        _record(0x000C) + _record(0x003C),
    ]
    library = struct.pack("<L", len(_OLE)) + _OLE.encode("cp1252") + bytes(6)
    references = [_record(0x0016, b"stdole") + _record(0x003E, "stdole".encode("utf-16-le")), _record(0x000D, library)]
    count = len(documents) + len(procedural)
    modules = [_record(0x000F, struct.pack("<H", count)) + _record(0x0013, struct.pack("<H", 0xFFFF))]
    modules += [_module(name, 0x0022) for name in documents] + [_module(name, 0x0021) for name in procedural]
    return b"".join([*information, *references, *modules]) + _record(0x0010)


def _module(name: str, kind: int) -> bytes:
    narrow, wide = name.encode("cp1252"), name.encode("utf-16-le")
    return b"".join(
        [
            _record(0x0019, narrow),
            _record(0x0047, wide),
            _record(0x001A, narrow) + _record(0x0032, wide),
            _record(0x001C) + _record(0x0048),
            _record(0x0031, struct.pack("<L", 0)),
            _record(0x001E, struct.pack("<L", 0)),
            _record(0x002C, struct.pack("<H", 0xFFFF)),
            _record(kind),
            _record(0x002B),
        ]
    )


def _project(documents: list[str], procedural: list[str]) -> str:
    """The stream PROJECT ([MS-OVBA] 2.3.1): no protection, no password, visible."""
    lines = [f'ID="{PROJECT_ID}"']
    lines += [f"Document={name}/&H00000000" for name in documents]
    lines += [f"Module={name}" for name in procedural]
    lines += ['Name="VBAProject"', 'HelpContextID="0"', 'VersionCompatible32="393222000"']
    lines += [
        f'CMG="{veiled(bytes(4), 0x3A)}"',
        f'DPB="{veiled(bytes(1), 0x5C)}"',
        f'GC="{veiled(bytes([255]), 0x71)}"',
    ]
    lines += ["", "[Host Extender Info]", "&H00000001={3832D640-CF90-11CF-8E43-00A0C911005A};VBE;&H00000000", ""]
    lines += ["[Workspace]", *[f"{name}=0, 0, 0, 0, C" for name in [*documents, *procedural]], ""]
    return "\r\n".join(lines)


def veiled(content: bytes, seed: int) -> str:
    """Bytes in the veiled form of the stream PROJECT ([MS-OVBA] 2.4.3.2), as hexadecimal digits."""
    key = sum(PROJECT_ID.encode("cp1252")) & 0xFF
    out = [seed, seed ^ 2, seed ^ key]
    plain = key
    for byte in bytes((seed & 6) // 2) + struct.pack("<L", len(content)) + content:
        out.append(byte ^ ((out[-2] + plain) & 0xFF))
        plain = byte
    return bytes(out).hex().upper()
