"""A few hundred mutated workbooks; the long run is `python -m tests.package.fuzz N`."""

from __future__ import annotations

import random
from pathlib import Path

from tests.package.foreign import plain
from tests.package.fuzz import mutated, tried


def test_every_mutated_workbook_is_served_or_refused(tmp_path: Path) -> None:
    tally = tried(300, 20260301, tmp_path)
    assert sum(tally.values()) == 300
    assert tally["grafted"] >= 30
    assert tally["DamagedWorkbook"] >= 30


def test_mutations_change_something_and_differ(tmp_path: Path) -> None:
    content = plain(tmp_path / "original.xlsx").read_bytes()
    found = {mutated(content, random.Random(seed)) for seed in range(20)}
    assert len(found) >= 19
    assert content not in found
