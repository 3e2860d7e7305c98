"""Numbers that people typed as texts, read without guessing: decimal comma, thousands marks, units, "<0.5"."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from sheetqc import vocabulary

Sense = Literal["number", "ambiguous", "missing", "undetected", "words"]
Mark = Literal["", "<", ">"]

_MARKS: dict[str, Mark] = {"<": "<", "<=": "<", "≤": "<", ">": ">", ">=": ">", "≥": ">", "": ""}
_LIMIT_WORDS = re.compile(r"^(?:max(?:imum|\.)?|min(?:imum|\.)?)\s*", re.IGNORECASE)
_FIGURE = re.compile(
    r"(?P<mark><=|>=|[<>≤≥])?\s*"
    r"(?P<figure>[+-]?\s?(?:\d{1,3}(?:[ '’]\d{3})+(?:[.,]\d+)?|[.,]?\d(?:[\d.,]*\d)?[.,]?)(?:[eE][+-]?\d+)?)"
    r"(?P<rest>(?:\s|[^\d\s.,]).*)?",
    re.DOTALL,
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Figure:
    """What a text says: a number with its mark and what was typed after it, or why it is none.

    `thousands` is the other reading of an ambiguous figure, with its mark `decimal` as a thousands mark.
    """

    sense: Sense
    number: float = 0.0
    mark: Mark = ""
    rest: str = ""
    thousands: float = 0.0
    decimal: str = ""


def tidied(text: str) -> str:
    """A text with full-width forms, odd blanks and odd signs made ordinary."""
    folded = unicodedata.normalize("NFKC", text)
    for odd in "−–—‒﹣":
        folded = folded.replace(odd, "-")
    return " ".join(folded.replace("\u200b", "").replace("\ufeff", "").split())


def figure_in(text: str) -> Figure:
    """The number a text holds; ambiguous where its one mark may be a decimal or a thousands mark."""
    tidy = tidied(text)
    match = _FIGURE.fullmatch(tidy)
    if match is None:
        return Figure(sense=_wordless(text))
    whole, thousands, _ = _readings(match["figure"])
    if whole is None and thousands is None:
        return Figure(sense="words")
    mark, rest = _MARKS[match["mark"] or ""], (match["rest"] or "").strip()
    if whole is not None and thousands is not None:
        comma_or_dot = "," if "," in match["figure"] else "."
        return Figure(sense="ambiguous", number=whole, thousands=thousands, decimal=comma_or_dot, mark=mark, rest=rest)
    number = whole if whole is not None else thousands
    return Figure(sense="number", number=number or 0.0, mark=mark, rest=rest)


def limit_in(text: str) -> Figure:
    """The number of a limit, which people also write as "max 0.05" or ">= 350"."""
    return figure_in(_LIMIT_WORDS.sub("", tidied(text)))


def decimal_mark(texts: Iterable[str]) -> str | None:
    """The decimal mark that texts show beyond doubt, "," or "."; None when they show none, or both."""
    seen: set[str] = set()
    for text in texts:
        match = _FIGURE.fullmatch(_LIMIT_WORDS.sub("", tidied(text)))
        if match is not None:
            evidence = _readings(match["figure"])[2]
            if evidence:
                seen.add(evidence)
    return seen.pop() if len(seen) == 1 else None


def by_mark(figure: Figure, decimal: str | None) -> float | None:
    """The reading of an ambiguous figure by the decimal mark that other texts show; None when they show none."""
    if decimal is None:
        return None
    return figure.number if figure.decimal == decimal else figure.thousands


def nearer(figure: Figure, reference: float | None) -> float | None:
    """The reading of an ambiguous figure that a reference size makes certain; None when it does not.

    The two readings are a factor of 1000 apart: one must lie within a factor of 30 of the reference.
    """
    if not reference:
        return None
    close = [n for n in (figure.number, figure.thousands) if n and 1 / 30 < abs(n / reference) < 30]
    return close[0] if len(close) == 1 else None


def _wordless(text: str) -> Sense:
    if vocabulary.word_in("undetected", text):
        return "undetected"
    return "missing" if vocabulary.word_in("missing", text) else "words"


def _readings(figure: str) -> tuple[float | None, float | None, str]:
    """A figure read with its mark as decimal and as thousands mark, and the decimal mark it proves ("" for none)."""
    bare = re.sub(r"[ '’]", "", figure)
    blank_grouped = bool(re.search(r"\d[ '’]\d", figure))
    body, exponent = re.fullmatch(r"([^eE]*)((?:[eE][+-]?\d+)?)", bare).groups()  # type: ignore[union-attr]
    marks = [c for c in body if c in ".,"]
    if not marks:
        return float(bare), None, ""
    if len(set(marks)) == 2:
        return _two_marks(body, exponent, marks)
    mark = marks[0]
    other = "," if mark == "." else "."
    if len(marks) > 1:
        return (None, float(body.replace(mark, "") + exponent), other) if _grouped(body, mark) else (None, None, "")
    as_decimal = float(body.replace(mark, ".") + exponent)
    if blank_grouped or exponent or not _grouped(body, mark) or body.lstrip("+-").startswith("0"):
        return as_decimal, None, mark
    return as_decimal, float(body.replace(mark, "")), ""


def _two_marks(body: str, exponent: str, marks: list[str]) -> tuple[float | None, float | None, str]:
    last = marks[-1]
    first = marks[0]
    if first == last or marks.count(last) > 1 or not _grouped(body.partition(last)[0], first):
        return None, None, ""
    return float(body.replace(first, "").replace(last, ".") + exponent), None, last


def _grouped(body: str, mark: str) -> bool:
    """Whether a mark stands where thousands marks stand: 1 to 3 digits, then groups of three."""
    head, *groups = body.lstrip("+-").split(mark)
    return 1 <= len(head) <= 3 and all(len(g) == 3 and g.isdigit() for g in groups)
