"""The first sheet: how many of which verdict, what needs a person first, suppliers and reasons."""

from __future__ import annotations

from collections import Counter
from collections.abc import Collection, Sequence
from pathlib import Path
from typing import Any

from sheetqc.register.listing import TABLE, Column, height, safe_text, side, write_value
from sheetqc.register.look import ACCENT, ACCENT_LIGHT, HAIRLINE, MUTED, PAPER, SIGNS, Formats, chart_font, signed
from sheetqc.register.rows import STATES, Aside, Judged
from sheetqc.register.urgency import chance_wrong

OVERVIEW = "Overview"
"""Name of the sheet."""

_MOST_FIRST, _MOST_SUPPLIERS, _MOST_REASONS = 10, 12, 10
_WIDTHS = (2, 22, 13, 13, 13, 14, 13, 13, 11, 52, 32)
_NO_SUPPLIER = "(no supplier stated)"

_FIRST_COLUMNS = (
    Column("Supplier", 0, "text", lambda r: r.workbook.supplier),
    Column("Part", 0, "text", lambda r: r.workbook.part_number),
    Column("Id", 0, "text", lambda r: r.id),
    Column("Class", 0, "text", lambda r: r.critical_class),
    Column("Verdict", 0, "verdict", lambda r: r.state),
    Column("Required", 0, "number", lambda r: r.requirement),
    Column("Lower bound", 0, "number", lambda r: r.lower),
    Column("Claim doubtful", 0, "share", chance_wrong),
    Column("Main reason", _WIDTHS[9], "wrapped", lambda r: r.reason),
    Column("Answer", 0, "link", lambda r: r.workbook.copy or r.workbook.report),
)


class Overview:
    """Writes the overview from top to bottom."""

    def __init__(self, book: Any, formats: Formats, rows: Sequence[Judged], aside: Sequence[Aside], base: Path) -> None:
        self._book = book
        self._sheet = book.add_worksheet(OVERVIEW)
        self._format = formats
        self._rows = rows
        self._aside = aside
        self._base = base
        self._at = 0

    def write(self) -> None:
        """Write all of it."""
        self._set_up()
        self._title()
        self._verdicts()
        self._first()
        self._suppliers()
        self._reasons()
        self._sheet.print_area(0, 0, self._at, len(_WIDTHS) - 1)

    def _set_up(self) -> None:
        self._sheet.hide_gridlines(2)
        self._sheet.set_default_row(18)
        for number, width in enumerate(_WIDTHS):
            self._sheet.set_column(number, number, width)
        self._sheet.set_landscape()
        self._sheet.set_paper(9)
        self._sheet.fit_to_pages(1, 0)
        self._sheet.set_margins(0.4, 0.4, 0.5, 0.6)
        self._sheet.set_footer("&L&8&F&R&8&P / &N")

    def _title(self) -> None:
        books = len({r.workbook.report for r in self._rows})
        suppliers = len({_supplier(r).lower() for r in self._rows})
        states = Counter(a.state for a in self._aside)
        counts = [
            _counted(len(self._rows), "characteristic") + " in " + _counted(books, "answered workbook"),
            "from " + _counted(suppliers, "supplier"),
            _counted(states["returned"], "file") + " returned unanswered",
        ]
        if states["repeated"]:
            counts.append(_counted(states["repeated"], "file") + " received again")
        if states["unreadable"]:
            counts.append(_counted(states["unreadable"], "answer") + " unreadable")
        self._sheet.set_row(0, 30)
        self._text(0, 1, "Register of capability studies", bold=True, font_size=16)
        self._text(1, 1, "; ".join(counts) + ".", font_color=MUTED)
        self._at = 3

    def _heading(self, text: str) -> None:
        self._sheet.set_row(self._at, 22)
        for column in range(1, len(_WIDTHS)):
            self._sheet.write_blank(self._at, column, None, self._format(bottom=1, bottom_color=ACCENT))
        self._text(self._at, 1, text, bold=True, font_size=12, font_color=ACCENT, bottom=1, bottom_color=ACCENT)
        self._at += 1

    def _heads(self, headings: Sequence[str], right: Collection[str] = ()) -> None:
        self._sheet.set_row(self._at, 30)
        for number, text in enumerate(headings):
            place = {"align": "right"} if text in right else {"align": "left", "indent": 1}
            self._text(
                self._at, 1 + number, text, bold=True, font_color=ACCENT, bg_color=ACCENT_LIGHT, text_wrap=True, **place
            )
        self._at += 1

    def _verdicts(self) -> None:
        self._heading("How do they stand?")
        self._heads(("Verdict", "Count", "Share", "What it says", "", "", ""), ("Count", "Share"))
        counts, top = Counter(r.state for r in self._rows), self._at
        for state in STATES:
            count, row = counts[state], self._at
            self._text(row, 1, signed(state), bold=True, indent=1, font_color=SIGNS[state][1])
            self._formula(row, 2, f"=COUNTIFS({TABLE}[Verdict],B{row + 1})", count, num_format="0")
            total = f"SUM($C${top + 1}:$C${top + len(STATES)})"
            share = count / len(self._rows) if self._rows else 0
            self._formula(row, 3, f"=IF({total}=0,0,C{row + 1}/{total})", share, num_format="0 %")
            self._text(row, 4, SIGNS[state][2], indent=1, font_color=MUTED)
            self._at += 1
        self._at += 1

    def _first(self) -> None:
        self._heading("What needs a person first?")
        self._text(
            self._at,
            1,
            "Ordered by the rough chance that the sender's claim (the claimed index, or else the requirement) does "
            "not hold, times the weight of the class (critical 3, significant 2, others 1).",
            font_color=MUTED,
        )
        self._at += 1
        right = [c.heading for c in _FIRST_COLUMNS if side(c)["align"] == "right"]
        self._heads([c.heading for c in _FIRST_COLUMNS], right)
        urgent = [r for r in self._rows if r.state != "shown"][:_MOST_FIRST]
        for row in urgent:
            self._sheet.set_row(self._at, height(_FIRST_COLUMNS, row))
            for number, column in enumerate(_FIRST_COLUMNS):
                write_value(self._sheet, self._format, (self._at, 1 + number), column, row, self._base)
            self._at += 1
        if not urgent:
            self._text(self._at, 1, "Nothing: every requirement is shown to be met.", italic=True, font_color=MUTED)
            self._at += 1
        self._at += 1

    def _suppliers(self) -> None:
        counts: dict[str, Counter[str]] = {}
        spelled: dict[str, str] = {}
        for row in self._rows:
            key = _supplier(row).lower()
            spelled.setdefault(key, _supplier(row))
            counts.setdefault(key, Counter())[row.state] += 1
        if not counts:
            return
        order = sorted(counts, key=lambda k: (-(counts[k].total() - counts[k]["shown"]), -counts[k].total(), k))
        self._sheet.set_h_pagebreaks([self._at])
        self._heading("Whose are they?")
        if len(order) > _MOST_SUPPLIERS:
            self._text(
                self._at, 1, f"The {_MOST_SUPPLIERS} suppliers with most to look at, of {len(order)}.", font_color=MUTED
            )
            self._at += 1
        self._heads(("Supplier", *map(signed, STATES)), [signed(s) for s in STATES])
        top = self._at
        for key in order[:_MOST_SUPPLIERS]:
            self._supplier_row(spelled[key], counts[key])
        self._supplier_chart(top, self._at - 1)

    def _supplier_row(self, name: str, counts: Counter[str]) -> None:
        row = self._at
        self._text(row, 1, name, indent=1, bottom=1, bottom_color=HAIRLINE)
        wanted = '""' if name == _NO_SUPPLIER else f"$B{row + 1}"
        for number, state in enumerate(STATES):
            formula = f'=SUMPRODUCT(({TABLE}[Supplier]={wanted})*({TABLE}[Verdict]="{signed(state)}"))'
            self._formula(row, 2 + number, formula, counts[state], num_format="0;;", bottom=1, bottom_color=HAIRLINE)
        self._at += 1

    def _supplier_chart(self, top: int, bottom: int) -> None:
        chart = self._book.add_chart({"type": "bar", "subtype": "stacked"})
        for number, state in enumerate(STATES):
            chart.add_series(
                {
                    "name": signed(state),
                    "categories": [OVERVIEW, top, 1, bottom, 1],
                    "values": [OVERVIEW, top, 2 + number, bottom, 2 + number],
                    "fill": {"color": SIGNS[state][1]},
                    "border": {"color": PAPER, "width": 0.75},
                    "gap": 45,
                }
            )
        _dress(chart, "Verdicts per supplier")
        chart.set_legend({"position": "bottom", "font": chart_font(9)})
        rows = bottom - top + 1
        height = max(190, 100 + 24 * rows)
        self._place(chart, top - 1, height, "Bars of how many characteristics of each supplier have which verdict")
        self._at = max(self._at, top - 1 + -(-height // 24)) + 1

    def _reasons(self) -> None:
        found = Counter(code for row in self._rows for code in row.concerns).most_common()
        if not found:
            return
        self._heading("What stands in the way?")
        self._text(
            self._at,
            1,
            "Characteristics with a finding that is more than a note, by kind of finding.",
            font_color=MUTED,
        )
        self._at += 1
        self._heads(("Finding", "", "Count"), ("Count",))
        top = self._at
        for code, count in found[:_MOST_REASONS]:
            self._text(self._at, 1, code.replace("-", " "), indent=1, bottom=1, bottom_color=HAIRLINE)
            self._text(self._at, 2, "", bottom=1, bottom_color=HAIRLINE)
            self._sheet.write_number(self._at, 3, count, self._format(bottom=1, bottom_color=HAIRLINE))
            self._at += 1
        chart = self._book.add_chart({"type": "bar"})
        chart.add_series(
            {
                "name": "Characteristics",
                "categories": [OVERVIEW, top, 1, self._at - 1, 1],
                "values": [OVERVIEW, top, 3, self._at - 1, 3],
                "fill": {"color": ACCENT},
                "gap": 45,
                "data_labels": {"value": True, "font": chart_font(9)},
            }
        )
        _dress(chart, "Findings, most frequent first")
        chart.set_legend({"none": True})
        height = max(190, 80 + 32 * (self._at - top))
        self._place(chart, top - 1, height, "Bars of how many characteristics have which kind of finding")
        self._at = max(self._at, top - 1 + -(-height // 24)) + 1

    def _place(self, chart: Any, row: int, height: int, described: str) -> None:
        chart.set_size({"width": 640, "height": height})
        self._sheet.insert_chart(
            row, 7, chart, {"x_offset": 12, "y_offset": 2, "object_position": 2, "description": described}
        )

    def _text(self, row: int, column: int, text: str, **properties: Any) -> None:
        self._sheet.write_string(row, column, safe_text(text), self._format(**properties))

    def _formula(self, row: int, column: int, formula: str, value: float, **properties: Any) -> None:
        self._sheet.write_formula(row, column, formula, self._format(**properties), value)


def _supplier(row: Judged) -> str:
    return row.workbook.supplier or _NO_SUPPLIER


def _counted(count: int, thing: str) -> str:
    return f"{count} {thing}" if count == 1 else f"{count} {thing}s"


def _dress(chart: Any, title: str) -> None:
    chart.set_title({"name": title, "name_font": {**chart_font(11), "bold": True}, "overlay": False})
    chart.set_y_axis(
        {
            "reverse": True,
            "crossing": "max",
            "interval_unit": 1,
            "num_font": chart_font(9),
            "line": {"color": HAIRLINE},
            "major_tick_mark": "none",
        }
    )
    chart.set_x_axis(
        {
            "num_font": chart_font(9),
            "num_format": "0",
            "major_gridlines": {"visible": True, "line": {"color": HAIRLINE, "width": 0.5}},
            "line": {"none": True},
            "min": 0,
        }
    )
    chart.set_chartarea({"border": {"none": True}, "fill": {"color": PAPER}})
