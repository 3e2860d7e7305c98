from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path

import pytest

from sheetqc.errors import UsageError
from sheetqc.folder import ServeResult, claims, status
from sheetqc.folder.layout import Layout
from sheetqc.folder.owners import Owner, this_host
from tests.folder.standin import package


def test_of_what_is_no_served_folder(tmp_path: Path) -> None:
    with pytest.raises(UsageError, match="not a served folder"):
        status(tmp_path)


def test_counts_places(layout: Layout, serve_once: Callable[..., ServeResult]) -> None:
    package(layout.inbox / "s/a.xlsx")
    package(layout.inbox / "b.xlsx", "declined")
    serve_once()
    package(layout.inbox / "c.xlsx")
    package(layout.inbox / "d.xlsx")
    (layout.inbox / "~$d.xlsx").touch()
    found = status(layout.root)
    assert (found.answered, found.returned) == (1, 1)
    assert found.waiting == ("c.xlsx",)
    assert [name for name, _ in found.aside] == ["d.xlsx"]
    assert {(state, name) for _, state, name in found.recent} == {("answered", "s/a"), ("returned", "b")}
    assert found.summary_due
    text = str(found)
    assert "served by nobody" in text
    assert "waiting 1, in work 0, answered 1, returned 1" in text
    assert "d.xlsx is open in a spreadsheet program" in text


def test_shows_services_and_work(layout: Layout) -> None:
    with Owner(layout) as owner:
        claim = claims.take(layout, owner.name, package(layout.inbox / "a.xlsx"))
        assert claim is not None
        claim.next_try()
        claim.next_try()
        found = status(layout.root)
    assert [(s.host, s.pid, s.alive) for s in found.services] == [(this_host(), str(os.getpid()), True)]
    assert [(w.name, w.tries) for w in found.in_work] == [("a.xlsx", 2)]
    assert f"served by {this_host()} (process {os.getpid()})" in str(found)
    assert "try 2" in str(found)


def test_changes_nothing(layout: Layout) -> None:
    (layout.working / "host.1.ab.000001").mkdir()
    package(layout.inbox / "a\n\x1b[31mb.xlsx") if os.name == "posix" else package(layout.inbox / "a.xlsx")
    before = sorted(layout.root.rglob("*"))
    text = str(status(layout.root))
    assert sorted(layout.root.rglob("*")) == before
    assert "\x1b" not in text


def test_signs_of_other_machines(layout: Layout) -> None:
    for name, age in (("near.1.ab", 0.0), ("far.2.cd", 1000.0)):
        (layout.owners / f"{name}.lock").touch()
        beat = layout.owners / f"{name}.beat"
        beat.touch()
        os.utime(beat, (beat.stat().st_mtime - age,) * 2)
    found = {s.host: s.alive for s in status(layout.root).services}
    assert found == {"near": True, "far": None}
    assert "no sign of life from far (process 2)" in str(status(layout.root))


def test_many_are_shortened(layout: Layout) -> None:
    for number in range(25):
        package(layout.inbox / f"{number}.xlsx")
    assert "and 15 more" in str(status(layout.root))
