"""The sheets of real judgements, changed by hand and computed anew, against the judgement of the changed study."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from openpyxl.workbook import Workbook

from sheetqc import judgement, package, sheets
from sheetqc.assessment import Answer
from sheetqc.study import Study
from tests.office import converted, differences, office, opened
from tests.sheets.made import made_answer, sender_workbook
from tests.sheets.samples import bore, burst, runout

IDS = ("D12", "R1", "P7")
MOVED = {"D12": ("upper", 25.034), "R1": ("upper", 0.025), "P7": ("lower", 52.0)}
ENTRY = {"lower": "A6", "upper": "B6"}


def _study() -> Study:
    _, study = made_answer(bore(copied=()), runout(), burst())
    return replace(study, header=replace(study.header, requirement=1.2))


def _with_moved_limits(study: Study) -> Study:
    moved = []
    for asked in study.characteristics:
        side, value = MOVED[asked.id]
        moved.append(replace(asked, limits=replace(asked.limits, **{side: value})))
    return replace(study, characteristics=tuple(moved))


def _written(answer: Answer, study: Study, folder: Path) -> Path:
    sheets.write(answer, study, sheets.wanted_names(answer), folder / "additions.xlsx")
    sender_workbook(folder / "sent.xlsx", answer)
    package.graft(folder / "sent.xlsx", folder / "additions.xlsx", folder / "copy.xlsx")
    return folder / "copy.xlsx"


@pytest.fixture(scope="module", params=["Ppk", "Cpk"])
def answered(
    request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory
) -> tuple[Study, Path, Path, Workbook]:
    """Study, its answered copy as it is and as computed anew, and a copy with moved limits computed anew."""
    folder = tmp_path_factory.mktemp("judged")
    study = _study()
    study = replace(study, header=replace(study.header, requirement_on=request.param))
    copy = _written(judgement.judge(study), study, folder)
    book = opened(copy)
    for name, (side, value) in MOVED.items():
        book[f"QC {name}"][ENTRY[side]] = value
    book.save(folder / "moved.xlsx")
    same, moved = converted([copy, folder / "moved.xlsx"], "xlsx", folder)
    return study, copy, same, opened(moved, data_only=True)


def _named(book: Workbook, name: str, quantity: str) -> object:
    sheet, _, address = book.defined_names[f"qc.{name}.{quantity}"].attr_text.rpartition("!")
    return book[sheet.strip("'").removeprefix("$'")][address.replace("$", "")].value


@office
def test_nothing_differs(answered: tuple[Study, Path, Path, Workbook]) -> None:
    count, wrong = differences(answered[1], answered[2])
    assert count > 2000
    assert wrong == []


@office
@pytest.mark.parametrize("name", IDS)
def test_moved_limits_give_what_judgement_says_of_them(answered: tuple[Study, Path, Path, Workbook], name: str) -> None:
    study, _, _, moved = answered
    found = next(a for a in judgement.judge(_with_moved_limits(study)).assessments if a.characteristic.id == name)
    model, ppk, cpk = found.model(), found.indices.Ppk, found.indices.Cpk
    assert model is not None
    assert model.expected_ppm is not None
    assert ppk is not None
    assert cpk is not None
    assert _named(moved, name, "Ppk") == pytest.approx(ppk.estimate, rel=1e-9)
    assert _named(moved, name, "Ppk_lower") == pytest.approx(ppk.lower, rel=1e-9)
    assert _named(moved, name, "Expected_ppm") == pytest.approx(model.expected_ppm.total, rel=1e-9)
    assert _named(moved, name, "Cpk") == pytest.approx(cpk.estimate, rel=1e-9)
    assert _named(moved, name, "Verdict") == found.verdict.state
    # the largest of the smaller of two sides is kept on a grid of limits only, so it may fall short of the whole
    upper = _named(moved, name, "Ppk_upper")
    assert isinstance(upper, float)
    assert upper == pytest.approx(ppk.upper, rel=0.01)
    # bounds of Cpk follow exactly with two limits; with one they keep their proportion, which is close
    tolerance = 1e-9 if name == "D12" else 0.01
    assert _named(moved, name, "Cpk_lower") == pytest.approx(cpk.lower, rel=tolerance)
    assert _named(moved, name, "Cpk_upper") == pytest.approx(cpk.upper, rel=tolerance)


@office
@pytest.mark.parametrize("name", IDS)
def test_what_cannot_follow_is_no_longer_shown(answered: tuple[Study, Path, Path, Workbook], name: str) -> None:
    moved = answered[3]
    assert _named(moved, name, "Expected_ppm_upper") == "–"
    assert "What-if" in str(moved[f"QC {name}"]["H5"].value)


@office
def test_crossed_limits_leave_no_error_on_the_page(tmp_path: Path) -> None:
    _, study = made_answer(bore(copied=()))
    (asked,) = study.characteristics
    crossed = replace(asked, limits=replace(asked.limits, lower=asked.limits.upper, upper=asked.limits.lower), cells=())
    study = replace(study, characteristics=(crossed,))
    copy = _written(judgement.judge(study), study, tmp_path)
    (fresh,) = converted([copy], "xlsx", tmp_path)
    count, wrong = differences(copy, fresh)
    assert count > 500
    assert wrong == []
