"""The check before publishing: every kind of loss that a faulty graft could cause is seen, and nothing is published."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from sheetqc.errors import CannotGraft
from sheetqc.package import graft
from sheetqc.package.adding import Adding
from sheetqc.package.archive import opened
from sheetqc.package.partname import PartName
from sheetqc.package.plan import AddedSheet, Plan
from sheetqc.package.selfcheck import refuse_unfaithful
from sheetqc.package.workbook import opened_workbook
from tests.package.additions import write_additions
from tests.package.foreign import furnished
from tests.package.packages import contents, packed


@pytest.fixture
def whole(tmp_path: Path) -> tuple[Path, Path, Plan]:
    """An original, its copy, and the plan of what was changed."""
    original = furnished(tmp_path / "original.xlsx")
    additions = write_additions(tmp_path / "additions.xlsx")
    graft(original, additions, tmp_path / "copy.xlsx")
    with opened_workbook(original) as book, opened_workbook(additions) as extra:
        return original, tmp_path / "copy.xlsx", Adding(book, extra).plan()


def _check(original: Path, copy: Path, plan: Plan) -> None:
    with opened(original) as before, opened(copy) as after:
        refuse_unfaithful(before, after, plan)


def test_a_faithful_copy_passes(whole: tuple[Path, Path, Plan]) -> None:
    _check(*whole)


def _swap(name: str, old: bytes, new: bytes) -> Callable[[dict[str, bytes]], None]:
    def change(members: dict[str, bytes]) -> None:
        assert old in members[name]
        members[name] = members[name].replace(old, new)

    return change


@pytest.mark.parametrize(
    "change",
    [
        _swap("xl/worksheets/sheet1.xml", b"16.5", b"16.6"),
        lambda members: members.pop("docProps/app.xml"),
        lambda members: members.pop("xl/added/charts/chart1.xml"),
        lambda members: members.update({"xl/extra.xml": b"<a/>"}),
        _swap("xl/workbook.xml", b'firstSheet="0"', b'firstSheet="3"'),
        _swap("xl/workbook.xml", b'"veryHidden"', b'"visible"'),
        _swap("xl/workbook.xml", b'name="limits"', b'name="limit"'),
        _swap("xl/workbook.xml", b'name="Answer"', b'name="Other"'),
        _swap("xl/workbook.xml", b'localSheetId="0"', b'localSheetId="1"'),
        _swap("xl/_rels/workbook.xml.rels", b"worksheets/sheet2.xml", b"worksheets/sheet1.xml"),
        _swap("[Content_Types].xml", b"/xl/worksheets/sheet2.xml", b"/xl/worksheets/sheet9.xml"),
        _swap("xl/styles.xml", b'formatCode="0.000&quot; mm&quot;"', b'formatCode="0.000"'),
        _swap("xl/styles.xml", b"dxfs", b"dxfz"),
        _swap("xl/added/worksheets/_rels/sheet1.xml.rels", b"drawing1.xml", b"drawing7.xml"),
    ],
)
def test_an_unfaithful_copy_does_not_pass(
    change: Callable[[dict[str, bytes]], None], whole: tuple[Path, Path, Plan], tmp_path: Path
) -> None:
    original, copy, plan = whole
    members = contents(copy)
    change(members)
    # Packed by another program, so that what is untouched is compared by other bytes: repack the original as well.
    packed(tmp_path / "same.xlsx", contents(original))
    with pytest.raises(CannotGraft):
        _check(tmp_path / "same.xlsx", packed(tmp_path / "changed.xlsx", members), plan)


def test_repacking_alone_passes(whole: tuple[Path, Path, Plan], tmp_path: Path) -> None:
    original, copy, plan = whole
    same = packed(tmp_path / "same.xlsx", contents(original))
    _check(same, packed(tmp_path / "again.xlsx", contents(copy)), plan)


def test_a_copy_that_fails_is_not_published(
    whole: tuple[Path, Path, Plan], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    original, _, plan = whole
    wrong = Plan(
        replaced=plan.replaced,
        left_out=plan.left_out,
        added=plan.added,
        sheets=(*plan.sheets, AddedSheet(name="Ghost", part=PartName("xl/ghost.xml"))),
    )
    monkeypatch.setattr(Adding, "plan", lambda self: wrong)
    target = tmp_path / "unpublished.xlsx"
    with pytest.raises(CannotGraft, match="own check"):
        graft(original, tmp_path / "additions.xlsx", target)
    assert not target.exists()
    assert not list(tmp_path.glob(".sheetqc-*"))
