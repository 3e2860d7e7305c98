"""Colours of the sheets. Colour is never the only sign: every role has its own dash, marker or word beside it."""

from __future__ import annotations

from sheetqc.assessment import State

INK = "#1F2A37"
MUTED = "#5B6673"
HAIRLINE = "#C9D1D9"
PAPER = "#FFFFFF"
ACCENT = "#1B6B8C"
ACCENT_LIGHT = "#E3EFF4"
BAR = "#BCD5E0"
ENTRY = "#FFF9E6"

VERDICT: dict[State, str] = {
    "shown": "#2E7D4F",
    "likely": "#7A9A3A",
    "doubtful": "#C9822B",
    "not met": "#B23A3A",
    "no verdict": "#6B7280",
}
