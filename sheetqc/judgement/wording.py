"""Numbers and lists as people write them."""

from __future__ import annotations

import math
from collections.abc import Sequence


def number(value: float, digits: int = 4) -> str:
    """A number with so many significant digits, without an exponent where it can be avoided."""
    if value == 0 or not math.isfinite(value):
        return f"{value:g}"
    if 1e-5 <= abs(value) < 1e9:
        decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
        text = f"{value:.{decimals}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    return f"{value:.{digits}g}"


def index(value: float) -> str:
    """An index to two decimals, cut off rather than rounded up: 1.329 is not 1.33."""
    return f"{math.floor(value * 100 + 1e-9) / 100:.2f}"


def probability(value: float) -> str:
    """A p-value."""
    return "below 0.001" if value < 0.001 else f"{value:.3f}" if value < 0.1 else f"{value:.2f}"


def percent(share: float) -> str:
    """A share in per cent."""
    return f"{number(100 * share, 2)} %"


def ppm(value: float) -> str:
    """A rate in parts per million, in per cent where that reads better."""
    if value >= 10_000:
        return percent(value / 1e6)
    return "below 0.01 ppm" if value < 0.01 else f"{number(value, 2)} ppm"


def listed(words: Sequence[str], *, most: int = 6) -> str:
    """Words in a row: a, b and c; the tail of a long list is counted."""
    if len(words) > most:
        return f"{', '.join(words[:most])} and {len(words) - most} more"
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def plural(count: int, word: str, many: str | None = None) -> str:
    """A count with its word: 1 value, 2 values."""
    return f"{count:,}".replace(",", " ") + f" {word if count == 1 else many or word + 's'}"
