"""Simple formulas computed: references, arithmetic, comparisons and a few functions; anything else is refused."""

from __future__ import annotations

import math
import operator
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

from sheetqc.intake.sheet import Area
from sheetqc.intake.sheetxml import area_of

Value = float | str | bool | None
"""What a formula gives; None stands for an empty cell."""

LookUp = Callable[[str, Area], list[Value]]
"""Gives the values of an area of a sheet ("" for the formula's own), row by row."""

_TOKEN = re.compile(
    r"""\s*(?:
    (?P<number>\d+\.?\d*(?:[eE][+-]?\d+)?|\.\d+(?:[eE][+-]?\d+)?)
    |(?P<string>"(?:[^"]|"")*")
    |(?P<reference>(?:(?:'(?:[^']|'')+'|[^\W\d][\w.]*)!)?\$?[A-Za-z]{1,3}\$?\d{1,7}(?::\$?[A-Za-z]{1,3}\$?\d{1,7})?)(?![\w(])
    |(?P<function>[A-Za-z][A-Za-z0-9.]*)\(
    |(?P<logical>TRUE|FALSE)
    |(?P<sign><>|<=|>=|[-+*/^&=<>(),%])
    )""",
    re.VERBOSE,
)
_MOST_TOKENS = 400


class NotSimple(Exception):
    """The formula is more than simple, or gives an error."""


@dataclass(frozen=True, slots=True)
class _Token:
    kind: str
    text: str


def computed(formula: str, look_up: LookUp) -> Value:
    """The value of a simple formula.

    Parameters
    ----------
    formula : with its leading equals sign
    look_up : gives the cells that it refers to

    Raises
    ------
    NotSimple : when it is not simple, or its value is an error
    """
    parser = _Parser(_tokens(formula.removeprefix("=")), look_up)
    value = _single(parser.comparison())
    if parser.left():
        raise NotSimple
    return value


def _tokens(text: str) -> list[_Token]:
    tokens: list[_Token] = []
    place = 0
    while text[place:].strip():
        match = _TOKEN.match(text, place)
        if match is None or len(tokens) > _MOST_TOKENS:
            raise NotSimple
        kind = match.lastgroup or ""
        tokens.append(_Token(kind, match[kind]))
        place = match.end()
    return tokens


class _Parser:
    """Descends through a formula's tokens; each method gives the value of its level."""

    def __init__(self, tokens: list[_Token], look_up: LookUp) -> None:
        self._tokens = tokens
        self._place = 0
        self._look_up = look_up

    def left(self) -> bool:
        return self._place < len(self._tokens)

    def _sign(self, *signs: str) -> str:
        """The next sign if it is one of these, taken; "" else."""
        if self.left() and self._tokens[self._place].kind == "sign" and self._tokens[self._place].text in signs:
            self._place += 1
            return self._tokens[self._place - 1].text
        return ""

    def _expect(self, sign: str) -> None:
        if not self._sign(sign):
            raise NotSimple

    def comparison(self) -> Value | list[Value]:
        value = self._joined()
        while sign := self._sign("=", "<>", "<=", ">=", "<", ">"):
            value = _compared(sign, _single(value), _single(self._joined()))
        return value

    def _joined(self) -> Value | list[Value]:
        value = self._sum()
        while self._sign("&"):
            value = _text(_single(value)) + _text(_single(self._sum()))
        return value

    def _sum(self) -> Value | list[Value]:
        value = self._product()
        while sign := self._sign("+", "-"):
            value = _ARITHMETIC[sign](_number(value), _number(self._product()))
        return value

    def _product(self) -> Value | list[Value]:
        value = self._power()
        while sign := self._sign("*", "/"):
            first, second = _number(value), _number(self._power())
            if sign == "/" and second == 0:
                raise NotSimple
            value = _ARITHMETIC[sign](first, second)
        return value

    def _power(self) -> Value | list[Value]:
        value = self._signed()
        while self._sign("^"):
            try:
                value = math.pow(_number(value), _number(self._signed()))
            except (ValueError, OverflowError):
                raise NotSimple from None
        return value

    def _signed(self) -> Value | list[Value]:
        if sign := self._sign("-", "+"):
            number = _number(self._signed())
            return -number if sign == "-" else number
        value = self._primary()
        while self._sign("%"):
            value = _number(value) / 100
        return value

    def _primary(self) -> Value | list[Value]:
        if self._sign("("):
            value = self.comparison()
            self._expect(")")
            return value
        if not self.left():
            raise NotSimple
        token = self._tokens[self._place]
        self._place += 1
        if token.kind == "number":
            return float(token.text)
        if token.kind == "string":
            return token.text[1:-1].replace('""', '"')
        if token.kind == "logical":
            return token.text == "TRUE"
        if token.kind == "reference":
            return self._referred(token.text)
        if token.kind == "function":
            return _call(token.text.upper(), self._arguments())
        raise NotSimple

    def _referred(self, text: str) -> list[Value]:
        sheet, _, reference = text.rpartition("!")
        area = area_of(reference)
        if area is None:
            raise NotSimple
        return self._look_up(sheet.strip("'").replace("''", "'"), area)

    def _arguments(self) -> list[Value | list[Value]]:
        arguments: list[Value | list[Value]] = []
        if self._sign(")"):
            return arguments
        arguments.append(self.comparison())
        while self._sign(","):
            arguments.append(self.comparison())
        self._expect(")")
        return arguments


_ARITHMETIC: dict[str, Callable[[float, float], float]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
}
_COMPARISONS: dict[str, Callable[[Any, Any], bool]] = {
    "=": operator.eq,
    "<>": operator.ne,
    "<": operator.lt,
    ">": operator.gt,
    "<=": operator.le,
    ">=": operator.ge,
}


def _single(value: Value | list[Value]) -> Value:
    if not isinstance(value, list):
        return value
    if len(value) != 1:
        raise NotSimple
    return value[0]


def _number(value: Value | list[Value]) -> float:
    single = _single(value)
    if isinstance(single, str):
        raise NotSimple
    return float(single or 0.0)


def _text(value: Value) -> str:
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    if isinstance(value, float):
        return f"{value:.15g}"
    return value or ""


def _compared(sign: str, first: Value, second: Value) -> bool:
    """A comparison as spreadsheets make it: an empty cell equals 0 and the empty text, texts have no case."""
    if first is None:
        first = "" if isinstance(second, str) else 0.0
    if second is None:
        second = "" if isinstance(first, str) else 0.0
    if isinstance(first, str) and isinstance(second, str):
        return _COMPARISONS[sign](first.casefold(), second.casefold())
    if isinstance(first, str) or isinstance(second, str):
        if sign in ("=", "<>"):
            return sign == "<>"
        raise NotSimple
    return _COMPARISONS[sign](float(first), float(second))


def _numbers(arguments: Sequence[Value | list[Value]]) -> list[float]:
    """The numbers among arguments; texts and empty cells of a range do not count."""
    numbers: list[float] = []
    for argument in arguments:
        if isinstance(argument, list):
            numbers.extend(v for v in argument if isinstance(v, float))
        else:
            numbers.append(_number(argument))
    return numbers


def _call(name: str, arguments: list[Value | list[Value]]) -> Value | list[Value]:
    if name == "IF" and len(arguments) in (2, 3):
        return arguments[1] if _number(arguments[0]) else (arguments[2] if len(arguments) == 3 else False)
    if name == "ROUND" and len(arguments) == 2:
        return _rounded(_number(arguments[0]), int(_number(arguments[1])))
    if name == "ABS" and len(arguments) == 1:
        return abs(_number(arguments[0]))
    if name == "ISBLANK" and len(arguments) == 1:
        return _single(arguments[0]) is None
    function = _AGGREGATES.get(name)
    if function is None:
        raise NotSimple
    numbers = _numbers(arguments)
    if not numbers and name in ("AVERAGE", "MEDIAN"):
        raise NotSimple
    return function(numbers)


def _rounded(number: float, digits: int) -> float:
    """Half away from zero, as spreadsheets round."""
    scale = 10.0**digits
    return math.copysign(math.floor(abs(number) * scale + 0.5) / scale, number)


def _median(numbers: list[float]) -> float:
    ordered = sorted(numbers)
    middle = len(ordered) // 2
    return ordered[middle] if len(ordered) % 2 else (ordered[middle - 1] + ordered[middle]) / 2


_AGGREGATES: dict[str, Callable[[list[float]], float]] = {
    "SUM": math.fsum,
    "AVERAGE": lambda numbers: math.fsum(numbers) / len(numbers),
    "MEDIAN": _median,
    "MIN": lambda numbers: min(numbers, default=0.0),
    "MAX": lambda numbers: max(numbers, default=0.0),
    "COUNT": lambda numbers: float(len(numbers)),
}
