from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

from sheetqc.folder import owners
from sheetqc.folder.layout import Layout
from sheetqc.folder.owners import Neighbours, Owner, host_of, lock_state, pid_of, this_host

HOLD = """
import sys, time
from pathlib import Path
from sheetqc.folder.layout import Layout
from sheetqc.folder.owners import Owner
with Owner(Layout(Path(sys.argv[1]))) as owner:
    print(owner.name, flush=True)
    time.sleep(60)
"""


def test_name_tells_machine_and_process(layout: Layout) -> None:
    with Owner(layout) as owner:
        assert host_of(owner.name) == this_host()
        assert pid_of(owner.name) == str(os.getpid())


def test_lives_while_it_runs(layout: Layout) -> None:
    with Owner(layout) as one, Owner(layout) as two:
        assert not Neighbours(one).is_dead(two.name)
        assert not Neighbours(two).is_dead(one.name)
        assert not Neighbours(one).is_dead(one.name)
    with Owner(layout) as three:
        assert Neighbours(three).is_dead(one.name)
    assert list(layout.owners.iterdir()) == []


def test_a_killed_process_is_dead_at_once(layout: Layout) -> None:
    process = subprocess.Popen([sys.executable, "-c", HOLD, str(layout.root)], stdout=subprocess.PIPE, text=True)
    assert process.stdout is not None
    name = process.stdout.readline().strip()
    with Owner(layout) as owner:
        neighbours = Neighbours(owner)
        assert not neighbours.is_dead(name)
        process.kill()
        process.communicate()
        assert neighbours.is_dead(name)
        neighbours.forget()
        assert {p.stem for p in layout.owners.iterdir()} == {owner.name}


def _elsewhere(layout: Layout, age: float) -> str:
    """Signs of a service on another machine whose lock does not show, its last beat `age` seconds ago."""
    name = "elsewhere.12.abcd"
    (layout.owners / f"{name}.lock").touch()
    beat = layout.owners / f"{name}.beat"
    beat.touch()
    os.utime(beat, (time.time() - age, time.time() - age))
    return name


def test_another_machine_is_dead_when_its_beat_stood_still(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    name = _elsewhere(layout, age=100)
    clock = [1000.0]
    with Owner(layout) as owner:
        monkeypatch.setattr(owners.time, "monotonic", lambda: clock[0])
        neighbours = Neighbours(owner)
        assert not neighbours.is_dead(name)  # a beat that looks old may be a clock that was set
        clock[0] += 10
        assert not neighbours.is_dead(name)
        clock[0] += 10
        assert neighbours.is_dead(name)


def test_another_machine_lives_while_it_beats(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    name = _elsewhere(layout, age=1000)
    clock = [1000.0]
    with Owner(layout) as owner:
        monkeypatch.setattr(owners.time, "monotonic", lambda: clock[0])
        neighbours = Neighbours(owner)
        for beat in range(20):  # its clock is far behind, but its beats go on
            clock[0] += 10
            os.utime(layout.owners / f"{name}.beat", (1e9 + beat, 1e9 + beat))
            assert not neighbours.is_dead(name)


def test_a_fresh_beat_of_another_machine(layout: Layout, monkeypatch: pytest.MonkeyPatch) -> None:
    name = _elsewhere(layout, age=10)
    clock = [1000.0]
    with Owner(layout) as owner:
        monkeypatch.setattr(owners.time, "monotonic", lambda: clock[0])
        neighbours = Neighbours(owner)
        for _ in range(10):
            assert not neighbours.is_dead(name)
            clock[0] += 10


def test_lock_states(tmp_path: Path) -> None:
    assert lock_state(tmp_path / "none.lock") == "missing"
    (tmp_path / "free.lock").touch()
    assert lock_state(tmp_path / "free.lock") == "free"
    (tmp_path / "odd.lock").write_bytes(b"no database at all, but text" * 100)
    assert lock_state(tmp_path / "odd.lock") in ("free", "unknown")


def test_signs_that_were_deleted_come_back(layout: Layout) -> None:
    with Owner(layout) as owner:
        (layout.owners / f"{owner.name}.beat").unlink()
        assert owner.share_clock() is None
        (layout.owners / f"{owner.name}.lock").unlink()
        owner.beat()
        assert lock_state(layout.owners / f"{owner.name}.lock") == "held"
        assert owner.share_clock() == pytest.approx(time.time(), abs=5)
