"""Cell formats of the sheets, each made once a workbook."""

from __future__ import annotations

from typing import Any

from xlsxwriter import Workbook
from xlsxwriter.format import Format

from sheetqc.sheets.palette import ACCENT, ENTRY, HAIRLINE, INK, MUTED

FONT = "Arial"
SIZE = 10

STYLES: dict[str, dict[str, Any]] = {
    "plain": {},
    "small": {"font_size": 9},
    "small_top": {"font_size": 9, "font_color": MUTED, "valign": "top"},
    "muted": {"font_size": 8, "font_color": MUTED},
    "muted_right": {"font_size": 8, "font_color": MUTED, "align": "right"},
    "title": {"font_size": 16, "bold": True},
    "subtitle": {"font_color": MUTED},
    "heading": {
        "font_size": 11,
        "bold": True,
        "font_color": ACCENT,
        "top": 1,
        "top_color": ACCENT,
        "valign": "vcenter",
    },
    "words": {"text_wrap": True, "valign": "top"},
    "words_small": {"text_wrap": True, "valign": "top", "font_size": 9},
    "words_muted": {"text_wrap": True, "valign": "top", "font_size": 8, "font_color": MUTED},
    "words_caption": {"text_wrap": True, "valign": "bottom", "font_size": 8, "font_color": MUTED},
    "head": {"font_size": 8, "font_color": MUTED, "bottom": 1, "bottom_color": HAIRLINE, "valign": "bottom"},
    "head_indented": {
        "font_size": 8,
        "font_color": MUTED,
        "bottom": 1,
        "bottom_color": HAIRLINE,
        "valign": "bottom",
        "align": "left",
        "indent": 1,
    },
    "head_right": {
        "font_size": 8,
        "font_color": MUTED,
        "bottom": 1,
        "bottom_color": HAIRLINE,
        "align": "right",
        "valign": "bottom",
    },
    "head_wrapped": {
        "font_size": 8,
        "font_color": MUTED,
        "bottom": 1,
        "bottom_color": HAIRLINE,
        "text_wrap": True,
        "valign": "bottom",
    },
    "label": {"font_size": 9, "bottom": 4, "bottom_color": HAIRLINE},
    "figure": {"font_size": 9, "bottom": 4, "bottom_color": HAIRLINE, "align": "right"},
    "entry": {"bg_color": ENTRY, "border": 1, "border_color": HAIRLINE, "align": "right"},
    "entry_text": {"bg_color": ENTRY, "border": 1, "border_color": HAIRLINE, "align": "left"},
    "link": {"font_color": ACCENT, "underline": 1},
    "link_cell": {
        "font_color": ACCENT,
        "underline": 1,
        "valign": "top",
        "font_size": 9,
        "bottom": 4,
        "bottom_color": HAIRLINE,
    },
    "link_small": {"font_color": ACCENT, "underline": 1, "font_size": 8, "valign": "top", "align": "right"},
    "strong": {"bold": True},
    "cell": {"font_size": 9, "valign": "top", "bottom": 4, "bottom_color": HAIRLINE},
    "cell_right": {"font_size": 9, "valign": "top", "align": "right", "bottom": 4, "bottom_color": HAIRLINE},
    "cell_wrapped": {"font_size": 9, "valign": "top", "text_wrap": True, "bottom": 4, "bottom_color": HAIRLINE},
    "cell_strong": {"bold": True, "valign": "top", "align": "left", "indent": 1, "bottom": 4, "bottom_color": HAIRLINE},
    "cell_words": {
        "font_size": 9,
        "valign": "top",
        "text_wrap": True,
        "align": "left",
        "indent": 1,
        "bottom": 4,
        "bottom_color": HAIRLINE,
    },
}
"""The named styles; a number format may be added to any of them."""


class Formats:
    """Formats by style name and number format.

    Parameters
    ----------
    workbook : the workbook that is being written
    """

    def __init__(self, workbook: Workbook) -> None:
        self._workbook = workbook
        self._made: dict[tuple[str, str], Format] = {}

    def __call__(self, style: str = "plain", number_format: str = "") -> Format:
        """The format of a style."""
        key = (style, number_format)
        if key not in self._made:
            properties = {"font_name": FONT, "font_size": SIZE, "font_color": INK, **STYLES[style]}
            if number_format:
                properties["num_format"] = number_format
            self._made[key] = self._workbook.add_format(properties)
        return self._made[key]

    def own(self, **properties: Any) -> Format:
        """A format of its own, for what no style covers."""
        return self._workbook.add_format({"font_name": FONT, "font_size": SIZE, "font_color": INK, **properties})

    def own_colour(self, color: str) -> Format:
        """A format that sets nothing but the colour of the letters, for conditions."""
        return self._workbook.add_format({"font_color": color})
