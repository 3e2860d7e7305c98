"""The look of the blank intake workbook: few formats, quiet in print."""

from __future__ import annotations

from typing import Any

INK = "#243038"
QUIET = "#75808A"
LINE = "#C9CFCB"
ENTRY = "#FCF9EF"
ENTRY_LINE = "#D8D0B8"
FIFTH_LINE = "#A89C7A"
NEEDED = "#CFE0D8"
OPTIONAL = "#EBF1EE"
RULE = "#3F7A68"
BEYOND = "#8C2F1B"
DOUBT = "#F6E3C4"


class Look:
    """The formats of one workbook."""

    def __init__(self, book: Any) -> None:
        def added(**properties: Any) -> Any:
            return book.add_format({"font_name": "Arial", "font_size": 10, "font_color": INK, **properties})

        entry = {"bg_color": ENTRY, "border": 1, "border_color": ENTRY_LINE, "valign": "vcenter"}
        head = {"bold": True, "text_wrap": True, "valign": "vcenter", "bottom": 2, "bottom_color": RULE}
        self.title = added(font_size=16, bold=True, font_color=RULE)
        self.text = added(valign="top")
        self.wrapped = added(text_wrap=True, valign="top")
        self.quiet = added(font_color=QUIET, font_size=9)
        self.tag = added(font_color=QUIET, font_size=8, italic=True)
        self.label = added(valign="vcenter", bottom=1, bottom_color=LINE)
        self.needed = added(bg_color=NEEDED, **head)
        self.optional = added(bg_color=OPTIONAL, **head)
        self.needed_centre = added(bg_color=NEEDED, align="center", **head)
        self.entry = added(**entry)
        self.entry_wrapped = added(text_wrap=True, align="left", indent=1, **{**entry, "valign": "top"})
        self.entry_left = added(align="left", indent=1, **entry)
        self.entry_percent = added(num_format="0 %", align="left", indent=1, **entry)
        self.entry_date = added(num_format="yyyy-mm-dd", align="left", indent=1, **entry)
        self.entry_centre = added(align="center", **entry)
        fifth = {**entry, "bottom": 1, "bottom_color": FIFTH_LINE}
        self.fifth = added(**fifth)
        self.fifth_left = added(align="left", indent=1, **fifth)
        self.bare = added()
        self.bare_left = added(align="left")
        self.follows = added(font_color=QUIET, font_size=9, align="center", shrink=True)
        self.follows_label = added(font_color=QUIET, font_size=9, align="right")
        self.row_needed = added(bold=True, valign="top", bottom=1, bottom_color=LINE)
        # Conditional formats carry only what they change.
        self.lit = book.add_format({"bg_color": ENTRY, "border": 1, "border_color": ENTRY_LINE})
        self.beyond = book.add_format({"bold": True, "underline": 1, "font_color": BEYOND})
        self.doubt = book.add_format({"italic": True, "bg_color": DOUBT})

    def entry_on(self, place: int, *, left: bool = False) -> Any:
        """The format of an entry on the row of a place, counted from 0: every fifth row has a stronger line below."""
        if place % 5 == 4:
            return self.fifth_left if left else self.fifth
        return self.entry_left if left else self.entry


def page(sheet: Any, title: str) -> None:
    """Sets a sheet up for print: A4 landscape, narrow margins, its name and page below."""
    sheet.set_landscape()
    sheet.set_paper(9)
    sheet.set_margins(left=0.5, right=0.5, top=0.6, bottom=0.7)
    sheet.set_footer(f"&L&8{title}&C&8&F&R&8&P / &N")
    sheet.hide_gridlines(2)


def message(sheet: Any, row: int, column: int, title: str, text: str) -> None:
    """Adds a short note that shows while a cell is selected."""
    sheet.data_validation(row, column, row, column, {"validate": "any", "input_title": title, "input_message": text})
