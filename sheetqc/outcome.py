"""Record of what became of one workbook."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Literal


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """A workbook answered (`workbook` is the copy) or returned unanswered (`workbook` is None).

    `report` is the JSON file beside it; `text` says in a line what happened.
    """

    source: Path
    state: Literal["answered", "returned"]
    report: Path
    workbook: Path | None = None
    text: str = ""
