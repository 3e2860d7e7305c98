"""Workbooks to be added, made as the product makes them: with XlsxWriter."""

from __future__ import annotations

from pathlib import Path

import xlsxwriter


def write_additions(path: Path, sheets: tuple[str, ...] = ("Answer", "Answer D12"), **options: object) -> Path:
    """A workbook with one of everything that answers use; the first sheet is the rich one."""
    book = xlsxwriter.Workbook(str(path), {"default_date_format": "yyyy-mm-dd", **options})
    first = book.add_worksheet(sheets[0])
    bold = book.add_format({"bold": True, "num_format": "0.0000", "bg_color": "#FFEECC", "font_color": "#103050"})
    share = book.add_format({"num_format": 10, "border": 1})
    red = book.add_format({"font_color": "#9C0006", "bg_color": "#FFC7CE"})
    here = f"'{sheets[0]}'"
    first.set_column("A:A", 22)
    first.write_string("A1", "Index", bold)
    first.write_number("A2", 1.5, bold)
    first.write_formula("A3", f"={here}!A2*2", share, 3)
    first.write_string("A4", f'=1+1 is text, and so is "{sheets[0]}!A1"')
    first.write_rich_string("A5", "plain ", bold, "bold", " end")
    first.conditional_format("A2:A3", {"type": "cell", "criteria": ">", "value": 2, "format": red})
    first.data_validation("C1", {"validate": "list", "source": f"={here}!$A$2:$A$3"})
    first.write_comment("C2", "A remark")
    first.add_table("F1:G4", {"name": "Findings", "columns": [{"header": "Code"}, {"header": "Text"}]})
    first.write_formula("H1", "=ROWS(Findings[Code])", None, 3)
    first.print_area("A1:H40")
    first.repeat_rows(0)
    chart = book.add_chart({"type": "scatter", "subtype": "straight"})
    chart.add_series({"categories": f"={here}!$A$2:$A$3", "values": f"={here}!$A$2:$A$3"})
    first.insert_chart("D6", chart)
    book.define_name("qc.D12.Ppk", f"={here}!$A$2")
    for name in sheets[1:]:
        sheet = book.add_worksheet(name)
        sheet.write_formula("A1", f"={here}!A1", bold, "Index")
        sheet.write_url("A2", f"internal:{here}!A1", None, "back")
        sheet.write_url("A3", "https://example.org/", None, "outside")
        sheet.freeze_panes(1, 0)
    book.close()
    return path
