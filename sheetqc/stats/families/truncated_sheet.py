"""The truncated normal family in spreadsheet notation."""

from __future__ import annotations

from math import isinf

from sheetqc.stats.families.worksheet import Worksheet


def truncated_worksheet(lower: float, upper: float) -> Worksheet:
    """Its expressions between the given bounds, either of which may be infinite."""
    at_low = "" if isinf(lower) else f"((({lower!r})-{{mean}})/{{sd}})"
    at_high = "" if isinf(upper) else f"((({upper!r})-{{mean}})/{{sd}})"
    total = _between(at_low, at_high)
    z = "(({x}-{mean})/{sd})"

    def inside(text: str, below: str, beyond: str) -> str:
        if not isinf(upper):
            text = f"IF({{x}}>=({upper!r}),{beyond},{text})"
        return text if isinf(lower) else f"IF({{x}}<=({lower!r}),{below},{text})"

    from_low = f"(({{x}}-({lower!r}))/{{sd}})"
    from_high = f"((({upper!r})-{{x}})/{{sd}})"
    below = _near(at_low, from_low, _between(at_low, z)) if at_low else _between("", z)
    above = _near(f"(-{at_high})", from_high, _between(z, at_high)) if at_high else _between(z, "")
    return Worksheet(
        density=inside(f"EXP(-({z}^2)/2)/({{sd}}*SQRT(2*PI())*{total})", "0", "0"),
        cdf=inside(f"{below}/{total}", "0", "1"),
        survival=inside(f"{above}/{total}", "1", "0"),
        quantile="" if at_low or at_high else "{mean}+{sd}*NORM.S.INV({p})",
        upper_quantile="" if at_low or at_high else "{mean}-{sd}*NORM.S.INV({q})",
    )


def _phi(z: str) -> str:
    return f"NORM.S.DIST({z},TRUE)"


def _between(a: str, b: str) -> str:
    """Normal probability between a and b, "" standing for an open end; from the tail where both lie."""
    if not a and not b:
        return "1"
    if not a:
        return _phi(b)
    if not b:
        return _phi(f"-{a}")
    return f"IF({a}>0,{_phi(f'-{a}')}-{_phi(f'-{b}')},{_phi(b)}-{_phi(a)})"


def _near(a: str, h: str, otherwise: str) -> str:
    """Normal probability of the interval of width h above a: by its power series where the difference cancels."""
    series = (
        f"EXP(-({a}^2)/2)/SQRT(2*PI())*{h}*(1-{h}*({a}/2-{h}*(({a}^2-1)/6-{h}*(({a}^3-3*{a})/24"
        f"-{h}*({a}^4-6*{a}^2+3)/120))))"
    )
    return f"IF({h}*MAX(1,ABS({a}))<0.005,{series},{otherwise})"
