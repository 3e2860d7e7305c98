"""Rows of the register, read from JSON answers; whatever is missing or of the wrong type in one is left empty."""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Literal

STATES = ("shown", "likely", "doubtful", "not met", "no verdict")
"""Verdict states, from the best to the one that says nothing."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Workbook:
    """An answered workbook: its JSON, the answered copy where it stands beside it, and what identifies the study.

    `same_as` tells that it repeats the answer to an earlier file of the same content.
    """

    report: Path
    copy: Path | None
    changed: float
    name: str
    sha256: str = ""
    same_as: str = ""
    supplier: str = ""
    part_number: str = ""
    part_name: str = ""
    lot: str = ""
    date: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """A characteristic in an answered workbook.

    `index` names the index the verdict is about; `estimate`, `lower` and `upper` are its own. `expected_ppm` is the
    rate expected under the model in use. `concerns` are the codes of its findings that are more than notes.
    """

    workbook: Workbook
    id: str
    name: str = ""
    unit: str = ""
    critical_class: str = ""
    count: int | None = None
    state: str = "no verdict"
    requirement: float | None = None
    index: str = ""
    estimate: float | None = None
    lower: float | None = None
    upper: float | None = None
    confidence: float = 0.95
    claimed: float | None = None
    expected_ppm: float | None = None
    model: str = ""
    stable: bool | None = None
    reason: str = ""
    next_step: str = ""
    concerns: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Aside:
    """A file without rows of its own: returned unanswered, an answer that cannot be read, or one given before."""

    report: Path
    file: Path | None
    changed: float
    name: str
    state: Literal["returned", "unreadable", "repeated"]
    reason: str


Row = Judged | Aside


def rows_of_answer(document: Any, report: Path, copy: Path | None, changed: float) -> tuple[Judged, ...]:
    """The rows of one JSON answer.

    Raises
    ------
    ValueError : when it is no answer
    """
    characteristics = _at(document, "characteristics")
    if not isinstance(characteristics, list):
        raise ValueError("it holds no list of characteristics")
    book = Workbook(
        report=report,
        copy=copy,
        changed=changed,
        name=_text(document, "source", "name") or report.name.removesuffix(".answered.json"),
        sha256=_text(document, "source", "sha256"),
        same_as=_text(document, "same_content_as"),
        supplier=_text(document, "study", "supplier"),
        part_number=_text(document, "study", "part_number"),
        part_name=_text(document, "study", "part_name"),
        lot=_text(document, "study", "lot"),
        date=_text(document, "study", "date"),
    )
    return tuple(_judged(c, book) for c in characteristics if isinstance(c, dict))


def _judged(c: dict[str, Any], book: Workbook) -> Judged:
    index = _text(c, "verdict", "index")
    state = _text(c, "verdict", "state")
    count = _number(c, "count")
    return Judged(
        workbook=book,
        id=_text(c, "id"),
        name=_text(c, "name"),
        unit=_text(c, "unit"),
        critical_class=_text(c, "critical_class"),
        count=None if count is None else int(count),
        state=state if state in STATES else "no verdict",
        requirement=_number(c, "verdict", "requirement"),
        index=index,
        estimate=_number(c, "indices", index, "estimate"),
        lower=_number(c, "indices", index, "lower"),
        upper=_number(c, "indices", index, "upper"),
        confidence=_number(c, "confidence") or 0.95,
        claimed=_number(c, "claim", "value"),
        expected_ppm=_number(c, "nonconforming", "expected", "ppm"),
        model=_text(c, "model_in_use"),
        stable=stable if isinstance(stable := _at(c, "stability", "stable"), bool) else None,
        reason=_first(c, "verdict", "reasons"),
        next_step=_first(c, "verdict", "next_steps"),
        concerns=_concerns(c),
    )


def _concerns(c: dict[str, Any]) -> tuple[str, ...]:
    findings = _at(c, "findings")
    found = [f for f in findings if isinstance(f, dict)] if isinstance(findings, list) else []
    codes = [_text(f, "code") for f in found if _text(f, "level") in ("caution", "stop")]
    return tuple(dict.fromkeys(code for code in codes if code))


def _at(document: Any, *keys: str) -> Any:
    for key in keys:
        if not isinstance(document, dict):
            return None
        document = document.get(key)
    return document


def _text(document: Any, *keys: str) -> str:
    """The text on one line, free of blanks around it; numbers as text, for part numbers typed as numbers."""
    value = _at(document, *keys)
    if isinstance(value, bool) or not isinstance(value, str | int | float):
        return ""
    return " ".join(str(value).split())


def _number(document: Any, *keys: str) -> float | None:
    value = _at(document, *keys)
    if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
        return None
    return float(value)


def _first(document: Any, *keys: str) -> str:
    values = _at(document, *keys)
    return " ".join(values[0].split()) if isinstance(values, list) and values and isinstance(values[0], str) else ""
