"""Where things stand on the sheet of a characteristic: columns in pixels, rows counted from 0."""

from __future__ import annotations

LEFT = (132, 66, 66, 66)
"""Widths of the columns with words and numbers, from A on."""

GAP = 16
"""Width of the empty column between words and pictures."""

RIGHT = (78, 78, 78, 78, 78, 78, 78)
"""Widths of the columns behind the pictures."""

LAST = len(LEFT) + len(RIGHT)
"""The last column of the printed page."""

PICTURE_COLUMN = len(LEFT) + 1
PICTURE_WIDTH = sum(RIGHT)
PAGE_WIDTH = sum(LEFT) + GAP + PICTURE_WIDTH

ROW = 17
"""Height of an ordinary row."""

WORKINGS = 26
"""First column of the workings, right of the page: AA."""

TITLE, SUBTITLE, BAND, REASON, ENTRY_LABELS, ENTRIES, STATUS, FIRST_SECTION = range(8)
HEIGHTS = {TITLE: 26, SUBTITLE: 16, BAND: 32, REASON: 34, ENTRY_LABELS: 18, ENTRIES: 20, STATUS: 18}

LOWER_ENTRY, UPPER_ENTRY, REQUIREMENT_ENTRY, MODEL_ENTRY = 0, 1, 2, PICTURE_COLUMN
"""Columns of the entry cells."""
