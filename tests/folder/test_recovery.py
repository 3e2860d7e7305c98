"""Each state a kill can leave, made by hand; a service that starts then must bring it to its one end."""

from __future__ import annotations

import json
import shutil
from collections.abc import Callable

import pytest

from sheetqc.folder import ServeResult, claims, publish
from sheetqc.folder.claims import Claim
from sheetqc.folder.layout import Layout
from sheetqc.folder.moves import move, sha256
from sheetqc.folder.owners import Owner, this_host
from sheetqc.folder.publish import Decision, Done
from tests.folder.standin import answer, content_of, package

DEAD = f"{this_host()}.999999.dead0000"
Files = Callable[[], dict[str, list[str]]]
ServeOnce = Callable[..., ServeResult]

END = {
    "in": [],
    "working": [],
    "answered": ["sup/a.answered.json", "sup/a.answered.xlsx"],
    "originals": ["sup/a.xlsx"],
    "returned": [],
}


def _claimed(layout: Layout) -> Claim:
    path = package(layout.inbox / "sup/a.xlsx", "the content")
    claim = claims.take(layout, DEAD, path)
    assert claim is not None
    return claim


def _decided(layout: Layout, claim: Claim) -> Done:
    outcome = answer(claim.file, claim.next_try())
    assert outcome.workbook is not None
    results = (outcome.workbook, outcome.report)
    return publish.decided(layout, claim, Decision(answered=True, results=results, sha256=sha256(claim.file)))


def _nothing_claimed_yet(layout: Layout) -> None:
    package(layout.inbox / "sup/a.xlsx", "the content")
    (layout.working / f"{DEAD}.000001").mkdir()


def _claim_written_file_not_moved(layout: Layout) -> None:
    claim = _claimed(layout)
    move(claim.file, layout.inbox / "sup/a.xlsx")


def _claimed_not_begun(layout: Layout) -> None:
    _claimed(layout)


def _half_an_answer(layout: Layout) -> None:
    claim = _claimed(layout)
    (claim.next_try() / "a.answered.xlsx").write_bytes(b"PK\3\4 half")


def _answered_not_decided(layout: Layout) -> None:
    claim = _claimed(layout)
    answer(claim.file, claim.next_try())


def _name_reserved_not_decided(layout: Layout) -> None:
    claim = _claimed(layout)
    answer(claim.file, claim.next_try())
    publish._reserved(layout, claim, "a")


def _name_being_reserved(layout: Layout) -> None:
    _claimed(layout)
    publish._reservation(layout, "sup", "a").touch()


def _decided_nothing_moved(layout: Layout) -> None:
    _decided(layout, _claimed(layout))


def _moved(count: int) -> Callable[[Layout], None]:
    def state(layout: Layout) -> None:
        claim = _claimed(layout)
        for source, target in _decided(layout, claim).moves[:count]:
            move(claim.folder / source, layout.root / target)

    state.__name__ = f"_decided_and_{count}_moved"
    return state


def _half_removed(layout: Layout) -> None:
    _moved(3)(layout)
    (folder,) = layout.working.iterdir()
    for reservation in layout.names.iterdir():
        reservation.unlink()
    shutil.rmtree(folder / "answer-1")
    (folder / "claim.json").unlink()


def _only_the_empty_claim_left(layout: Layout) -> None:
    _moved(3)(layout)
    (folder,) = layout.working.iterdir()
    for reservation in layout.names.iterdir():
        reservation.unlink()
    (folder / "done.json").unlink()


def _decision_unreadable_nothing_moved(layout: Layout) -> None:
    claim = _claimed(layout)
    _decided(layout, claim)
    claim.done.write_text('{"answered": true, "st')


def _decision_unreadable_all_moved(layout: Layout) -> None:
    _moved(3)(layout)
    (folder,) = layout.working.iterdir()
    (folder / "done.json").write_text("")


def _given_back_half_way(layout: Layout) -> None:
    claim = _claimed(layout)
    target = layout.inbox / "sup/a.xlsx"
    try:
        target.hardlink_to(claim.file)
    except (OSError, NotImplementedError):
        pytest.skip("no hard links here")


STATES = (
    _nothing_claimed_yet, _claim_written_file_not_moved, _claimed_not_begun, _half_an_answer, _answered_not_decided,
    _name_reserved_not_decided, _name_being_reserved, _decided_nothing_moved, _moved(1), _moved(2), _moved(3),
    _half_removed, _only_the_empty_claim_left, _decision_unreadable_nothing_moved, _decision_unreadable_all_moved,
    _given_back_half_way,
)  # fmt: skip


@pytest.mark.parametrize("state", STATES, ids=lambda s: s.__name__.strip("_"))
def test_every_state_comes_to_the_same_end(
    state: Callable[[Layout], None], layout: Layout, serve_once: ServeOnce, files: Files
) -> None:
    state(layout)
    serve_once()
    assert files() == END
    assert content_of(layout.originals / "sup/a.xlsx") == "the content"
    assert content_of(layout.answered / "sup/a.answered.xlsx") == "the content"
    assert json.loads((layout.answered / "sup/a.answered.json").read_bytes())["source"]["name"] == "a.xlsx"
    assert list(layout.names.iterdir()) == []
    assert list(layout.working.iterdir()) == []


@pytest.mark.parametrize("state", STATES, ids=lambda s: s.__name__.strip("_"))
def test_a_second_start_changes_nothing(
    state: Callable[[Layout], None], layout: Layout, serve_once: ServeOnce, files: Files
) -> None:
    state(layout)
    serve_once()
    assert serve_once() == ServeResult(answered=0, returned=0)
    assert files() == END


def test_an_unreadable_claim_record_loses_only_the_subfolder(
    layout: Layout, serve_once: ServeOnce, files: Files
) -> None:
    claim = _claimed(layout)
    (claim.folder / "claim.json").write_text("{")
    serve_once()
    assert files()["originals"] == ["a.xlsx"]


def test_records_do_not_lead_out_of_the_folder(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    claim = _claimed(layout)
    record = json.loads((claim.folder / "claim.json").read_text())
    (claim.folder / "claim.json").write_text(json.dumps({**record, "place": "../../outside"}))
    serve_once()
    assert files()["originals"] == ["a.xlsx"]
    assert not (layout.root.parent / "outside").exists()


def test_decisions_do_not_lead_out_of_the_folder(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    claim = _claimed(layout)
    _decided(layout, claim)
    record = json.loads(claim.done.read_text())
    record["moves"][2][1] = "../outside.xlsx"
    claim.done.write_text(json.dumps(record))
    serve_once()
    assert files() == END
    assert not (layout.root.parent / "outside.xlsx").exists()


def test_tries_that_ended_with_the_service_come_to_an_end(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    claim = _claimed(layout)
    (claim.folder / "answer-25").mkdir()
    serve_once()
    assert files()["returned"] == ["sup/a.returned.json", "sup/a.xlsx"]
    reason = json.loads((layout.returned / "sup/a.returned.json").read_bytes())["reason"]
    assert "was not answered in 25 tries" in reason


def test_claims_of_a_living_service_are_left_to_it(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    with Owner(layout) as owner:
        claim = claims.take(layout, owner.name, package(layout.inbox / "a.xlsx"))
        assert claim is not None
        serve_once()
        assert claim.file.exists()
    serve_once()
    assert files()["originals"] == ["a.xlsx"]
