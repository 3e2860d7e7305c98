"""Formulas from templates: prefixes of newer functions, placeholders filled with references."""

from __future__ import annotations

import re
from functools import lru_cache

from sheetqc.stats.families import Family

_NEWER = (
    "BETA.INV",
    "BETA.DIST",
    "CHISQ.DIST",
    "CHISQ.INV",
    "GAMMA.DIST",
    "GAMMA.INV",
    "NORM.DIST",
    "NORM.INV",
    "NORM.S.DIST",
    "NORM.S.INV",
    "STDEV.S",
    "T.DIST",
    "T.INV",
    "AGGREGATE",
)
_CALL = re.compile(r"(?<![\w.])(" + "|".join(re.escape(name) for name in _NEWER) + r")\(")

TAIL = 0.00135
"""Probability beyond each of the outer quantiles of ISO 22514-2."""


@lru_cache(maxsize=512)
def prefixed(template: str) -> str:
    """A template whose newer functions carry the prefix that the file format asks for."""
    return _CALL.sub(r"_xlfn.\1(", template)


def filled(template: str, **references: object) -> str:
    """A formula from a template; the prefixes are set before anything is filled in."""
    return prefixed(template).format(**references)


def literal(text: str) -> str:
    """A text as a formula writes it. Only for the project's own words, never for text of the input."""
    return '"' + text.replace('"', '""') + '"'


def first_true(*cases: tuple[str, str], otherwise: str) -> str:
    """Nested IFs: the value of the first condition that holds."""
    return "".join(f"IF({condition},{value}," for condition, value in cases) + otherwise + ")" * len(cases)


def of_family(member: Family, kind: str, parameters: tuple[str, ...], **arguments: str) -> str:
    """An expression of a family (density, cdf, survival, ...) in references to its parameters.

    `arguments` fill {x}, {p}, {q} and {start}.
    """
    template = getattr(member.worksheet, kind)
    return filled(template, **dict(zip(member.parameter_names, parameters, strict=True)), **arguments)


def choice(selector: str, expressions: tuple[str, ...]) -> str:
    """The expression at the place that `selector` tells, counted from 1."""
    return expressions[0] if len(expressions) == 1 else f"CHOOSE({selector},{','.join(expressions)})"


def constant(value: float) -> str:
    """A number as formulas write it."""
    return repr(float(value)).upper()


def cut_off(reference: str) -> str:
    """A number cut off after two decimals: an index of 1.329 is not 1.33."""
    return f"FLOOR({reference}*100+1E-9,1)/100"
