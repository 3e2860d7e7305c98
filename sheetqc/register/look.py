"""How the register looks: colours, signs and cell formats."""

from __future__ import annotations

from functools import cache
from typing import Any

INK, MUTED, HAIRLINE, PAPER = "#1F2A37", "#5B6673", "#C9D1D9", "#FFFFFF"
ACCENT, ACCENT_LIGHT = "#1B6B8C", "#E3EFF4"

SIGNS = {
    "shown": ("●", "#2E7D4F", "the lower bound reaches the requirement"),
    "likely": ("◕", "#7A9A3A", "the estimate reaches it, the lower bound does not"),
    "doubtful": ("◑", "#C9822B", "the estimate misses it, the upper bound does not"),
    "not met": ("○", "#B23A3A", "even the upper bound misses it"),
    "no verdict": ("–", "#6B7280", "a condition that the number rests on does not hold"),
}
"""By verdict: its sign, its colour, what it says."""

FONT = {"font_name": "Arial", "font_size": 10}


def chart_font(size: int) -> dict[str, Any]:
    """The font of texts in charts."""
    return {"name": "Arial", "size": size, "color": INK, "bold": False}


def signed(state: str) -> str:
    """A verdict as it is printed: sign and word."""
    return f"{SIGNS[state][0]} {state}"


class Formats:
    """The cell formats of one workbook, each made once."""

    def __init__(self, book: Any) -> None:
        self._book = book
        self._made = cache(self._make)

    def __call__(self, **properties: Any) -> Any:
        """The format with these properties, on Arial 10 in ink, middle of the row."""
        return self._made(tuple(sorted(properties.items())))

    def _make(self, properties: tuple[tuple[str, Any], ...]) -> Any:
        base = {**FONT, "font_color": INK, "valign": "vcenter"}
        return self._book.add_format({**base, **dict(properties)})
