from __future__ import annotations

import errno
import threading
from pathlib import Path

import pytest

from sheetqc.folder import claims
from sheetqc.folder.claims import Claim
from sheetqc.folder.layout import Layout
from tests.folder.standin import content_of, package

OWNER = "host.1.abcd"


def _taken(layout: Layout, name: str = "sup/a.xlsx", content: str = "") -> Claim:
    claim = claims.take(layout, OWNER, package(layout.inbox / name, content))
    assert claim is not None
    return claim


def test_take_moves_the_file(layout: Layout) -> None:
    claim = _taken(layout)
    assert (claim.place, claim.name, claim.owner, claim.shown) == ("sup", "a.xlsx", OWNER, "sup/a.xlsx")
    assert claim.file.is_file()
    assert not (layout.inbox / "sup/a.xlsx").exists()
    assert claims.seen(claim.folder) == claim


def test_what_is_gone_is_not_taken(layout: Layout) -> None:
    assert claims.take(layout, OWNER, layout.inbox / "none.xlsx") is None
    assert list(layout.working.iterdir()) == []


def test_what_is_held_stays(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    path = package(layout.inbox / "a.xlsx")

    def held(*_: object) -> None:
        raise PermissionError(errno.EACCES, "held")

    monkeypatch.setattr(Path, "rename", held)
    monkeypatch.setattr("sheetqc.folder.moves.time.sleep", lambda _: None)
    with pytest.raises(PermissionError):
        claims.take(layout, OWNER, path)
    assert path.is_file()
    assert list(layout.working.iterdir()) == []


def test_a_rename_reported_as_failed_that_was_done(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    path, rename = package(layout.inbox / "a.xlsx"), Path.rename

    def misreported(self: Path, target: Path) -> None:
        rename(self, target)
        raise FileNotFoundError(errno.ENOENT, "No such file or directory")

    monkeypatch.setattr(Path, "rename", misreported)
    claim = claims.take(layout, OWNER, path)
    assert claim is not None
    assert claim.file.is_file()


def test_one_of_many_gets_the_file(layout: Layout) -> None:
    for number in range(20):
        path, won = package(layout.inbox / f"{number}.xlsx"), []
        start = threading.Barrier(4)

        def race(path: Path = path, won: list[Claim] = won, start: threading.Barrier = start) -> None:
            start.wait()
            claim = claims.take(layout, OWNER, path)
            if claim is not None:
                won.append(claim)

        threads = [threading.Thread(target=race) for _ in range(4)]
        for thread in threads:
            thread.start()
        for thread in threads:
            thread.join()
        assert len(won) == 1
        assert won[0].file.is_file()
    assert len(list(layout.working.iterdir())) == 20


def test_tries_are_counted_and_cleared(layout: Layout) -> None:
    claim = _taken(layout)
    assert claim.tries == 0
    first = claim.next_try()
    (first / "half.xlsx").touch()
    second = claim.next_try()
    assert claim.tries == 2
    assert list(first.iterdir()) == list(second.iterdir()) == []


def test_noted_survives(layout: Layout) -> None:
    claim = claims.noted(claims.noted(_taken(layout), crashes=1), crashes=1, troubles=1)
    assert (claim.crashes, claim.troubles) == (2, 1)
    assert claims.seen(claim.folder) == claim


def test_take_back_gives_a_new_owner(layout: Layout) -> None:
    claim = _taken(layout)
    mine = claims.take_back(layout, "host.2.ef", claim.folder)
    assert mine is not None
    assert (mine.owner, mine.ticket, mine.shown) == ("host.2.ef", claim.ticket, claim.shown)
    assert not claim.folder.exists()
    assert claims.take_back(layout, "host.3.gh", claim.folder) is None


def test_release_keeps_a_file_dropped_meanwhile(layout: Layout) -> None:
    claim = _taken(layout, content="old")
    package(layout.inbox / "sup/a.xlsx", "new")
    claims.release(layout, claim)
    assert content_of(layout.inbox / "sup/a.xlsx") == "new"
    assert content_of(layout.inbox / "sup/a (2).xlsx") == "old"
    assert list(layout.working.iterdir()) == []


def test_drop_never_removes_the_file(layout: Layout) -> None:
    claim = _taken(layout)
    with pytest.raises(OSError, match="still holds"):
        claims.drop(claim)
    assert claim.file.is_file()


def test_across_volumes(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    """in/ lies on another volume than working/."""
    path = package(layout.inbox / "a.xlsx", "far")
    monkeypatch.setattr(claims, "_same_volume", lambda *_: False)
    rename, replace = Path.rename, Path.replace

    def within(move: object) -> object:
        def checked(self: Path, target: Path) -> Path:
            if (layout.inbox in self.parents) != (layout.inbox in Path(target).parents):
                raise OSError(errno.EXDEV, "Invalid cross-device link")
            return move(self, target)  # type: ignore[operator]

        return checked

    monkeypatch.setattr(Path, "rename", within(rename))
    monkeypatch.setattr(Path, "replace", within(replace))
    claim = claims.take(layout, OWNER, path)
    assert claim is not None
    assert content_of(claim.file) == "far"
    assert list(layout.inbox.iterdir()) == []
    claims.release(layout, claim)
    assert content_of(layout.inbox / "a.xlsx") == "far"


def test_killed_on_the_way_across_volumes(layout: Layout) -> None:
    claim = _taken(layout, "sup/a.xlsx", "far")
    held = claims.held_name(layout.inbox / "sup/a.xlsx", claim)
    claim.file.rename(held)
    mine = claims.take_back(layout, "host.2.ef", claim.folder)
    assert mine is None
    assert content_of(layout.inbox / "sup/a.xlsx") == "far"
    assert list(layout.working.iterdir()) == []
    assert not held.exists()
