"""Places that a text refers to: cells, whole columns, defined names, columns of tables."""

from __future__ import annotations

import re
from dataclasses import dataclass

from sheetqc.intake.book import Book
from sheetqc.intake.sheet import Area, Sheet
from sheetqc.intake.sheetxml import area_of, column_number

_LAST_ROW = 1 << 20
_WITH_SHEET = re.compile(r"(?:(?P<sheet>'(?:[^']|'')+'|[^'!\[\]]+)!)?(?P<reference>[^!]+)")
_WHOLE_COLUMNS = re.compile(r"\$?([A-Za-z]{1,3}):\$?([A-Za-z]{1,3})")
_TABLE_COLUMN = re.compile(r"(?P<table>[^\W\d][\w.\\]*)\[\[?(?P<column>[^\[\]]+)\]?\]")
_SEPARATOR = re.compile(r"[,;](?=(?:[^']*'[^']*')*[^']*$)")
_DEEPEST = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class Place:
    """An area of a sheet; `whole` tells that it is as long as the sheet, so that headings stand in it too."""

    sheet: Sheet
    area: Area
    whole: bool = False


class References:
    """Finds what texts refer to in one workbook; sheets are read once."""

    def __init__(self, book: Book) -> None:
        self._book = book
        self._sheets: dict[str, Sheet | None] = {}
        self._names = {name.casefold(): text for name, text in book.names.items()}

    def places(self, text: str, own: Sheet) -> tuple[Place, ...] | None:
        """The places a text refers to, in its order; None when it is no reference, or refers to nothing.

        Parameters
        ----------
        text : such as 'Run 1'!C12:C136, C:C, a defined name, Table1[D12], several of them parted by commas
        own : the sheet the text stands on
        """
        return self._places(text, own, 0)

    def _places(self, text: str, own: Sheet, depth: int) -> tuple[Place, ...] | None:
        found: list[Place] = []
        for piece in _SEPARATOR.split(text.strip().removeprefix("=")):
            places = self._one(piece.strip(), own, depth)
            if places is None:
                return None
            found.extend(places)
        return tuple(found) or None

    def _one(self, text: str, own: Sheet, depth: int) -> tuple[Place, ...] | None:
        table = _TABLE_COLUMN.fullmatch(text)
        if table is not None:
            return self._table_column(table["table"], table["column"])
        match = _WITH_SHEET.fullmatch(text)
        if match is None:
            return None
        named = self._names.get(match["reference"].casefold())
        if named is not None and depth < _DEEPEST:
            return self._places(named, own, depth + 1)
        sheet = own if match["sheet"] is None else self.sheet(match["sheet"])
        if sheet is None:
            return None
        return _in_sheet(match["reference"].strip(), sheet)

    def sheet(self, name: str) -> Sheet | None:
        """A sheet by its name, quoted or not."""
        bare = name.strip()
        if bare[:1] == "'":
            bare = bare[1:-1].replace("''", "'")
        key = bare.casefold()
        if key not in self._sheets:
            self._sheets[key] = self._book.sheet(bare)
        return self._sheets[key]

    def _table_column(self, table: str, column: str) -> tuple[Place, ...] | None:
        found = self._book.table_column(table, column.strip())
        if found is None:
            return None
        sheet = self.sheet(found[0])
        return None if sheet is None else (Place(sheet=sheet, area=found[1]),)


def _in_sheet(reference: str, sheet: Sheet) -> tuple[Place, ...] | None:
    columns = _WHOLE_COLUMNS.fullmatch(reference)
    if columns is not None:
        left, right = sorted((column_number(columns[1]), column_number(columns[2])))
        area = Area(top=1, left=left, bottom=_LAST_ROW, right=right)
        return (Place(sheet=sheet, area=area, whole=True),)
    cells = area_of(reference)
    return None if cells is None else (Place(sheet=sheet, area=cells),)
