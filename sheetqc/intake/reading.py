"""A workbook read into a study."""

from __future__ import annotations

import hashlib
import struct
import zipfile
import zlib
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path

from lxml import etree

from sheetqc.errors import DamagedWorkbook, NothingToAnswer, WorkbookError
from sheetqc.intake.blocks import Block, blocks_of, tags_of
from sheetqc.intake.book import Book, open_book
from sheetqc.intake.calculation import Calculation
from sheetqc.intake.characteristics import characteristics_of, require
from sheetqc.intake.counts import counts_of
from sheetqc.intake.doubts import Doubts, listed
from sheetqc.intake.gauge import gauge_studies_of
from sheetqc.intake.header import header_of
from sheetqc.intake.measurements import pieces_of
from sheetqc.intake.places import placed_in, placed_pieces, with_placed
from sheetqc.intake.references import References
from sheetqc.intake.samples import samples_of
from sheetqc.study import Source, Study
from sheetqc.vocabulary import TAGS


def read(path: Path) -> Study:
    """The study a workbook holds; the workbook is only read.

    Raises
    ------
    MissingWorkbook, NotAWorkbook, EncryptedWorkbook, DamagedWorkbook, UnsafeWorkbook : a file that cannot be read
    NothingToAnswer : no tag, or nothing usable below the tags
    """
    doubts = Doubts()
    with _foreign_errors(path), open_book(path) as book:
        source = source_of(path)
        blocks = _blocks(book, doubts)
        if book.values_only:
            doubts.add(
                "values-only",
                "caution",
                f"{path.name} is no workbook of the .xlsx kind and was read by its stored values alone: hidden rows, "
                "error values, crossed-out cells and formulas could not be seen. Save it as .xlsx to have them seen.",
            )
        try:
            return _study(source, blocks, References(book), doubts)
        except NothingToAnswer as error:
            error.file = path
            error.findings = (*doubts.study, *(finding for _, finding in doubts.of_characteristics))
            raise


def source_of(path: Path) -> Source:
    """Which file it is: name, hash and size."""
    digest = hashlib.sha256()
    size = 0
    with path.open("rb") as file:
        while block := file.read(1 << 20):
            digest.update(block)
            size += len(block)
    return Source(name=path.name, sha256=digest.hexdigest(), bytes=size)


@contextmanager
def _foreign_errors(path: Path) -> Iterator[None]:
    """The one border where what other libraries raise about a file becomes an error of ours."""
    try:
        yield
    except WorkbookError as error:
        if error.file is None:
            error.file = path
        raise
    except (
        zipfile.BadZipFile,
        zlib.error,
        etree.LxmlError,
        struct.error,
        EOFError,
        NotImplementedError,
        UnicodeDecodeError,
    ) as error:
        raise DamagedWorkbook(
            "the workbook is damaged and cannot be read",
            advice="Open it in the spreadsheet program, save it again and send it again.",
            file=path,
        ) from error


def _blocks(book: Book, doubts: Doubts) -> list[Block]:
    blocks: list[Block] = []
    calculation = Calculation(book)
    for candidate in book.candidates():
        sheet = calculation.calculated(candidate) if tags_of(candidate) else candidate
        found = blocks_of(sheet)
        if sheet.visible:
            blocks.extend(found)
        elif found:
            cells = [b.at for b in found]
            doubts.add(
                "hidden-sheet",
                "caution",
                f"The hidden sheet '{sheet.name}' holds {listed([f'{b.tag} in {b.at.address}' for b in found])}; "
                "hidden sheets are left alone. Unhide it if it belongs to the study.",
                cells,
            )
    if not blocks:
        hidden = f" ({doubts.study[0].text})" if doubts.study else ""
        raise NothingToAnswer(
            f"no cell of a visible sheet holds a tag{hidden}",
            expected=f"at least {TAGS[1]} and {TAGS[2]}",
            advice="Write the tags into cells above the tables, or fill in a blank intake workbook.",
        )
    return blocks


def _study(source: Source, blocks: Sequence[Block], references: References, doubts: Doubts) -> Study:
    by_tag = {tag: [b for b in blocks if b.tag == tag] for tag in TAGS}
    header = header_of(by_tag["qc:study"], doubts)
    characteristics = characteristics_of(by_tag["qc:characteristics"], doubts)
    placed = placed_in(by_tag["qc:places"], references, doubts)
    characteristics = with_placed(characteristics, placed, doubts)
    counts = counts_of(by_tag["qc:counts"], doubts)
    if not counts or characteristics or by_tag["qc:characteristics"] or by_tag["qc:measurements"]:
        require(characteristics, by_tag["qc:characteristics"], doubts)
    pieces = [piece for b in by_tag["qc:measurements"] for piece in pieces_of(b, characteristics, doubts)]
    pieces += placed_pieces(placed, characteristics, doubts)
    samples = samples_of(characteristics, pieces, doubts)
    gauge_studies = gauge_studies_of(by_tag["qc:gauge"], characteristics, doubts)
    if not (counts or gauge_studies or any(sample.values or sample.left_out for sample in samples)):
        raise _no_values([*by_tag["qc:measurements"], *by_tag["qc:places"]], doubts)
    return Study(
        source=source,
        header=header,
        characteristics=characteristics,
        samples=samples,
        gauge_studies=gauge_studies,
        counts=counts,
        findings=doubts.study,
        findings_of=doubts.of_characteristics,
    )


def _no_values(blocks: Sequence[Block], doubts: Doubts) -> NothingToAnswer:
    """The error for characteristics without a single measured value, with the likeliest reason."""
    if not blocks:
        return NothingToAnswer(
            "no cell holds the tag qc:measurements, and no measured values were found",
            expected="the measured values below such a tag (means and indices alone say too little)",
            advice="Write qc:measurements into a cell, below it a row with the Ids as headings, below that the values.",
        )
    told = (*doubts.study, *(finding for _, finding in doubts.of_characteristics))
    reason = next((f for code in _REASONS for f in told if f.code == code), None)
    return NothingToAnswer(
        f"no usable measured value is found by the tag {blocks[0].tag}",
        expected="values for at least one listed characteristic",
        advice=reason.text if reason is not None else "Fill in the values.",
        cell=blocks[0].at,
    )


_REASONS = (
    "no-heading-row",
    "value-column-without-characteristic",
    "unlisted-characteristic",
    "unknown-reference",
    "uncalculated-formula",
    "ambiguous-number",
    "not-a-number",
)
"""Findings that explain why there is no value, the likeliest first."""
