from __future__ import annotations

import errno
import json
import logging
import threading
import time
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import Any

import pytest

from sheetqc.folder import ServeResult, claims, moves, publish, serve, serving
from sheetqc.folder.layout import Layout
from sheetqc.outcome import Outcome
from tests.folder.standin import answer, content_of, package, summarise

Files = Callable[[], dict[str, list[str]]]
ServeOnce = Callable[..., ServeResult]


def test_makes_what_is_missing(tmp_path: Path) -> None:
    result = serve(tmp_path / "new", answer, once=True, say=lambda _: None)
    assert result == ServeResult(answered=0, returned=0)
    assert {p.name for p in (tmp_path / "new").iterdir()} >= {"in", "working", "answered", "originals", "returned"}


def test_answers_what_is_there(layout: Layout, serve_once: ServeOnce, files: Files, said: list[str]) -> None:
    dropped = package(layout.inbox / "a.xlsx")
    before = dropped.read_bytes()
    assert serve_once() == ServeResult(answered=1, returned=0)
    assert files() == {
        "in": [],
        "working": [],
        "answered": ["a.answered.json", "a.answered.xlsx"],
        "originals": ["a.xlsx"],
        "returned": [],
    }
    assert (layout.originals / "a.xlsx").read_bytes() == before
    assert said == ["a.xlsx: answered. all shown"]
    assert "a.xlsx: answered. all shown" in next(layout.logs.iterdir()).read_text()


def test_subfolders_and_any_names(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    for name in ("sup a/1/b.xlsx", "名前/Ünï ñ.xlsm", "x.y.z.xlsx", "it's #1 100%.xlsx"):
        package(layout.inbox / name)
    assert serve_once().answered == 4
    assert files()["answered"] == sorted(
        [
            "sup a/1/b.answered.json",
            "sup a/1/b.answered.xlsx",
            "名前/Ünï ñ.answered.json",
            "名前/Ünï ñ.answered.xlsm",
            "x.y.z.answered.json",
            "x.y.z.answered.xlsx",
            "it's #1 100%.answered.json",
            "it's #1 100%.answered.xlsx",
        ]
    )
    assert files()["originals"] == sorted(["sup a/1/b.xlsx", "名前/Ünï ñ.xlsm", "x.y.z.xlsx", "it's #1 100%.xlsx"])


def test_a_name_too_long_for_its_results_is_shortened(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    package(layout.root / "p.xlsx").rename(layout.inbox / ("n" * 250 + ".xlsx"))
    assert serve_once().answered == 1
    assert files()["originals"] == ["n" * 195 + ".xlsx"]


def test_same_name_again_both_are_kept(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    for content in ("first", "second", "third"):
        package(layout.inbox / "a.xlsx", content)
        serve_once()
    assert files()["originals"] == ["a (2).xlsx", "a (3).xlsx", "a.xlsx"]
    for stem, content in (("a", "first"), ("a (2)", "second"), ("a (3)", "third")):
        assert content_of(layout.answered / f"{stem}.answered.xlsx") == content
        assert content_of(layout.originals / f"{stem}.xlsx") == content


def test_names_differing_in_case_or_suffix_do_not_share_results(
    layout: Layout, serve_once: ServeOnce, files: Files
) -> None:
    for name in ("a.xlsx", "a.xlsm", "A.xlsx"):
        package(layout.inbox / name, name)
        serve_once()
    assert len(files()["answered"]) == 6
    assert len({p.casefold() for p in files()["answered"]}) == 6


def test_same_content_is_answered_from_the_journal(layout: Layout, serve_once: ServeOnce, said: list[str]) -> None:
    calls: list[str] = []

    def counted(path: Path, into: Path) -> Outcome:
        calls.append(path.name)
        return answer(path, into)

    package(layout.inbox / "a.xlsx", "same")
    package(layout.inbox / "b.xlsx", "same")
    serve_once(counted)
    package(layout.inbox / "c.xlsx", "same")
    assert serve_once(counted).answered == 1
    assert len(calls) == 1
    assert "answered from the journal" in said[-1]
    for stem in "abc":
        assert content_of(layout.answered / f"{stem}.answered.xlsx") == "same"
        assert json.loads((layout.answered / f"{stem}.answered.json").read_bytes())["source"]["name"] == f"{stem}.xlsx"
    repeated = json.loads((layout.answered / "c.answered.json").read_bytes())
    assert repeated["same_content_as"].startswith("answered/")


def test_another_edition_answers_anew(layout: Layout, serve_once: ServeOnce, said: list[str]) -> None:
    for edition in ("1", "2"):
        package(layout.inbox / "a.xlsx", "same")
        serve_once(edition=edition)
    assert not any("journal" in line for line in said)


def test_same_content_of_an_answer_that_was_taken_away(layout: Layout, serve_once: ServeOnce) -> None:
    package(layout.inbox / "a.xlsx", "same")
    serve_once()
    (layout.answered / "a.answered.xlsx").unlink()
    package(layout.inbox / "b.xlsx", "same")
    assert serve_once().answered == 1
    assert content_of(layout.answered / "b.answered.xlsx") == "same"


@pytest.mark.parametrize(
    ("content", "code", "words"),
    [
        (b"%PDF-1.7", "not-a-workbook", "no package"),
        (b"PK\3\4 cut off", "damaged", "no package"),
        (b"", "not-a-workbook", ""),
    ],
)
def test_what_is_no_workbook_is_returned(
    layout: Layout, serve_once: ServeOnce, files: Files, content: bytes, code: str, words: str, monkeypatch: Any
) -> None:
    monkeypatch.setattr(serving, "_ONCE_PATIENCE", 0.2)
    (layout.inbox / "a.xlsx").write_bytes(content)
    assert serve_once() == ServeResult(answered=0, returned=1)
    assert files()["returned"] == ["a.returned.json", "a.xlsx"]
    assert (layout.returned / "a.xlsx").read_bytes() == content
    report = json.loads((layout.returned / "a.returned.json").read_bytes())
    assert report["findings"][0]["code"] == code
    assert report["source"] == {
        "name": "a.xlsx",
        "sha256": moves.sha256(layout.returned / "a.xlsx"),
        "bytes": len(content),
    }
    assert words in report["reason"]
    assert report["advice"] == "Send a workbook."


def test_returned_by_the_answerer(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    package(layout.inbox / "s/a.xlsx", "declined")
    assert serve_once().returned == 1
    assert files()["returned"] == ["s/a.returned.json", "s/a.xlsx"]


def test_an_unexpected_error_is_returned_with_a_log(layout: Layout, serve_once: ServeOnce) -> None:
    package(layout.inbox / "a.xlsx", "fails")
    package(layout.inbox / "b.xlsx")
    assert serve_once() == ServeResult(answered=1, returned=1)
    report = json.loads((layout.returned / "a.returned.json").read_bytes())
    assert report["reason"] == "unexpected error: RuntimeError: an error nobody expected"
    log = (layout.root / report["log"]).read_text()
    assert "a.xlsx" in log
    assert "Traceback" in log


def test_a_full_disk_is_waited_for(layout: Layout, serve_once: ServeOnce, said: list[str]) -> None:
    package(layout.inbox / "a.xlsx", "full")
    assert serve_once().answered == 1
    assert any("No space left" in line for line in said)


def test_a_disk_that_stays_full_ends_in_giving_back(layout: Layout, serve_once: ServeOnce, monkeypatch: Any) -> None:
    monkeypatch.setattr("sheetqc.folder.case._FIRST_PAUSE", 0.01)
    package(layout.inbox / "a.xlsx", "always full")
    result = serve_once()
    assert (result.answered, result.returned) == (0, 0)
    assert "No space left" in result.left[0]
    assert (layout.inbox / "a.xlsx").exists()


def test_trouble_is_tried_again_but_not_for_ever(
    layout: Layout, serve_once: ServeOnce, said: list[str], monkeypatch: Any
) -> None:
    monkeypatch.setattr("sheetqc.folder.case._FIRST_PAUSE", 0.01)
    package(layout.inbox / "a.xlsx", "faulty disk")
    assert serve_once() == ServeResult(answered=0, returned=1)
    assert "Input/output error" in (layout.returned / "a.returned.json").read_text()
    assert any("tried again later" in line for line in said)


def test_an_answer_in_the_wrong_place_is_an_error(layout: Layout, serve_once: ServeOnce, tmp_path: Path) -> None:
    def astray(path: Path, into: Path) -> Outcome:
        return answer(path, tmp_path)

    package(layout.inbox / "a.xlsx")
    assert serve_once(astray).returned == 1
    assert "not where it should be" in (layout.returned / "a.returned.json").read_text()


def test_open_and_own_files_are_left(layout: Layout, serve_once: ServeOnce, files: Files) -> None:
    package(layout.inbox / "a.xlsx")
    (layout.inbox / "~$a.xlsx").touch()
    package(layout.inbox / "b.answered.xlsx")
    result = serve_once()
    assert (result.answered, result.returned) == (0, 0)
    assert len(result.left) == 2
    assert files()["in"] == ["a.xlsx", "b.answered.xlsx", "~$a.xlsx"]


def test_a_file_that_cannot_be_moved_is_tried_again(
    layout: Layout, serve_once: ServeOnce, monkeypatch: Any, said: list[str]
) -> None:
    package(layout.inbox / "a.xlsx")
    take, tries = claims.take, []

    def held(*arguments: Any) -> Any:
        tries.append(1)
        if len(tries) < 3:
            raise PermissionError(errno.EACCES, "The process cannot access the file")
        return take(*arguments)

    monkeypatch.setattr(claims, "take", held)
    assert serve_once().answered == 1
    assert len([line for line in said if "cannot be taken now" in line]) == 1


def test_a_file_that_can_never_be_moved_is_left_when_ending(
    layout: Layout, serve_once: ServeOnce, monkeypatch: Any
) -> None:
    package(layout.inbox / "a.xlsx")

    def held(*_: Any) -> Any:
        raise PermissionError(errno.EACCES, "The process cannot access the file")

    monkeypatch.setattr(claims, "take", held)
    result = serve_once()
    assert result.answered == 0
    assert "cannot access" in result.left[0]


def test_results_that_cannot_be_moved_yet(
    layout: Layout, serve_once: ServeOnce, monkeypatch: Any, files: Files
) -> None:
    package(layout.inbox / "a.xlsx")
    move, failures = moves.move, []

    def full(source: Path, target: Path) -> None:
        if target.suffix == ".json" and len(failures) < 3:
            failures.append(1)
            raise OSError(errno.ENOSPC, "No space left on device")
        move(source, target)

    monkeypatch.setattr("sheetqc.folder.publish.move", full)
    assert serve_once().answered == 1
    assert files()["answered"] == ["a.answered.json", "a.answered.xlsx"]
    assert len(failures) == 3


def test_a_file_written_to_while_it_is_answered_goes_back(
    layout: Layout, serve_once: ServeOnce, files: Files, said: list[str]
) -> None:
    again = []

    def disturbed(path: Path, into: Path) -> Outcome:
        outcome = answer(path, into)
        if not again:
            again.append(1)
            package(path, "the content at last")
        return outcome

    package(layout.inbox / "a.xlsx", "a first part")
    assert serve_once(disturbed).answered == 1
    assert content_of(layout.answered / "a.answered.xlsx") == "the content at last"
    assert any("still being written" in line for line in said)
    assert files()["originals"] == ["a.xlsx"]


def test_deadly_and_endless_files_are_returned(layout: Layout, said: list[str]) -> None:
    package(layout.inbox / "bad.xlsx", "deadly")
    package(layout.inbox / "long.xlsx", "endless")
    for number in range(4):
        package(layout.inbox / f"good {number}.xlsx")
    result = serve(layout.root, answer, once=True, workers=2, settle=0.02, say=said.append, seconds=2.0)
    assert result == ServeResult(answered=4, returned=2)
    assert "3 times" in (layout.returned / "bad.returned.json").read_text()
    assert "within 2 seconds" in (layout.returned / "long.returned.json").read_text()


def broken_start() -> None:
    raise RuntimeError("no worker will ever start")


def test_workers_that_cannot_start_are_not_the_files_fault(layout: Layout, said: list[str], monkeypatch: Any) -> None:
    monkeypatch.setattr("sheetqc.folder.case._FIRST_PAUSE", 0.01)
    monkeypatch.setattr("sheetqc.folder.case.MOST_TROUBLES", 2)
    monkeypatch.setattr("sheetqc.folder.desk.MOST_TROUBLES", 2)
    logging.getLogger("concurrent.futures").disabled = True
    package(layout.inbox / "a.xlsx")
    result = serve(layout.root, answer, once=True, settle=0.02, say=said.append, warm=broken_start)
    logging.getLogger("concurrent.futures").disabled = False
    assert (result.answered, result.returned) == (0, 0)
    assert "no worker can be started" in result.left[0]
    assert (layout.inbox / "a.xlsx").exists()


def test_an_error_in_the_service_itself_loses_nothing(
    layout: Layout, serve_once: ServeOnce, said: list[str], monkeypatch: Any
) -> None:
    package(layout.inbox / "a.xlsx")
    decided, tries = publish.decided, []

    def faulty(*arguments: Any) -> Any:
        tries.append(1)
        if len(tries) < 3:
            raise ZeroDivisionError("a mistake of ours")
        return decided(*arguments)

    monkeypatch.setattr(publish, "decided", faulty)
    assert serve_once().answered == 1
    assert any("a mistake of ours" in line for line in said)
    assert "Traceback" in next(layout.logs.iterdir()).read_text()


def test_an_error_that_stays_loses_nothing(
    layout: Layout, serve_once: ServeOnce, files: Files, monkeypatch: Any
) -> None:
    monkeypatch.setattr(serving, "_SWEEP", 0.01)
    monkeypatch.setattr("sheetqc.folder.desk.MOST_TRIES", 3)
    package(layout.inbox / "a.xlsx")

    def faulty(*_: Any) -> Any:
        raise ZeroDivisionError("a mistake of ours")

    with monkeypatch.context() as patch:
        patch.setattr(publish, "decided", faulty)
        result = serve_once()
    assert result == ServeResult(answered=0, returned=0, left=("a.xlsx: stays in working/ until the next start",))
    monkeypatch.setattr("sheetqc.folder.desk.MOST_TRIES", 25)
    assert serve_once().answered == 1
    assert files()["originals"] == ["a.xlsx"]


def test_summary_after_answers(layout: Layout, serve_once: ServeOnce) -> None:
    package(layout.inbox / "a.xlsx")
    package(layout.inbox / "b.xlsx")
    serve_once(after=summarise)
    assert (layout.root / "summary.txt").read_text() == "2"
    assert not layout.due.exists()


def test_summary_that_a_kill_prevented(layout: Layout, serve_once: ServeOnce) -> None:
    package(layout.inbox / "a.xlsx")
    serve_once()
    assert layout.due.exists()
    serve_once(after=summarise)
    assert (layout.root / "summary.txt").read_text() == "1"


def test_a_failing_summary_stops_nothing(
    layout: Layout, serve_once: ServeOnce, said: list[str], monkeypatch: Any
) -> None:
    monkeypatch.setattr("sheetqc.folder.summary._FIRST_PAUSE", 0.01)

    def failing(_: Path) -> None:
        raise PermissionError(13, "the file is open")

    package(layout.inbox / "a.xlsx")
    assert serve_once(after=failing).answered == 1
    assert layout.due.exists()
    assert any("the file is open" in line for line in said)


class Running:
    """A service in a thread of this process."""

    def __init__(self, layout: Layout, **options: Any) -> None:
        self.stop = threading.Event()
        self.said: list[str] = []
        self.result: ServeResult | None = None
        settings: dict[str, Any] = {"settle": 0.05, "executor": lambda: ThreadPoolExecutor(1), **options}

        def run() -> None:
            self.result = serve(layout.root, answer, stop=self.stop, say=self.said.append, **settings)

        self._thread = threading.Thread(target=run)
        self._thread.start()

    def end(self) -> ServeResult:
        self.stop.set()
        self._thread.join(30)
        assert self.result is not None
        return self.result


@pytest.fixture
def running(layout: Layout) -> Iterator[Callable[..., Running]]:
    services: list[Running] = []

    def start(**options: Any) -> Running:
        services.append(Running(layout, **options))
        return services[-1]

    yield start
    for service in services:
        service.stop.set()
        service._thread.join(30)


def _await(condition: Callable[[], bool], seconds: float = 20.0) -> float:
    start = time.monotonic()
    while not condition():
        assert time.monotonic() - start < seconds, "nothing happened"
        time.sleep(0.01)
    return time.monotonic() - start


@pytest.mark.parametrize("polling", [False, True])
def test_serves_until_stopped(layout: Layout, running: Callable[..., Running], polling: bool) -> None:
    service = running(polling=polling)
    for name in ("a.xlsx", "new folder/b.xlsx", "c.xlsx"):
        package(layout.inbox / name)
        report = layout.answered / name.replace(".xlsx", ".answered.json")
        _await(report.exists)
    assert service.end() == ServeResult(answered=3, returned=0)


def test_pick_up_within_a_second(layout: Layout, running: Callable[..., Running]) -> None:
    service = running(settle=serving.SETTLE)
    _await(lambda: bool(service.said))
    times = []
    for number in range(3):
        time.sleep(0.3)
        package(layout.inbox / f"{number}.xlsx")
        times.append(_await((layout.answered / f"{number}.answered.json").exists))
    assert sorted(times)[1] < 1.0  # the machine may be busy with something else once


def test_stopping_gives_back_what_was_not_begun(layout: Layout, running: Callable[..., Running], files: Files) -> None:
    for number in range(6):
        package(layout.inbox / f"{number}.xlsx", f"slow {number}")
    service = running()
    _await(lambda: bool(list(layout.working.glob("*/answer-*"))))
    result = service.end()
    assert 1 <= result.answered < 6
    state = files()
    assert len(state["originals"]) == result.answered
    assert len(state["in"]) == 6 - result.answered
    assert state["working"] == []


def test_two_services_share_one_folder(layout: Layout, running: Callable[..., Running], files: Files) -> None:
    services = [running(), running()]
    for number in range(30):
        package(layout.inbox / f"{number}.xlsx")
    _await(lambda: len(files()["originals"]) == 30)
    results = [service.end() for service in services]
    assert sum(r.answered for r in results) == 30
    assert len(files()["answered"]) == 60


@pytest.mark.parametrize("polling", [False, True])
def test_a_vanished_folder_is_survived(layout: Layout, running: Callable[..., Running], polling: bool) -> None:
    service = running(polling=polling)
    package(layout.inbox / "a.xlsx")
    _await((layout.answered / "a.answered.json").exists)
    away = layout.root.with_name("away")
    _await(lambda: not any(layout.working.iterdir()))
    layout.root.rename(away)
    _await(lambda: any("cannot be used now" in line for line in service.said))
    assert not layout.inbox.exists()
    if layout.root.exists():
        layout.root.rename(layout.root.with_name("made meanwhile"))
    package(away / "in" / "b.xlsx")
    away.rename(layout.root)
    _await((layout.answered / "b.answered.json").exists)
    assert service.end().answered == 2


def test_a_place_that_was_deleted_is_made_again(layout: Layout, running: Callable[..., Running]) -> None:
    running(polling=True)
    _await(layout.answered.exists)
    layout.answered.rmdir()
    package(layout.inbox / "a.xlsx")
    _await((layout.answered / "a.answered.json").exists)
