"""All rows below a folder, from the JSON answers that lie there."""

from __future__ import annotations

import json
import os
from collections.abc import Iterator
from pathlib import Path

from sheetqc.register.rows import Aside, Judged, Row, Workbook, rows_of_answer

_ANSWERED, _RETURNED = ".answered.json", ".returned.json"
_COPIES = (".xlsx", ".xlsm")


def collect(folder: Path) -> tuple[Row, ...]:
    """The rows of every JSON answer below a folder, in the order of their paths.

    A file that cannot be read, one that was returned, and a repeated answer to the same content give an `Aside`.
    """
    return _without_repeats([row for report in _reports(folder) for row in _rows(report)])


def _reports(folder: Path) -> Iterator[Path]:
    """JSON answers below a folder; of a served folder not those still in work. Links are not followed."""
    served = (folder / "in").is_dir() and (folder / "working").is_dir()
    for place, folders, files in os.walk(folder):
        aside = ("working", "in") if served and Path(place) == folder else ()
        folders[:] = sorted(f for f in folders if not f.startswith(".") and f not in aside)
        for name in sorted(files):
            if name.lower().endswith((_ANSWERED, _RETURNED)) and not name.startswith("."):
                yield Path(place) / name


def _rows(report: Path) -> tuple[Row, ...]:
    returned = report.name.lower().endswith(_RETURNED)
    changed = 0.0
    try:
        changed = report.stat().st_mtime
        document = json.loads(report.read_bytes())
        if returned:
            return (_returned(document, report, changed),)
        return rows_of_answer(document, report, _copy_beside(report), changed)
    except FileNotFoundError:
        return ()
    except (OSError, ValueError, RecursionError) as error:
        name = report.name[: -len(_ANSWERED)]
        why = f"{report.name} cannot be read: {_plain(error)}"
        return (Aside(report=report, file=None, changed=changed, name=name, state="unreadable", reason=why),)


def _returned(document: object, report: Path, changed: float) -> Aside:
    stem = report.name[: -len(_RETURNED)]
    reason = document.get("reason") if isinstance(document, dict) else None
    return Aside(
        report=report,
        file=_sibling(report, stem),
        changed=changed,
        name=_file_name(document) or stem,
        state="returned",
        reason=" ".join(reason.split()) if isinstance(reason, str) and reason else "no reason is given",
    )


def _file_name(document: object) -> str:
    source = document.get("source") if isinstance(document, dict) else None
    name = source.get("name") if isinstance(source, dict) else None
    return name if isinstance(name, str) else ""


def _sibling(report: Path, stem: str) -> Path | None:
    """The returned file itself, beside its reason."""
    for ending in (".xlsx", ".xlsm"):
        if (report.with_name(stem + ending)).is_file():
            return report.with_name(stem + ending)
    others = (p for p in report.parent.iterdir() if p.stem == stem and p.suffix != ".json" and p.is_file())
    return next(others, None)


def _copy_beside(report: Path) -> Path | None:
    stem = report.name[: -len(".json")]
    return next((p for ending in _COPIES if (p := report.with_name(stem + ending)).is_file()), None)


def _plain(error: Exception) -> str:
    if isinstance(error, OSError):
        return error.strerror or type(error).__name__
    return "it is no JSON" if isinstance(error, json.JSONDecodeError | UnicodeDecodeError) else str(error)


def _without_repeats(rows: list[Row]) -> tuple[Row, ...]:
    """The rows with those of repeated content set aside; the latest answer that is no repetition stands."""
    standing: dict[str, Workbook] = {}
    for row in rows:
        if isinstance(row, Judged) and row.workbook.sha256:
            known = standing.get(row.workbook.sha256)
            if known is None or _rank(row.workbook) > _rank(known):
                standing[row.workbook.sha256] = row.workbook
    kept: list[Row] = []
    repeated: set[Path] = set()
    for row in rows:
        first = standing.get(row.workbook.sha256, row.workbook) if isinstance(row, Judged) else None
        if not isinstance(row, Judged) or first is None or first.report == row.workbook.report:
            kept.append(row)
        elif row.workbook.report not in repeated:
            repeated.add(row.workbook.report)
            kept.append(_repeat(row.workbook, first))
    return tuple(kept)


def _rank(book: Workbook) -> tuple[bool, float, str]:
    return not book.same_as, book.changed, str(book.report)


def _repeat(book: Workbook, first: Workbook) -> Aside:
    return Aside(
        report=book.report,
        file=book.copy,
        changed=book.changed,
        name=book.name,
        state="repeated",
        reason=f"has the same content as {first.name} and is counted once, there",
    )
