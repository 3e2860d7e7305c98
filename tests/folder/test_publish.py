from __future__ import annotations

import threading

import pytest

from sheetqc.folder import claims, publish
from sheetqc.folder.claims import Claim
from sheetqc.folder.layout import Layout
from sheetqc.folder.publish import Decision
from tests.folder.standin import answer, package


def _claim(layout: Layout, name: str = "a.xlsx") -> Claim:
    claim = claims.take(layout, "host.1.ab", package(layout.inbox / name))
    assert claim is not None
    return claim


def _decision(claim: Claim) -> Decision:
    outcome = answer(claim.file, claim.next_try())
    assert outcome.workbook is not None
    return Decision(answered=True, results=(outcome.workbook, outcome.report), sha256="ab", text="fine")


def test_nothing_shows_before_it_is_carried_out(layout: Layout) -> None:
    claim = _claim(layout)
    done = publish.decided(layout, claim, _decision(claim))
    assert not any(layout.answered.iterdir())
    assert publish.decision_of(layout, claim) == done
    assert [target for _, target in done.moves] == [
        "answered/a.answered.xlsx",
        "answered/a.answered.json",
        "originals/a.xlsx",
    ]


def test_carried_out_twice_is_carried_out_once(layout: Layout) -> None:
    claim = _claim(layout)
    done = publish.decided(layout, claim, _decision(claim))
    publish.carry_out(layout, claim, done)
    publish.carry_out(layout, claim, done)
    publish.closed(layout, claim, done)
    assert not any(layout.working.iterdir())
    assert not any(layout.names.iterdir())
    assert (layout.originals / "a.xlsx").is_file()


def test_not_closed_while_something_is_left(layout: Layout) -> None:
    claim = _claim(layout)
    done = publish.decided(layout, claim, _decision(claim))
    with pytest.raises(OSError, match="not in its place"):
        publish.closed(layout, claim, done)
    assert claim.file.is_file()


@pytest.mark.parametrize("taken", ["answered/a.answered.json", "originals/A.xlsm", "returned/a.returned.json"])
def test_a_used_name_is_passed_over(layout: Layout, taken: str) -> None:
    (layout.root / taken).touch()
    claim = _claim(layout)
    assert publish.decided(layout, claim, _decision(claim)).stem == "a (2)"


def test_a_name_under_way_elsewhere_is_passed_over(layout: Layout) -> None:
    one, two = _claim(layout), _claim(layout)
    assert publish.decided(layout, one, _decision(one)).stem == "a"
    assert publish.decided(layout, two, _decision(two)).stem == "a (2)"


def test_names_are_given_once_in_a_race(layout: Layout) -> None:
    cases = [_claim(layout) for _ in range(8)]
    decisions = [_decision(claim) for claim in cases]
    start, stems = threading.Barrier(8), []

    def race(number: int) -> None:
        start.wait()
        stems.append(publish.decided(layout, cases[number], decisions[number]).stem)

    threads = [threading.Thread(target=race, args=(n,)) for n in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert len(set(stems)) == 8


def test_reservations_are_forgotten(layout: Layout) -> None:
    claim = _claim(layout)
    publish.decided(layout, claim, _decision(claim))
    (layout.names / "of nobody").write_text("0123")
    publish.forget_all(layout)
    assert len(list(layout.names.iterdir())) == 1
    publish.forget(layout, claim.ticket)
    assert not any(layout.names.iterdir())


def test_unknown_claims_keep_all_reservations(layout: Layout) -> None:
    (layout.working / "host.1.ab.000009").mkdir()  # about to be written by another service
    (layout.names / "x").write_text("0123")
    publish.forget_all(layout)
    assert (layout.names / "x").exists()
