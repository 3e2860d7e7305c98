"""The corridor: one workbook through all the rooms, and nothing else."""

from __future__ import annotations

import hashlib
import json
import os
import tempfile
import traceback
from dataclasses import replace
from pathlib import Path

from sheetqc import intake, judgement, package, sheets
from sheetqc.answer_json import answer_object, source_object, tool_object
from sheetqc.assessment import SCHEMA, Answer
from sheetqc.errors import CannotGraft, MissingWorkbook, UnforeseenTrouble, WorkbookError
from sheetqc.finding import Finding
from sheetqc.outcome import Outcome
from sheetqc.study import Source, Study

GRAFTABLE = (".xlsx", ".xlsm", ".xltx", ".xltm")
"""Endings of workbooks that new sheets can be added to."""


def answer(path: Path, into: Path, *, stem: str | None = None) -> Outcome:
    """Answers one workbook: an answered copy and its JSON in `into`, or a JSON that says why not.

    Parameters
    ----------
    path : the workbook; it is only read
    into : folder for the results, made when missing
    stem : beginning of the names of the results; the workbook's own when None

    Returns
    -------
    Outcome : "answered" or "returned", with the files written

    Raises
    ------
    MissingWorkbook : when there is no such file; every other trouble with the workbook is an outcome
    """
    if not path.is_file():
        raise MissingWorkbook(f"there is no file {path.name}", advice="Check the path.", file=path)
    into.mkdir(parents=True, exist_ok=True)
    results = into / (stem or path.stem)
    try:
        study = intake.read(path)
        return _answered(path, results, study, judgement.judge(study))
    except WorkbookError as error:
        return _returned(path, results, error)
    except OSError:
        # a full disk or a locked target is no fault of the workbook's; whoever called may try again
        raise
    except Exception as error:
        return _returned(path, results, _unforeseen(error))


def _unforeseen(error: Exception) -> WorkbookError:
    """A fault of sheetqc itself, put as a reason: one workbook must not stop the others."""
    last = traceback.extract_tb(error.__traceback__)[-1]
    return UnforeseenTrouble(
        f"sheetqc itself failed ({type(error).__name__}: {error}; {Path(last.filename).name}, line {last.lineno})",
        advice="This is a fault of sheetqc, not of the workbook; please report it with the workbook if you may.",
    )


def _answered(path: Path, results: Path, study: Study, found: Answer) -> Outcome:
    with tempfile.TemporaryDirectory(dir=results.parent, prefix=".sheetqc-") as scratch:
        copy, found = _copied(path, results, study, found, Path(scratch) / "additions.xlsx")
    report = _beside(results, ".answered.json")
    write_json(answer_object(found), report)
    _beside(results, ".returned.json").unlink(missing_ok=True)
    return Outcome(source=path, state="answered", report=report, workbook=copy, text=_verdicts(found))


def _beside(results: Path, ending: str) -> Path:
    return results.with_name(results.name + ending)


def _copied(path: Path, results: Path, study: Study, found: Answer, additions: Path) -> tuple[Path, Answer]:
    """The answered copy; where nothing can be added to the original, a workbook of its own with the reason."""
    copy = _beside(results, f".answered{path.suffix.lower() if path.suffix.lower() in GRAFTABLE else '.xlsx'}")
    try:
        taken = package.sheet_names(path, earlier_answer=False)
        names = package.free_sheet_names(sheets.wanted_names(found), taken)
        sheets.write(found, study, names, additions)
        package.graft(path, additions, copy)
    except CannotGraft as error:
        copy = _beside(results, ".answered.xlsx")
        found = replace(found, findings=(*found.findings, _on_its_own(error)))
        sheets.write(found, study, package.free_sheet_names(sheets.wanted_names(found), ()), additions, alone=True)
        additions.replace(copy)
    return copy, found


def _on_its_own(error: CannotGraft) -> Finding:
    return Finding(
        code="answered-beside",
        level="caution",
        text=f"The answer is a workbook of its own, since nothing can be added to a copy of the original: {error.met}.",
    )


def _verdicts(found: Answer) -> str:
    return ", ".join(f"{a.characteristic.id} {a.verdict.state}" for a in found.assessments)


def _returned(path: Path, results: Path, error: WorkbookError) -> Outcome:
    finding = Finding(
        code=error.code,
        level="stop",
        text=str(error),
        cells=() if error.cell is None else (error.cell,),
    )
    findings = (finding, *error.findings)
    report = _beside(results, ".returned.json")
    document = {
        "schema": SCHEMA,
        "tool": tool_object(),
        "source": source_object(_source(path)),
        "reason": str(error),
        "findings": [f.to_dict() for f in findings],
    }
    write_json(document, report)
    return Outcome(source=path, state="returned", report=report, text=str(error))


def _source(path: Path) -> Source:
    digest = hashlib.sha256()
    with path.open("rb") as file:
        while block := file.read(1 << 20):
            digest.update(block)
    return Source(name=path.name, sha256=digest.hexdigest(), bytes=path.stat().st_size)


def write_json(document: dict[str, object], into: Path) -> None:
    """Writes a JSON file that is either wholly there or not at all."""
    text = json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1)
    part = into.with_name(f".{into.name}.part")
    with part.open("w", encoding="utf-8") as file:
        file.write(text + "\n")
        file.flush()
        os.fsync(file.fileno())
    part.replace(into)
