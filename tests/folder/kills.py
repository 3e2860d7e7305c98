"""Kills services at random moments while bursts of files arrive, and counts what was lost, doubled or half-written.

python -m tests.folder.kills 1000 [SEED]
"""

from __future__ import annotations

import json
import os
import random
import signal
import subprocess
import sys
import tempfile
import time
import zipfile
from collections import Counter
from contextlib import suppress
from dataclasses import dataclass, field
from pathlib import Path

from sheetqc.folder import serve
from tests.folder.standin import answer, content_of, package, summarise

ROOT = Path(__file__).parents[2]
KILL = getattr(signal, "SIGKILL", signal.SIGTERM)  # on Windows SIGTERM ends a process at once too


@dataclass
class Tally:
    """What a series of kills has shown."""

    kills: int = 0
    worker_kills: int = 0
    dropped: set[str] = field(default_factory=set)
    broken: list[str] = field(default_factory=list)
    lost: list[str] = field(default_factory=list)
    doubled: list[str] = field(default_factory=list)
    left: list[str] = field(default_factory=list)
    recovered: int = 0
    under_fire: int = 0

    @property
    def is_clean(self) -> bool:
        return not (self.broken or self.lost or self.doubled or self.left)

    def table(self) -> str:
        lines = {
            "services killed": self.kills,
            "workers killed": self.worker_kills,
            "files dropped": len(self.dropped),
            "times a kill caught a file in working/": self.recovered,
            "answered between kills": self.under_fire,
            "lost": len(self.lost),
            "answered twice": len(self.doubled),
            "half-written files seen": len(self.broken),
            "left in in/ or working/ at the end": len(self.left),
        }
        return "\n".join(f"{name:<42}{count:>7}" for name, count in lines.items())


def killed(folder: Path, kills: int, seed: int) -> Tally:
    """The tally of so many kills in a folder."""
    rng, tally = random.Random(seed), Tally()
    pids = folder / "pids"
    pids.mkdir(parents=True)
    while tally.kills < kills:
        services = [_service(folder, pids, 1 + (tally.kills + n) % 2) for n in range(1 + (rng.random() < 0.2))]
        try:
            _burst(folder, rng, tally)
            if rng.random() < 0.5:
                _await_an_answer(folder)  # on a busy machine chance alone would seldom meet a service at work
            time.sleep(rng.uniform(0.0, 1.0))
            _burst(folder, rng, tally)
            if rng.random() < 0.5:
                tally.worker_kills += _kill_a_worker(pids, rng)
            time.sleep(rng.uniform(0.0, 0.8))
        finally:
            for service in services:
                service.kill()
                service.wait()
        tally.kills += len(services)
        tally.recovered += sum(1 for _ in (folder / "working").glob("*/file/*"))
        _check_visible(folder, tally)
        for stale in pids.iterdir():  # their processes end with the service; the numbers may come to mean others
            stale.unlink()
    tally.under_fire = _answers(folder)
    serve(folder, answer, once=True, workers=2, say=lambda _: None, after=summarise)
    _check_visible(folder, tally)
    _check_end(folder, tally)
    return tally


def _service(folder: Path, pids: Path, workers: int) -> subprocess.Popen[bytes]:
    command = [sys.executable, "-m", "tests.folder.run_service", str(folder), str(workers)]
    environment = {**os.environ, "STANDIN_PIDS": str(pids)}
    return subprocess.Popen(command, cwd=ROOT, env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)


def _await_an_answer(folder: Path, seconds: float = 5.0) -> None:
    """Wait until one more answer is there, for so long at most."""
    end, before = time.monotonic() + seconds, _answers(folder)
    while (
        any(p.is_file() for p in (folder / "in").rglob("*")) and _answers(folder) == before and time.monotonic() < end
    ):
        time.sleep(0.01)


def _answers(folder: Path) -> int:
    return sum(1 for _ in (folder / "answered").rglob("*.answered.json"))


def _burst(folder: Path, rng: random.Random, tally: Tally) -> None:
    for _ in range(rng.randint(0, 3)):
        content = f"number {len(tally.dropped)}" + (" slow" if rng.random() < 0.15 else "")
        tally.dropped.add(content)
        name = rng.choice(["study.xlsx", "study.xlsm", f"study {len(tally.dropped)}.xlsx"])
        target = folder / "in" / rng.choice(["", "supplier a", "supplier b"]) / name
        if target.exists():
            target = target.with_name(f"again {len(tally.dropped)}{target.suffix}")
        package(target, content, size=rng.choice([100, 20_000]))


def _kill_a_worker(pids: Path, rng: random.Random) -> int:
    found = [p for p in pids.iterdir() if p.name.isdigit()]
    if not found:
        return 0
    chosen = rng.choice(found)
    with suppress(OSError):
        chosen.unlink()
        os.kill(int(chosen.name), KILL)
        return 1
    return 0


def _check_visible(folder: Path, tally: Tally) -> None:
    """Whatever stands in the places of results must be whole, at any moment."""
    for place in ("answered", "originals", "returned"):
        for path in (folder / place).rglob("*"):
            if not path.is_file():
                continue
            try:
                if path.suffix == ".json":
                    json.loads(path.read_bytes())
                else:
                    with zipfile.ZipFile(path) as book:
                        assert book.testzip() is None
            except (ValueError, zipfile.BadZipFile, AssertionError):
                tally.broken.append(str(path))


def _check_end(folder: Path, tally: Tally) -> None:
    books = list((folder / "answered").rglob("*.answered.xls*"))
    originals = [p for p in (folder / "originals").rglob("*") if p.is_file()]
    for paths in (books, originals):
        counts = Counter(content_of(p) for p in paths)
        tally.lost += sorted(tally.dropped - counts.keys())
        tally.doubled += [content for content, count in counts.items() if count > 1]
    reports = {p.with_suffix("").name + str(p.parent) for p in (folder / "answered").rglob("*.answered.json")}
    tally.lost += [str(p) for p in books if p.with_suffix("").name + str(p.parent) not in reports]
    for place in ("in", "working"):
        tally.left += [str(p) for p in (folder / place).rglob("*") if p.is_file()]


def main() -> int:
    """Kill as often as asked and print the table."""
    kills, seed = int(sys.argv[1]), int(sys.argv[2]) if len(sys.argv) > 2 else 1
    with tempfile.TemporaryDirectory() as place:
        tally = killed(Path(place) / "served", kills, seed)
        print(tally.table())
        for name in ("lost", "doubled", "broken", "left"):
            for line in getattr(tally, name)[:20]:
                print(f"{name}: {line}")
    return 0 if tally.is_clean else 1


if __name__ == "__main__":
    sys.exit(main())
