"""What a cell holds, as the file has it, before anything is made of it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Nature = Literal["number", "text", "date", "boolean", "error", "uncalculated"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Content:
    """A cell that is more than a plain number or a plain text.

    `number` is the stored number, `text` what stands there in words, `formula` the formula behind it ("" for none;
    "=" for one whose text is kept elsewhere). `struck` tells of a line through it, `percent` of a percent format,
    `computed` of a formula without a stored result whose value was worked out here.
    """

    nature: Nature
    number: float | None = None
    text: str = ""
    formula: str = ""
    struck: bool = False
    percent: bool = False
    computed: bool = False


Held = float | str | Content
"""A plain number, a plain text, or more."""


def nature(held: Held) -> Nature:
    """What kind of content a cell holds."""
    if isinstance(held, Content):
        return held.nature
    return "text" if isinstance(held, str) else "number"


def plain(number: float) -> str:
    """A stored number in words, as a person typed it: 12, 0.1, 12.3."""
    return f"{number:.15g}"


def shown(held: Held) -> str:
    """What stands in a cell, in words."""
    if isinstance(held, Content):
        return held.text if held.nature != "number" or held.number is None else plain(held.number)
    return held if isinstance(held, str) else plain(held)


def number_in(held: Held) -> float | None:
    """The stored number of a number cell; None for any other."""
    if isinstance(held, float):
        return held
    if isinstance(held, Content) and held.nature == "number":
        return held.number
    return None


def formula_in(held: Held) -> str:
    """The formula of a cell, "" when it holds none."""
    return held.formula if isinstance(held, Content) else ""


def is_text(held: Held | None) -> bool:
    """Whether a cell holds words."""
    return held is not None and nature(held) == "text"
