"""Number formats: the codes that need no declaration, and which of them show a date."""

from __future__ import annotations

import re

FIRST_FREE = 164
BUILT_IN = {
    0: "General",
    1: "0",
    2: "0.00",
    3: "#,##0",
    4: "#,##0.00",
    9: "0%",
    10: "0.00%",
    11: "0.00E+00",
    12: "# ?/?",
    13: "# ??/??",
    14: "mm-dd-yy",
    15: "d-mmm-yy",
    16: "d-mmm",
    17: "mmm-yy",
    18: "h:mm AM/PM",
    19: "h:mm:ss AM/PM",
    20: "h:mm",
    21: "h:mm:ss",
    22: "m/d/yy h:mm",
    37: "#,##0 ;(#,##0)",
    38: "#,##0 ;[Red](#,##0)",
    39: "#,##0.00;(#,##0.00)",
    40: "#,##0.00;[Red](#,##0.00)",
    45: "mm:ss",
    46: "[h]:mm:ss",
    47: "mmss.0",
    48: "##0.0E+0",
    49: "@",
}
# Texts, escaped signs, fillers, and bracketed colours and conditions say nothing about dates.
_SILENT = re.compile(r'"[^"]*"|\\.|_.|\*.|\[(?![hms]+\])[^\]]*\]', re.IGNORECASE)


def shows_date(code: str) -> bool:
    """Whether a number format shows a day, so that its numbers depend on the date system.

    Hours and minutes alone do not: they are the same in both date systems.
    """
    bare = _SILENT.sub("", code).lower()
    return "general" not in bare and bool(re.search(r"[dy]|mmm", bare) or re.fullmatch(r"\W*m{1,2}\W*", bare))
