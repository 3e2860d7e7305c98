"""Names inside formulas: sheets and tables renamed wherever a formula refers to them."""

from __future__ import annotations

import re
from collections.abc import Mapping

# A text in a formula, or a quoted sheet name, or a bare one, each with what follows it.
_TOKEN = re.compile(
    r"""(?P<text>"(?:[^"]|"")*")"""
    r"""|'(?P<quoted>(?:[^']|'')+)'!"""
    r"""|(?P<bare>[^\W\d][\w.]*(?::[^\W\d][\w.]*)?)!"""
    r"""|(?P<table>[^\W\d][\w.]*)(?=\[)"""
)


def renamed(formula: str, sheets: Mapping[str, str], tables: Mapping[str, str] | None = None) -> str:
    """A formula with references to sheets and tables under their new names.

    Parameters
    ----------
    formula : text of a formula or of a reference
    sheets : new names by old ones, old ones case-folded
    tables : new names by old ones, old ones case-folded
    """
    if not sheets and not tables:
        return formula

    def swapped(match: re.Match[str]) -> str:
        if match["text"] is not None:
            return match.group()
        if match["table"] is not None:
            return (tables or {}).get(match["table"].casefold(), match["table"])
        old = match["quoted"].replace("''", "'") if match["quoted"] is not None else match["bare"]
        steps = old.split(":")
        new = [sheets.get(step.casefold(), step) for step in steps]
        return match.group() if new == steps else f"{quoted(':'.join(new))}!"

    return _TOKEN.sub(swapped, formula)


def quoted(name: str) -> str:
    """A sheet name as a formula writes it."""
    return "'" + name.replace("'", "''") + "'"


def sheet_of(reference: str) -> str | None:
    """The sheet that a reference begins with, or None."""
    match = _TOKEN.match(reference.lstrip("="))
    if match is None or (match["quoted"] is None and match["bare"] is None):
        return None
    return match["quoted"].replace("''", "'") if match["quoted"] is not None else match["bare"]
