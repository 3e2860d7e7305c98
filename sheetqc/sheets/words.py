"""The words of the sheets in the language of the reader."""

from __future__ import annotations

from collections.abc import Mapping

from sheetqc.assessment import State
from sheetqc.sheets.english import ENGLISH


class Words:
    """Words of one language.

    Parameters
    ----------
    table : text by key; a text may hold {placeholders}
    """

    def __init__(self, table: Mapping[str, str] = ENGLISH) -> None:
        self._table = table

    def __call__(self, key: str, **values: object) -> str:
        """The text of a key, its placeholders filled.

        Raises
        ------
        KeyError : when there is no such text
        """
        text = self._table[key]
        return text.format(**values) if values else text

    def if_any(self, key: str) -> str:
        """The text of a key, "" when there is none."""
        return self._table.get(key, "")

    def state(self, state: State) -> str:
        """The word of a verdict."""
        return self(f"state.{state}")

    def sign(self, state: State) -> str:
        """The sign of a verdict."""
        return self(f"sign.{state}")

    @staticmethod
    def percent(share: float) -> str:
        """A share in per cent: 0.95 -> 95 %."""
        return f"{float(f'{100 * share:.6g}'):g} %"
