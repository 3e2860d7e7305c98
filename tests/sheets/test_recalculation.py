"""The sheets alive: what LibreOffice computes anew is what is stored, also after cells were changed."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import openpyxl
import pytest
from openpyxl.workbook import Workbook
from openpyxl.worksheet.worksheet import Worksheet

from sheetqc import package, sheets
from sheetqc.assessment import Assessment, Estimate
from sheetqc.finding import column_letters
from sheetqc.stats.families import family
from tests.office import converted, differences, office, opened
from tests.sheets.conftest import Written
from tests.sheets.made import Asked, index_of, made_answer, made_assessment, sender_workbook
from tests.sheets.samples import bore, burst, runout

SENT, RUN = "List of parts", "Run 1"
LOWER, UPPER, REQUIRED, MODEL, STATUS, WORD = "A6", "B6", "C6", "F6", "H5", "A3"

CHANGES: dict[str, tuple[Asked, str, str, object]] = {
    "limit sent": (bore(), SENT, "C{row}", 25.05),
    "limit on the page": (bore(), "", UPPER, 25.05),
    "limit taken away": (bore(), "", LOWER, None),
    "value changed": (bore(), RUN, "{column}7", 25.02),
    **{f"required {r}": (bore(), "", REQUIRED, r) for r in (0.5, 0.85, 0.95, 1.6)},
    **{f"model {m}": (runout(), "", MODEL, family(m).title) for m in ("weibull", "gamma", "normal")},
}
"""What is changed by hand: the sample, the sheet ("" for its own page), the cell and what is entered there."""

IDS = {what: f"C{number}" for number, what in enumerate(CHANGES)}


@pytest.fixture(scope="module")
def fresh(tmp_path_factory: pytest.TempPathFactory) -> Workbook:
    """A workbook with a characteristic for every change of `CHANGES`, changed in a plain copy and computed anew."""
    folder = tmp_path_factory.mktemp("changed")
    answer, study = made_answer(*(replace(asked, id=IDS[what]) for what, (asked, *_) in CHANGES.items()))
    sheets.write(answer, study, sheets.wanted_names(answer), folder / "additions.xlsx")
    sender_workbook(folder / "sent.xlsx", answer)
    package.graft(folder / "sent.xlsx", folder / "additions.xlsx", folder / "copy.xlsx")
    book = opened(folder / "copy.xlsx")
    for number, (what, (_, sheet, address, value)) in enumerate(CHANGES.items()):
        # the columns of the values begin at C, the rows of the characteristics at 4
        place = address.format(row=4 + number, column=column_letters(3 + number))
        book[sheet or f"QC {IDS[what]}"][place] = value
    book.save(folder / "changed.xlsx")
    return opened(converted([folder / "changed.xlsx"], "xlsx", folder)[0], data_only=True)


def _page(book: Workbook, what: str) -> Worksheet:
    return book[f"QC {IDS[what]}"]


def _named(book: Workbook, what: str, quantity: str) -> object:
    sheet, _, address = book.defined_names[f"qc.{IDS[what]}.{quantity}"].attr_text.rpartition("!")
    return book[sheet.strip("'").removeprefix("$'")][address.replace("$", "")].value


def _ppk(found: Assessment) -> Estimate:
    assert found.indices.Ppk is not None
    return found.indices.Ppk


@office
def test_nothing_differs_after_recalculation(written: Written, tmp_path: Path) -> None:
    count, wrong = differences(written.copy, converted([written.copy], "xlsx", tmp_path)[0])
    assert count > 4000
    assert wrong == []


@office
def test_nothing_differs_in_a_workbook_of_its_own(tmp_path: Path) -> None:
    answer, study = made_answer(bore(), burst())
    book = tmp_path / "alone.xlsx"
    sheets.write(answer, study, sheets.wanted_names(answer), book, alone=True)
    count, wrong = differences(book, converted([book], "xlsx", tmp_path)[0])
    assert count > 1500
    assert wrong == []


@office
@pytest.mark.parametrize("where", ["limit sent", "limit on the page"])
def test_a_moved_limit_moves_index_bounds_rate_and_verdict(fresh: Workbook, where: str) -> None:
    wanted = made_assessment(bore(upper=25.05), 0)
    model = wanted.model()
    assert model is not None
    assert model.expected_ppm is not None
    assert _named(fresh, where, "Ppk") == pytest.approx(_ppk(wanted).estimate, rel=1e-9)
    assert _named(fresh, where, "Ppk_lower") == pytest.approx(_ppk(wanted).lower, rel=1e-9)
    assert _named(fresh, where, "Ppk_upper") == pytest.approx(_ppk(wanted).upper, rel=1e-9)
    assert _named(fresh, where, "Expected_ppm") == pytest.approx(model.expected_ppm.total, rel=1e-9)
    assert _named(fresh, where, "Verdict") == wanted.verdict.state
    assert "What-if" in str(_page(fresh, where)[STATUS].value)


@office
@pytest.mark.parametrize(
    ("required", "state"), [(0.5, "shown"), (0.85, "likely"), (0.95, "doubtful"), (1.6, "not met")]
)
def test_the_requirement_decides_the_verdict(fresh: Workbook, required: float, state: str) -> None:
    assert made_assessment(bore(requirement=required), 0).verdict.state == state
    what = f"required {required}"
    assert _named(fresh, what, "Verdict") == state
    assert str(_page(fresh, what)[WORD].value).endswith(state)


@office
@pytest.mark.parametrize("chosen", ["weibull", "gamma", "normal"])
def test_another_model_in_use_changes_all_that_rests_on_it(fresh: Workbook, chosen: str) -> None:
    asked, what = runout(), f"model {chosen}"
    model = made_assessment(asked, 0).model(chosen)
    assert model is not None
    assert model.expected_ppm is not None
    triple = (model.quantiles.low, model.quantiles.median, model.quantiles.high)
    assert _named(fresh, what, "Ppk") == pytest.approx(index_of(triple, asked), rel=1e-9)
    assert _named(fresh, what, "X99.865") == pytest.approx(model.quantiles.high, rel=1e-9)
    assert _named(fresh, what, "Expected_ppm") == pytest.approx(model.expected_ppm.total, rel=1e-9)
    theta = [value for _, value in model.parameters]
    curve = _curve(_page(fresh, what))
    assert len(curve) > 30
    for x, share, width in curve:
        assert share == pytest.approx(width * float(family(chosen).density(x, theta)), abs=1e-9)


def _curve(sheet: Worksheet) -> list[tuple[float, float, float]]:
    """Points of the sheet's curve: place, share per bar, width of a bar."""
    heads = {str(cell.value): cell.column for cell in sheet[2]}
    width = sheet.cell(3, heads["Below"]).value
    points, row = [], 3
    while (x := sheet.cell(row, heads["Place"]).value) is not None:
        points.append((x, sheet.cell(row, heads["Share per bar"]).value, width))
        row += 1
    return points


@office
def test_a_changed_value_is_told(fresh: Workbook) -> None:
    assert "out of date" in str(_page(fresh, "value changed")[STATUS].value)


@office
def test_without_one_limit_the_index_is_that_of_the_other_side(fresh: Workbook) -> None:
    wanted, where = made_assessment(bore(lower=None), 0), "limit taken away"
    assert _named(fresh, where, "Ppk") == pytest.approx(_ppk(wanted).estimate, rel=1e-9)
    assert _named(fresh, where, "Ppk_lower") == pytest.approx(_ppk(wanted).lower, rel=1e-9)
    assert _named(fresh, where, "Pp") == "–"


def test_stored_values_are_those_of_the_analysis(written: Written) -> None:
    book = written.values()
    names = openpyxl.load_workbook(written.copy).defined_names
    for found, safe in zip(written.answer.assessments, ("D12", "R1", "P7"), strict=False):
        model = found.model()
        assert model is not None
        assert model.expected_ppm is not None
        assert found.summary is not None
        expected = {
            "Ppk": _ppk(found).estimate, "Ppk_lower": _ppk(found).lower, "Ppk_upper": _ppk(found).upper,
            "X0.135": model.quantiles.low, "X50": model.quantiles.median, "X99.865": model.quantiles.high,
            "Skewness": found.summary.skewness, "Kurtosis": found.summary.kurtosis,
            "s_within": found.stability.within_s, "Expected_ppm": model.expected_ppm.total,
        }  # fmt: skip
        for quantity, value in expected.items():
            sheet, _, address = names[f"qc.{safe}.{quantity}"].attr_text.rpartition("!")
            stored = book[sheet.strip("'")][address.replace("$", "")].value
            rounded = 1e-8 if quantity in ("Skewness", "Kurtosis") else 0.0
            assert stored == pytest.approx(value, rel=1e-10, abs=rounded), f"{safe} {quantity}"
