"""A workbook in somebody's own style: the tags stand in corners of a layout that was there before them."""

from __future__ import annotations

import datetime
import statistics
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import xlsxwriter

from tests.examples import picture, scenario
from tests.examples.form import opened, write_entry
from tests.examples.study import Asked, Entry

COVER, VALUES, CHART, NOTES = "Deckblatt", "Messwerte", "Verlauf", "Interne Notizen"
FIRST_VALUE_ROW = 6
"""Row of the first reading on the sheet of values, counted from 0."""


class _Look:
    """The supplier's own formats."""

    def __init__(self, book: xlsxwriter.Workbook) -> None:
        font = {"font_name": "Georgia", "font_size": 11}
        self.title = book.add_format(
            {
                **font,
                "font_size": 20,
                "bold": True,
                "font_color": "#FFFFFF",
                "bg_color": "#26547C",
                "align": "center",
                "valign": "vcenter",
            }
        )
        self.corner = book.add_format({"font_name": "Georgia", "font_size": 6, "font_color": "#B9C7D2"})
        self.label = book.add_format({**font, "italic": True, "bg_color": "#E6EEF4", "border": 4})
        self.entry = book.add_format({**font, "bg_color": "#FFF8EC", "border": 4, "align": "left"})
        self.date = book.add_format({**font, "bg_color": "#FFF8EC", "border": 4, "num_format": "dd.mm.yyyy"})
        self.head = book.add_format(
            {**font, "bold": True, "bg_color": "#D67A2C", "font_color": "#FFFFFF", "align": "center", "border": 2}
        )
        self.values = {
            decimals: book.add_format({**font, "border": 4, "num_format": "0." + "0" * decimals, "align": "center"})
            for decimals in (3, 4)
        }
        self.plain = book.add_format({**font, "border": 4, "align": "center"})
        self.high = book.add_format({"bg_color": "#F9D9C2"})
        self.low = book.add_format({"bg_color": "#D6E6F2"})


def write(path: Path) -> None:
    """Writes the bearing bush's record in its supplier's own style."""
    asked = scenario.bearing_bush()
    with opened(path) as book:
        look = _Look(book)
        cover, values = book.add_worksheet(COVER), book.add_worksheet(VALUES)
        graph, notes = book.add_chartsheet(CHART), book.add_worksheet(NOTES)
        _cover(cover, look, asked)
        _values(book, values, look, asked)
        graph.set_chart(_course(book, asked))
        notes.write("A1", "Werkzeug 3 wurde am 14.02. nachgesetzt; Protokoll liegt in der Fertigung.")
        notes.write("A2", "qc:study steht hier nur im Text und ist kein Auftrag.")
        notes.hide()
        book.define_name("Nennmass_D31", f"='{COVER}'!$F$16")


def _cover(sheet: Any, look: _Look, asked: Asked) -> None:
    sheet.set_tab_color("#D67A2C")
    sheet.hide_gridlines(2)
    sheet.set_column("A:A", 2)
    sheet.set_column("B:I", 20)
    sheet.set_landscape()
    sheet.fit_to_pages(1, 0)
    sheet.merge_range("B2:I3", asked.title, look.title)
    sheet.insert_image("G5", "zeichen.png", {"image_data": picture.logo(), "x_scale": 0.9, "y_scale": 0.9})
    sheet.write_string("B4", "qc:study", look.corner)
    for row, (label, entry) in enumerate(asked.header.items(), start=4):
        sheet.write_string(row, 1, label, look.label)
        write_entry(sheet, row, 2, entry, look.date if isinstance(entry, datetime.date) else look.entry)
    sheet.write_string("B14", "qc:characteristics", look.corner)
    for column, heading in enumerate(asked.headings, start=1):
        sheet.write_string(14, column, heading, look.head)
    for row, characteristic in enumerate(asked.characteristics, start=15):
        for column, heading in enumerate(asked.headings, start=1):
            write_entry(sheet, row, column, characteristic.get(heading), look.entry)
    sheet.write_comment("H16", "Klasse nach Absprache", {"author": "K. Windau"})
    sheet.set_footer("&LLagerbuchse&RSeite &P von &N")


def _values(book: xlsxwriter.Workbook, sheet: Any, look: _Look, asked: Asked) -> None:
    sheet.set_column("A:A", 3)
    sheet.set_column("B:D", 14)
    sheet.set_column("F:F", 22)
    sheet.fit_to_pages(1, 0)
    sheet.merge_range("B1:D2", "Messwerte", look.title)
    sheet.write_string("B4", "qc:measurements", look.corner)
    _readings(sheet, look, asked)
    last = FIRST_VALUE_ROW + len(asked.columns["D31"]) - 1
    readings = [float(v) for v in asked.columns["D31"] if isinstance(v, (int, float))]
    sheet.conditional_format(
        FIRST_VALUE_ROW, 2, last, 2, {"type": "cell", "criteria": ">", "value": 16.004, "format": look.high}
    )
    sheet.conditional_format(
        FIRST_VALUE_ROW, 2, last, 2, {"type": "cell", "criteria": "<", "value": 15.996, "format": look.low}
    )
    bars = {"type": "data_bar", "bar_color": "#9CC3DD", "min_type": "num", "min_value": 21.9}
    sheet.conditional_format(FIRST_VALUE_ROW, 3, last, 3, bars)
    _own_figures(sheet, look, readings, last)
    sheet.insert_chart("F10", _course(book, asked))
    sheet.freeze_panes(FIRST_VALUE_ROW, 2)
    sheet.autofilter(FIRST_VALUE_ROW - 1, 1, last, 3)
    sheet.protect("", {"format_columns": True})


def _readings(sheet: Any, look: _Look, asked: Asked) -> None:
    for column, heading in enumerate(asked.columns, start=1):
        sheet.write_string(FIRST_VALUE_ROW - 1, column, heading, look.head)
    formats = [look.values.get(asked.decimals.get(heading, 0), look.plain) for heading in asked.columns]
    for row, entries in enumerate(asked.rows(), start=FIRST_VALUE_ROW):
        for column, entry in enumerate(entries):
            write_entry(sheet, row, column + 1, entry, formats[column])


def _own_figures(sheet: Any, look: _Look, readings: Sequence[float], last: int) -> None:
    """The supplier's own calculation, beside the values and above their headings."""
    cells = f"C{FIRST_VALUE_ROW + 1}:C{last + 1}"
    figures: list[tuple[str, str, Entry]] = [
        ("Mittelwert D31", f"=AVERAGE({cells})", statistics.fmean(readings)),
        ("Größter Wert D31", f"=MAX({cells})", max(readings)),
    ]
    for row, (label, formula, value) in enumerate(figures):
        sheet.write_string(row, 5, label, look.label)
        sheet.write_formula(row, 6, formula, look.values[4], value)


def _course(book: xlsxwriter.Workbook, asked: Asked) -> Any:
    """The supplier's own chart of the readings."""
    last = FIRST_VALUE_ROW + len(asked.columns["D31"]) - 1
    chart = book.add_chart({"type": "line"})
    chart.add_series(
        {
            "name": "Außendurchmesser",
            "values": [VALUES, FIRST_VALUE_ROW, 2, last, 2],
            "line": {"color": "#D67A2C", "width": 1.5},
        }
    )
    chart.set_title({"name": "Verlauf D31"})
    chart.set_legend({"none": True})
    return chart
