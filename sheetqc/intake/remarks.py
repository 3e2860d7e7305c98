"""The findings of what was met in the value cells of one characteristic."""

from __future__ import annotations

from dataclasses import dataclass

from sheetqc.finding import Level
from sheetqc.intake.doubts import Doubts, counted, places
from sheetqc.intake.taking import Taking


@dataclass(frozen=True, slots=True, kw_only=True)
class Remark:
    """How something met in value cells is told; `text` continues after "3 cells of D12 (Run!C3:C5)"."""

    met: str
    code: str
    level: Level
    text: str


REMARKS: tuple[Remark, ...] = (
    Remark(
        met="uncalculated",
        code="uncalculated-formula",
        level="stop",
        text="hold formulas whose results are not stored in the file. Open the workbook in the spreadsheet program, "
        "let it calculate, save it and send it again.",
    ),
    Remark(
        met="error",
        code="error-value",
        level="caution",
        text="hold error values and were set aside; a number was expected. Correct the formulas behind them.",
    ),
    Remark(
        met="date",
        code="date-in-values",
        level="caution",
        text="hold dates or times where a number was expected (a figure such as 12.03 typed into a spreadsheet of "
        "another language becomes a date); they were set aside. Type the measured values again.",
    ),
    Remark(
        met="boolean",
        code="boolean-in-values",
        level="caution",
        text="hold TRUE or FALSE where a number was expected; they were set aside. Type the measured values.",
    ),
    Remark(
        met="words",
        code="not-a-number",
        level="caution",
        text="hold words where a number was expected; they were set aside. Type the measured value, or give the "
        "reason under Leave out.",
    ),
    Remark(
        met="ambiguous",
        code="ambiguous-number",
        level="caution",
        text="can be read in two ways, with a decimal or a thousands mark, and nothing in the block tells which; they "
        "were set aside. Type them as numbers.",
    ),
    Remark(
        met="other unit",
        code="unit-mismatch",
        level="caution",
        text="carry a unit that does not convert to the one under Unit; they were set aside. Correct the unit or the "
        "values.",
    ),
    Remark(
        met="undetected",
        code="below-detection",
        level="caution",
        text="say that nothing was detected, without the limit of detection; they were set aside. Write them as "
        '"<" followed by that limit, such as <0.5.',
    ),
    Remark(
        met="struck",
        code="struck-through",
        level="caution",
        text="are struck through and were used all the same. If they are cancelled, give the reason under Leave out.",
    ),
    Remark(
        met="resolved",
        code="number-read-by-size",
        level="caution",
        text="could be read with a decimal or a thousands mark; the reading near the other values was taken. Check "
        "them.",
    ),
    Remark(
        met="converted",
        code="unit-converted",
        level="caution",
        text="are given in another unit than the one under Unit and were converted. Check them.",
    ),
    Remark(
        met="percent",
        code="percent-format",
        level="caution",
        text="are shown as percentages; the stored fractions were used, since Unit does not say %. Give % under Unit "
        "if the limits are in percent.",
    ),
    Remark(
        met="marked",
        code="mark-beside-value",
        level="caution",
        text="hold a mark or word beside the figure; the figure alone was used. Check them.",
    ),
    Remark(
        met="computed",
        code="formula-computed",
        level="caution",
        text="hold formulas whose results are not stored in the file; they are simple and were computed. Open the "
        "workbook in the spreadsheet program and save it to be sure.",
    ),
    Remark(
        met="bounded",
        code="censored-value",
        level="note",
        text="give a bound instead of a value and were read as such.",
    ),
    Remark(
        met="repaired",
        code="number-as-text",
        level="note",
        text="hold numbers as texts and were read as numbers. Nothing needs to be done if the readings are right.",
    ),
    Remark(
        met="missing",
        code="no-reading",
        level="note",
        text="say that there is no reading and were taken as empty.",
    ),
)
"""The register of remarks, the weightiest first."""


def tell(taking: Taking, characteristic: str, doubts: Doubts) -> None:
    """Adds a finding for everything noteworthy that was met in a characteristic's value cells."""
    for remark in REMARKS:
        met = taking.met.get(remark.met)
        if not met:
            continue
        cells = [cell for cell, _ in met]
        verb = remark.text
        if len(cells) == 1:
            verb = _singular(verb)
        examples = list(dict.fromkeys(text for _, text in met if text))[:3]
        said = f": {', '.join(examples)}" if examples else ""
        doubts.add(
            remark.code,
            remark.level,
            f"{counted(len(cells), 'cell')} of {characteristic} ({places(cells)}{said}) {verb}",
            cells,
            of=characteristic,
        )


_SINGULAR = {"hold ": "holds ", "are ": "is ", "say ": "says ", "carry ": "carries ", "give ": "gives "}


def _singular(text: str) -> str:
    for many, one in _SINGULAR.items():
        if text.startswith(many):
            text = one + text.removeprefix(many)
            break
    for many, one in (("they were", "it was"), ("and were", "and was"), ("Check them", "Check it")):
        text = text.replace(many, one)
    return text
