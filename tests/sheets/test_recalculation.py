"""The sheets alive: what LibreOffice computes anew is what is stored, also after cells were changed."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from openpyxl.workbook import Workbook

from sheetqc import package, sheets
from sheetqc.assessment import Assessment, Estimate
from sheetqc.stats.families import family
from tests.office import converted, differences, office, opened
from tests.sheets.conftest import Written
from tests.sheets.made import Asked, index_of, made_answer, made_assessment, sender_workbook
from tests.sheets.samples import bore, burst, runout

Change = tuple[Callable[[], Asked], dict[tuple[str, str], object]]
PAGE_D, PAGE_R, SENT, RUN = "QC D12", "QC R1", "List of parts", "Run 1"
LOWER, UPPER, REQUIRED, MODEL, STATUS, WORD = "A6", "B6", "C6", "F6", "H5", "A3"

CHANGES: dict[str, Change] = {
    "limit sent": (bore, {(SENT, "C4"): 25.05}),
    "limit on the page": (bore, {(PAGE_D, UPPER): 25.05}),
    "limit taken away": (bore, {(PAGE_D, LOWER): None}),
    "value changed": (bore, {(RUN, "C7"): 25.02}),
    **{f"required {r}": (bore, {(PAGE_D, REQUIRED): r}) for r in (0.5, 0.85, 0.95, 1.6)},
    **{f"model {m}": (runout, {(PAGE_R, MODEL): family(m).title}) for m in ("weibull", "gamma", "normal")},
}
"""What is changed by hand: the sample, and the cells with what is entered."""


def _answered(asked: Asked, folder: Path) -> Path:
    answer, study = made_answer(asked)
    sheets.write(answer, study, sheets.wanted_names(answer), folder / "additions.xlsx")
    sender_workbook(folder / "sent.xlsx", answer)
    package.graft(folder / "sent.xlsx", folder / "additions.xlsx", folder / "copy.xlsx")
    return folder / "copy.xlsx"


@pytest.fixture(scope="module")
def changed(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Workbook]:
    """Every change of `CHANGES` made in a plain copy and computed anew, all in one run of LibreOffice."""
    folder = tmp_path_factory.mktemp("changed")
    books = []
    for number, (make, cells) in enumerate(CHANGES.values()):
        book = opened(_answered(make(), folder))
        for (sheet, address), value in cells.items():
            book[sheet][address] = value
        books.append(folder / f"changed{number}.xlsx")
        book.save(books[-1])
    fresh = converted(books, "xlsx", folder)
    return dict(zip(CHANGES, (opened(path, data_only=True) for path in fresh), strict=True))


def _named(book: Workbook, name: str) -> object:
    sheet, _, address = book.defined_names[name].attr_text.rpartition("!")
    return book[sheet.strip("'").removeprefix("$'")][address.replace("$", "")].value


def _ppk(found: Assessment) -> Estimate:
    assert found.indices.Ppk is not None
    return found.indices.Ppk


@office
def test_nothing_differs_after_recalculation(written: Written, tmp_path: Path) -> None:
    count, wrong = differences(written.copy, converted([written.copy], "xlsx", tmp_path)[0])
    assert count > 5000
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
def test_a_moved_limit_moves_index_bounds_rate_and_verdict(changed: dict[str, Workbook], where: str) -> None:
    fresh, wanted = changed[where], made_assessment(bore(upper=25.05), 0)
    model = wanted.model()
    assert model is not None
    assert model.expected_ppm is not None
    assert _named(fresh, "qc.D12.Ppk") == pytest.approx(_ppk(wanted).estimate, rel=1e-9)
    assert _named(fresh, "qc.D12.Ppk_lower") == pytest.approx(_ppk(wanted).lower, rel=1e-9)
    assert _named(fresh, "qc.D12.Ppk_upper") == pytest.approx(_ppk(wanted).upper, rel=1e-9)
    assert _named(fresh, "qc.D12.Expected_ppm") == pytest.approx(model.expected_ppm.total, rel=1e-9)
    assert _named(fresh, "qc.D12.Verdict") == wanted.verdict.state
    assert "What-if" in str(fresh[PAGE_D][STATUS].value)


@office
@pytest.mark.parametrize(
    ("required", "state"), [(0.5, "shown"), (0.85, "likely"), (0.95, "doubtful"), (1.6, "not met")]
)
def test_the_requirement_decides_the_verdict(changed: dict[str, Workbook], required: float, state: str) -> None:
    assert made_assessment(bore(requirement=required), 0).verdict.state == state
    fresh = changed[f"required {required}"]
    assert _named(fresh, "qc.D12.Verdict") == state
    assert str(fresh[PAGE_D][WORD].value).endswith(state)


@office
@pytest.mark.parametrize("chosen", ["weibull", "gamma", "normal"])
def test_another_model_in_use_changes_all_that_rests_on_it(changed: dict[str, Workbook], chosen: str) -> None:
    asked, fresh = runout(), changed[f"model {chosen}"]
    model = made_assessment(asked, 0).model(chosen)
    assert model is not None
    assert model.expected_ppm is not None
    triple = (model.quantiles.low, model.quantiles.median, model.quantiles.high)
    assert _named(fresh, "qc.R1.Ppk") == pytest.approx(index_of(triple, asked), rel=1e-9)
    assert _named(fresh, "qc.R1.X99.865") == pytest.approx(model.quantiles.high, rel=1e-9)
    assert _named(fresh, "qc.R1.Expected_ppm") == pytest.approx(model.expected_ppm.total, rel=1e-9)
    theta = [value for _, value in model.parameters]
    curve = _curve(fresh, PAGE_R)
    assert len(curve) > 30
    for x, share, width in curve:
        assert share == pytest.approx(width * float(family(chosen).density(x, theta)), abs=1e-9)


def _curve(book: Workbook, name: str) -> list[tuple[float, float, float]]:
    """Points of the sheet's curve: place, share per bar, width of a bar."""
    sheet = book[name]
    heads = {str(cell.value): cell.column for cell in sheet[2]}
    width = sheet.cell(3, heads["Below"]).value
    points, row = [], 3
    while (x := sheet.cell(row, heads["Place"]).value) is not None:
        points.append((x, sheet.cell(row, heads["Share per bar"]).value, width))
        row += 1
    return points


@office
def test_a_changed_value_is_told(changed: dict[str, Workbook]) -> None:
    assert "out of date" in str(changed["value changed"][PAGE_D][STATUS].value)


@office
def test_without_one_limit_the_index_is_that_of_the_other_side(changed: dict[str, Workbook]) -> None:
    fresh, wanted = changed["limit taken away"], made_assessment(bore(lower=None), 0)
    assert _named(fresh, "qc.D12.Ppk") == pytest.approx(_ppk(wanted).estimate, rel=1e-9)
    assert _named(fresh, "qc.D12.Ppk_lower") == pytest.approx(_ppk(wanted).lower, rel=1e-9)
    assert _named(fresh, "qc.D12.Pp") == "–"


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
            assert stored == pytest.approx(value, rel=1e-10), f"{safe} {quantity}"
