"""Writes the example workbooks: `python -m tests.examples.make [FOLDER]`.

Every workbook is written from a fixed seed. The register EXAMPLES names each with its writer.
"""

from __future__ import annotations

import io
import re
import sys
import zipfile
from collections.abc import Callable
from pathlib import Path

import openpyxl
from openpyxl.drawing.image import Image
from openpyxl.styles import Font

from tests.examples import form, own_style, picture, scenario
from tests.examples.macros import vba_project
from tests.examples.study import Asked

FOLDER = Path(__file__).parents[2] / "example_workbooks"


def on_the_form(study: Callable[[], Asked]) -> Callable[[Path], None]:
    """A writer of a study on the pump works' form."""
    return lambda path: form.write(study(), path)


def on_one_sheet(path: Path) -> None:
    """The sleeve's record, typed into one sheet without any form (another library's kind of file)."""
    asked = scenario.shaft_sleeve()
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Coating"
    sheet.append([asked.title])
    sheet.append([])
    sheet.append(["qc:study"])
    for label, entry in asked.header.items():
        sheet.append([label, entry])
    sheet.append([])
    sheet.append(["qc:characteristics"])
    sheet.append(asked.headings)
    for characteristic in asked.characteristics:
        sheet.append([characteristic.get(heading) for heading in asked.headings])
    sheet.append([])
    sheet.append(["QC:Measurements"])
    sheet.append(list(asked.columns))
    for entries in asked.rows():
        sheet.append(list(entries))
    sheet["A1"].font = Font(bold=True, size=14)
    sheet.column_dimensions["A"].width = 18
    book.save(path)
    settle(path)


def with_macros(path: Path) -> None:
    """The wear ring's record in a workbook with macros; what the macros are is said in `tests.examples.macros`."""
    asked = scenario.wear_ring()
    with form.opened(path) as book:
        form.fill(book, asked)
        book.add_vba_project(io.BytesIO(vba_project(["Sheet1", "Sheet2"])), True)
        book.set_vba_name("ThisWorkbook")
        for place, sheet in enumerate(book.worksheets(), start=1):
            sheet.set_vba_name(f"Sheet{place}")


def with_cover(path: Path) -> None:
    """The hub's record with a cover sheet that waits for the results: its cells refer to names not yet defined."""
    asked = scenario.coupling_hub()
    with form.opened(path) as book:
        cover = book.add_worksheet("Release")
        look = form.Look(book)
        cover.set_column(0, 0, 34)
        cover.set_column(1, 3, 16)
        cover.write_string(0, 0, "Release of the lot", look.title)
        for column, heading in enumerate(("Characteristic", "Ppk", "At least", "Verdict")):
            cover.write_string(2, column, heading, look.heading)
        for row, characteristic in enumerate(asked.characteristics, start=3):
            cover.write_string(row, 0, str(characteristic["Name"]), look.label)
            for column, quantity in enumerate(("Ppk", "Ppk_lower", "Verdict"), start=1):
                formula = f"=qc.{characteristic['Id']}.{quantity}"
                cover.write_formula(row, column, formula, look.entry, "#NAME?")
        form.fill(book, asked)


def summary_only(path: Path) -> None:
    """A gasket's record with figures and a picture, but no tag and no measured value: it has to be returned."""
    book = openpyxl.Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Summary"
    for row in (
        ["Capability of the flange gasket, thickness"],
        [],
        ["Part number", "QP-7003-A"],
        ["Supplier", "Merrowick Mouldings"],
        ["LSL", 1.9],
        ["USL", 2.1],
        ["Mean", 2.004],
        ["Standard deviation", 0.019],
        ["Number of parts", 50],
        ["Cpk", 1.68],
    ):
        sheet.append(row)
    sheet["A1"].font = Font(bold=True, size=14)
    sheet.column_dimensions["A"].width = 24
    sheet.add_image(Image(picture.bars([1, 3, 7, 11, 12, 9, 5, 2])), "D3")
    book.save(path)
    settle(path)


def settle(path: Path) -> None:
    """Fixes the moments that openpyxl took from the clock: in the core properties and in the archive."""
    with zipfile.ZipFile(path) as archive:
        members = [(info.filename, archive.read(info)) for info in archive.infolist()]
    moment = f"{form.CREATED.isoformat()}Z".encode()
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in members:
            if name == "docProps/core.xml":
                content = re.sub(rb"(?<=>)[0-9-]{10}T[0-9:]{8}Z(?=<)", moment, content)
            archive.writestr(zipfile.ZipInfo(name), content, zipfile.ZIP_DEFLATED)


EXAMPLES: tuple[tuple[str, Callable[[Path], None]], ...] = (
    ("shaft.xlsx", on_the_form(scenario.shaft)),
    ("seal-ring.xlsx", on_the_form(scenario.seal_ring)),
    ("pump-housing.xlsx", on_the_form(scenario.pump_housing)),
    ("shaft-seal-leak.xlsx", on_the_form(scenario.shaft_seal_leak)),
    ("burst-pressure.xlsx", on_the_form(scenario.burst_pressure)),
    ("impeller-two-cavities.xlsx", on_the_form(scenario.impeller)),
    ("shaft-sleeve-claim.xlsx", on_one_sheet),
    ("bearing-bush-own-style.xlsx", own_style.write),
    ("wear-ring-macros.xlsm", with_macros),
    ("cover-plate-first-samples.xlsx", on_the_form(scenario.cover_plate)),
    ("coupling-hub-release.xlsx", with_cover),
    ("gasket-summary-only.xlsx", summary_only),
)
"""The register of example workbooks."""


def make(folder: Path) -> list[Path]:
    """Writes every example workbook into a folder."""
    folder.mkdir(parents=True, exist_ok=True)
    paths: list[Path] = []
    for name, write in EXAMPLES:
        write(folder / name)
        paths.append(folder / name)
    return paths


def main(arguments: list[str]) -> int:
    """Writes them where the argument says, into example_workbooks/ without one."""
    for path in make(Path(arguments[0]) if arguments else FOLDER):
        print(path)
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
