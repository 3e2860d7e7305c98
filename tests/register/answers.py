"""JSON answers for the tests of the register."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any


def characteristic(id_: str = "D12", state: str = "likely", **changes: Any) -> dict[str, Any]:
    """A characteristic as it stands in an answer; `changes` replace whole fields."""
    made: dict[str, Any] = {
        "id": id_,
        "name": "Seal face flatness",
        "unit": "µm",
        "critical_class": "critical",
        "confidence": 0.95,
        "count": 50,
        "indices": {"Ppk": {"estimate": 1.5, "lower": 1.2, "upper": 1.8}, "Cpk": None},
        "nonconforming": {"expected": {"ppm": 12.5, "lower": None, "upper": None}},
        "stability": {"stable": True},
        "claim": {"index": "Cpk", "value": 1.7},
        "model_in_use": "lognormal",
        "verdict": {
            "state": state,
            "requirement": 1.33,
            "index": "Ppk",
            "reasons": ["The lower bound, 1.20, is below 1.33.", "More."],
            "next_steps": ["Send 40 more values."],
        },
        "findings": [
            {"code": "few-values", "level": "caution", "text": "", "cells": []},
            {"code": "few-values", "level": "caution", "text": "", "cells": []},
            {"code": "rounded", "level": "note", "text": "", "cells": []},
        ],
    }
    return {**made, **changes}


def document(*characteristics: dict[str, Any], sha256: str = "ab", **study: Any) -> dict[str, Any]:
    """A whole answer."""
    known = {
        "supplier": "Maple Ridge Seals",
        "part_number": "PN-7",
        "part_name": "Ring",
        "lot": "L1",
        "date": "2026-03-01",
    }
    return {
        "schema": 1,
        "tool": {"name": "sheetqc", "version": "0.1.0"},
        "source": {"name": "study.xlsx", "sha256": sha256, "bytes": 10},
        "study": {**known, **study},
        "characteristics": list(characteristics),
        "counts": [],
        "findings": [],
    }


def put(folder: Path, name: str, content: Any, *, book: bool = True) -> Path:
    """Write an answer NAME.answered.json, with an empty file in place of the workbook beside it."""
    folder.mkdir(parents=True, exist_ok=True)
    report = folder / f"{name}.answered.json"
    report.write_text(content if isinstance(content, str) else json.dumps(content), encoding="utf-8")
    if book:
        (folder / f"{name}.answered.xlsx").touch()
    return report
