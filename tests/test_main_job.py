"""The main job, from a dropped workbook to its answered copy, on every example workbook."""

from __future__ import annotations

import hashlib
import json
import re
import shutil
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

import sheetqc
from tests.examples import scenario
from tests.examples.make import EXAMPLES, FOLDER
from tests.office import converted, differences, office, opened
from tests.package.packages import changed, contents

LISTS = {"[Content_Types].xml", "xl/workbook.xml", "xl/_rels/workbook.xml.rels", "xl/styles.xml"}
"""Parts that have to name the new sheets and their formats; every other part keeps its bytes."""

INTENDED: dict[str, dict[str, str]] = {
    "shaft.xlsx": {"D12": "shown", "RO3": "shown", "RA2": "likely"},
    "seal-ring.xlsx": {"FL1": "not met", "H2": "likely"},
    "pump-housing.xlsx": {"B35": "no verdict", "T6": "not met"},
    "shaft-seal-leak.xlsx": {"LK1": "likely"},
    "burst-pressure.xlsx": {"BP1": "doubtful"},
    "impeller-two-cavities.xlsx": {"OD1": "no verdict", "M2": "shown"},
    "shaft-sleeve-claim.xlsx": {"CT1": "not met"},
    "bearing-bush-own-style.xlsx": {"D31": "likely", "L7": "likely"},
    "wear-ring-macros.xlsm": {"W4": "likely"},
    "cover-plate-first-samples.xlsx": {"FL5": "no verdict", "T8": "no verdict"},
    "coupling-hub-release.xlsx": {"D12": "shown", "BR1": "doubtful"},
}
"""The verdict that each characteristic's true capability and its number of values lead to."""

RETURNED = "gasket-summary-only.xlsx"
RELEASE = "coupling-hub-release.xlsx"
ANSWERED = list(INTENDED)
STATES = {"shown", "likely", "doubtful", "not met", "no verdict"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Answers:
    """The folder of answers and the run that made them."""

    folder: Path
    run: subprocess.CompletedProcess[str]

    def copy(self, name: str) -> Path:
        """The answered copy of an example."""
        return self.folder / f"{Path(name).stem}.answered{Path(name).suffix}"

    def document(self, name: str) -> dict[str, Any]:
        """The JSON answer to an example."""
        return document(self.folder / f"{Path(name).stem}.answered.json")

    def characteristic(self, name: str, identity: str) -> dict[str, Any]:
        """The object of one characteristic."""
        return next(c for c in self.document(name)["characteristics"] if c["id"] == identity)

    def characteristics(self) -> Iterator[dict[str, Any]]:
        """The objects of all characteristics of all examples."""
        for name in ANSWERED:
            yield from self.document(name)["characteristics"]


def document(path: Path) -> dict[str, Any]:
    """A JSON file that holds nothing JSON does not know."""

    def refuse(constant: str) -> None:
        raise AssertionError(f"{constant} is no JSON")

    return json.loads(path.read_text(encoding="utf-8"), parse_constant=refuse)


def command(*arguments: str | Path) -> subprocess.CompletedProcess[str]:
    """Runs the command in a process of its own."""
    line = [sys.executable, "-m", "sheetqc", *map(str, arguments)]
    return subprocess.run(line, capture_output=True, text=True, encoding="utf-8", timeout=500)


def digests(folder: Path) -> dict[str, str]:
    return {p.name: hashlib.sha256(p.read_bytes()).hexdigest() for p in sorted(folder.iterdir()) if p.is_file()}


@pytest.fixture(scope="module")
def dropped(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The examples in a folder of their own."""
    folder = tmp_path_factory.mktemp("dropped")
    for name, _ in EXAMPLES:
        shutil.copy2(FOLDER / name, folder / name)
    return folder


@pytest.fixture(scope="module")
def answers(dropped: Path, tmp_path_factory: pytest.TempPathFactory) -> Answers:
    folder = tmp_path_factory.mktemp("answers")
    return Answers(folder=folder, run=command("answer", dropped, "--into", folder))


def test_every_example_has_an_intention() -> None:
    assert {*INTENDED, RETURNED} == {name for name, _ in EXAMPLES}
    assert {state for states in INTENDED.values() for state in states.values()} == STATES


def test_all_are_answered_but_the_one_that_has_nothing_to_answer(answers: Answers) -> None:
    assert answers.run.returncode == 1
    assert "Traceback" not in answers.run.stderr
    assert len(answers.run.stderr.splitlines()) == 1
    assert RETURNED in answers.run.stderr
    expected = {f"{Path(RETURNED).stem}.returned.json"}
    for name in ANSWERED:
        expected |= {answers.copy(name).name, f"{Path(name).stem}.answered.json"}
    assert {p.name for p in answers.folder.iterdir()} == expected


def test_the_dropped_workbooks_are_untouched(answers: Answers, dropped: Path) -> None:
    kept = {name: digest for name, digest in digests(FOLDER).items() if name in {n for n, _ in EXAMPLES}}
    assert digests(dropped) == kept


def test_the_returned_one_says_why(answers: Answers) -> None:
    found = document(answers.folder / f"{Path(RETURNED).stem}.returned.json")
    assert found["findings"][0]["code"] == "nothing-to-answer"
    assert "qc:measurements" in found["reason"]


@pytest.mark.parametrize("name", ANSWERED)
def test_the_verdicts_are_as_intended(name: str, answers: Answers) -> None:
    found = answers.document(name)
    assert {c["id"]: c["verdict"]["state"] for c in found["characteristics"]} == INTENDED[name]


def test_each_verdict_follows_from_its_index_and_bounds(answers: Answers) -> None:
    for found in answers.characteristics():
        verdict = found["verdict"]
        assert verdict["reasons"]
        if verdict["state"] == "no verdict":
            continue
        index, required = found["indices"][verdict["index"]], verdict["requirement"]
        assert index["lower"] <= index["estimate"] <= index["upper"]
        if index["lower"] >= required:
            assert verdict["state"] == "shown"
        elif index["estimate"] >= required:
            assert verdict["state"] == "likely"
        else:
            assert verdict["state"] == ("doubtful" if required <= index["upper"] else "not met")


TOP = {"schema", "tool", "source", "study", "characteristics", "counts", "findings"}
OF_A_CHARACTERISTIC = {
    "id", "name", "unit", "limits", "count", "left_out", "censored", "subgroups", "summary", "normality", "models",
    "model_in_use", "model_reason", "indices", "nonconforming", "stability", "gauge", "verdict", "findings",
}  # fmt: skip


@pytest.mark.parametrize("name", ANSWERED)
def test_the_json_has_the_shape_that_others_rely_on(name: str, answers: Answers, dropped: Path) -> None:
    found = answers.document(name)
    assert set(found) >= TOP
    assert found["tool"]["name"] == "sheetqc"
    assert found["source"]["sha256"] == digests(dropped)[name]
    assert found["source"]["bytes"] == (dropped / name).stat().st_size
    for characteristic in found["characteristics"]:
        assert set(characteristic) >= OF_A_CHARACTERISTIC
        assert set(characteristic["indices"]) == {"Pp", "Ppk", "Cp", "Cpk", "Cpm"}
        assert set(characteristic["normality"]) == {"anderson_darling", "shapiro_wilk", "ppcc"}
        assert {"lower", "upper", "nominal", "natural_lower", "natural_upper"} <= set(characteristic["limits"])
        families = [m["family"] for m in characteristic["models"]]
        assert characteristic["model_in_use"] in families
        assert len(set(families)) == len(families)
        for finding in characteristic["findings"]:
            assert finding["level"] in ("note", "caution", "stop")
            assert all(re.fullmatch(r"'.+'![A-Z]+[0-9]+", cell) for cell in finding["cells"])


def test_readings_left_out_are_counted_and_told(answers: Answers) -> None:
    found = answers.characteristic("shaft-seal-leak.xlsx", "LK1")
    assert (found["count"], found["left_out"]) == (120, 4)
    told = next(f for f in found["findings"] if f["code"] == "left-out")
    assert "Master leak" in told["text"]
    assert len(told["cells"]) == 4


def test_the_moved_bore_is_called_unsteady_and_the_depth_is_not(answers: Answers) -> None:
    assert answers.characteristic("pump-housing.xlsx", "B35")["stability"]["stable"] is False
    assert answers.characteristic("pump-housing.xlsx", "T6")["stability"]["stable"] is True


def test_the_two_cavities_are_told_apart(answers: Answers) -> None:
    diameter = answers.characteristic("impeller-two-cavities.xlsx", "OD1")
    assert "Cavity 1" in diameter["verdict"]["reasons"][0]
    mass = answers.characteristic("impeller-two-cavities.xlsx", "M2")
    assert [f["code"] for f in mass["findings"] if f["code"].startswith("streams")] == ["streams-alike"]


def test_subgroups_are_found_by_column_and_by_size(answers: Answers) -> None:
    assert answers.characteristic("shaft.xlsx", "D12")["subgroups"] == {"count": 25, "size": 5}
    assert answers.characteristic("wear-ring-macros.xlsm", "W4")["subgroups"] == {"count": 25, "size": 4}
    assert answers.characteristic("seal-ring.xlsx", "H2")["subgroups"] == {"count": None, "size": None}


def test_a_limit_on_one_side_gives_no_index_of_the_width(answers: Answers) -> None:
    for name, identity in (("burst-pressure.xlsx", "BP1"), ("seal-ring.xlsx", "FL1")):
        indices = answers.characteristic(name, identity)["indices"]
        assert indices["Pp"] is None or indices["Pp"]["estimate"] is None
        assert indices["Ppk"]["estimate"] is not None


def test_the_python_call_gives_the_same_as_the_workbook(answers: Answers) -> None:
    asked = scenario.seal_ring()
    values = [float(v) for v in asked.columns["FL1"] if isinstance(v, float)]
    found = sheetqc.assess(values, upper=0.9, natural_lower=0.0, kind="flatness", resolution=0.01).to_dict()
    written = answers.characteristic("seal-ring.xlsx", "FL1")
    for part in ("count", "summary", "normality", "models", "model_in_use", "indices", "nonconforming"):
        assert found[part] == written[part], part
    assert found["verdict"]["state"] == written["verdict"]["state"]  # type: ignore[index]


@pytest.mark.parametrize("name", ANSWERED)
def test_every_part_of_the_original_is_in_the_copy(name: str, answers: Answers, dropped: Path) -> None:
    assert changed(dropped / name, answers.copy(name)) <= LISTS


@pytest.mark.parametrize("name", ANSWERED)
def test_the_old_sheets_come_first_and_the_answer_follows(name: str, answers: Answers, dropped: Path) -> None:
    before, after = opened(dropped / name), opened(answers.copy(name))
    assert after.sheetnames[: len(before.sheetnames)] == before.sheetnames
    assert len(after.sheetnames) >= len(before.sheetnames) + 1 + len(INTENDED[name])
    for sheet in before.worksheets:
        assert after[sheet.title].sheet_state == sheet.sheet_state
    assert after.active.title == before.active.title
    charts = [len(after[title]._charts) for title in after.sheetnames[len(before.sheetnames) :]]
    assert sum(charts) >= 4 * len(INTENDED[name])


def test_macros_stay_what_and_where_they_are(answers: Answers, dropped: Path) -> None:
    name = "wear-ring-macros.xlsm"
    part = "xl/vbaProject.bin"
    assert contents(answers.copy(name))[part] == contents(dropped / name)[part]
    kind = b"application/vnd.ms-excel.sheet.macroEnabled.main+xml"
    assert kind in contents(answers.copy(name))["[Content_Types].xml"]


STORED = 5e-11
"""Stored values of formulas are written with 11 significant digits: off by half a unit of the last at most."""


def named_value(name: str, book: Any) -> Any:
    """The value of the one cell that a defined name stands for."""
    ((title, address),) = book.defined_names[name].destinations
    return book[title][address.replace("$", "")].value


@pytest.mark.parametrize("name", ANSWERED)
def test_defined_names_lead_to_the_numbers_of_the_json(name: str, answers: Answers) -> None:
    book = opened(answers.copy(name), data_only=True)
    for found in answers.document(name)["characteristics"]:
        ppk = found["indices"]["Ppk"]
        stem = f"qc.{found['id']}"
        assert named_value(f"{stem}.Verdict", book) == found["verdict"]["state"]
        assert named_value(f"{stem}.Ppk", book) == pytest.approx(ppk["estimate"], rel=STORED)
        assert named_value(f"{stem}.Ppk_lower", book) == pytest.approx(ppk["lower"], rel=STORED)


def test_the_same_workbook_gets_the_same_answer(answers: Answers, dropped: Path, tmp_path: Path) -> None:
    chosen = [dropped / "shaft.xlsx", dropped / "burst-pressure.xlsx", dropped / "wear-ring-macros.xlsm"]
    again = command("answer", *chosen, "--into", tmp_path, "--workers", "2")
    assert again.returncode == 0
    for path in chosen:
        report = f"{path.stem}.answered.json"
        assert (tmp_path / report).read_bytes() == (answers.folder / report).read_bytes()
        copy = answers.copy(path.name)
        assert contents(tmp_path / copy.name) == contents(copy)


def test_the_register_lists_every_characteristic(answers: Answers, tmp_path: Path) -> None:
    done = command("register", answers.folder, "--into", tmp_path / "register.xlsx")
    assert done.returncode == 0
    assert done.stderr == ""
    expected = set()
    for name in ANSWERED:
        found = answers.document(name)
        expected |= {(found["study"]["part_number"], c["id"], c["verdict"]["state"]) for c in found["characteristics"]}
    assert judged_rows(tmp_path / "register.xlsx") == expected
    assert RETURNED in all_texts(tmp_path / "register.xlsx")


def judged_rows(path: Path) -> set[tuple[str, str, str]]:
    """Part, Id and verdict of each row of the register; a verdict stands behind its sign."""
    rows = list(opened(path, data_only=True)["Characteristics"].iter_rows(values_only=True))
    heading = next(row for row in rows if "Verdict" in row)
    places = [heading.index(name) for name in ("Part", "Id", "Verdict")]
    cells = [tuple(str(row[place]) for place in places) for row in rows[rows.index(heading) + 1 :]]
    return {(part, identity, verdict.partition(" ")[2]) for part, identity, verdict in cells if verdict != "None"}


def all_texts(path: Path) -> set[str]:
    """Every text of a workbook."""
    book = opened(path, data_only=True)
    rows = (row for sheet in book.worksheets for row in sheet.iter_rows(values_only=True))
    return {value for row in rows for value in row if isinstance(value, str)}


def test_a_served_folder_answers_what_was_dropped_once(answers: Answers, dropped: Path, tmp_path: Path) -> None:
    served = tmp_path / "served"
    chosen = ["shaft-sleeve-claim.xlsx", "wear-ring-macros.xlsm", RETURNED]
    (served / "in").mkdir(parents=True)
    for name in chosen:
        shutil.copy2(dropped / name, served / "in" / name)
    first = command("watch", served, "--once")
    assert first.returncode == 1, first.stderr
    assert digests(served / "in") == {}
    originals = {name: digest for name, digest in digests(dropped).items() if name in chosen}
    assert digests(served / "originals") == {n: d for n, d in originals.items() if n != RETURNED}
    assert digests(served / "returned")[RETURNED] == originals[RETURNED]
    assert set(digests(served / "returned")) == {RETURNED, f"{Path(RETURNED).stem}.returned.json"}
    for name in chosen[:2]:
        report = f"{Path(name).stem}.answered.json"
        assert document(served / "answered" / report) == answers.document(name)
        assert changed(dropped / name, served / "answered" / answers.copy(name).name) <= LISTS
    assert {"CT1", "W4", RETURNED} <= all_texts(served / "register.xlsx")
    before = {folder: digests(served / folder) for folder in ("answered", "originals", "returned")}
    assert command("watch", served, "--once").returncode == 0
    assert {folder: digests(served / folder) for folder in before} == before


@pytest.fixture(scope="module")
def computed(answers: Answers, tmp_path_factory: pytest.TempPathFactory) -> dict[str, Path]:
    """The answered copies as LibreOffice saves them after computing every formula."""
    books = [answers.copy(name) for name in ANSWERED]
    return dict(zip(ANSWERED, converted(books, "xlsx", tmp_path_factory.mktemp("office")), strict=True))


@office
@pytest.mark.parametrize("name", ANSWERED)
def test_every_stored_value_is_what_its_formula_gives(name: str, answers: Answers, computed: dict[str, Path]) -> None:
    count, wrong = differences(answers.copy(name), computed[name])
    waiting = [line for line in wrong if name == RELEASE and line.startswith("Release!")]
    assert [line for line in wrong if line not in waiting] == []
    assert count > 100 * len(INTENDED[name])


@office
def test_the_answer_fills_the_form_that_waited_for_it(answers: Answers, computed: dict[str, Path]) -> None:
    sheet = opened(computed[RELEASE], data_only=True)["Release"]
    for row, found in enumerate(answers.document(RELEASE)["characteristics"], start=4):
        shown = [sheet.cell(row, column).value for column in (2, 3, 4)]
        ppk = found["indices"]["Ppk"]
        assert shown[:2] == pytest.approx([ppk["estimate"], ppk["lower"]], rel=1e-9)
        assert shown[2] == found["verdict"]["state"]
