"""A short series of kills at random moments; the long one is `python -m tests.folder.kills 1000`."""

from __future__ import annotations

from pathlib import Path

from tests.folder.kills import killed


def test_kills_lose_nothing_and_double_nothing(tmp_path: Path) -> None:
    tally = killed(tmp_path / "served", kills=20, seed=3)
    assert len(tally.dropped) > 20
    assert tally.recovered > 0, "no kill met a file in working/, so that nothing was shown"
    assert tally.is_clean, tally.table()
