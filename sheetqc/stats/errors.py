"""What the statistics raise on purpose."""

from __future__ import annotations


class DataError(ValueError):
    """The values cannot carry what was asked of them; the message says why in plain words."""
