"""Spreadsheet notation of a family: the same mathematics as its functions, in formulas.

Templates hold {x}, {p}, {q} and the parameter names in braces; the caller fills in cell references or plain numbers.
Function names are the en-US ones without any prefix. Every template is safe at both ends: small probabilities are
computed directly, never as one minus a number close to one.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Worksheet:
    """The expressions of one family, without a leading "=".

    `quantile` (in {p}) and `upper_quantile` (in {q}) are "" for a family whose inverse has no closed form; use
    `correction` and `upper_correction` there: one Newton step from a stored value {start}, which turns a value good
    to six digits into one good to twelve and follows small changes of the parameters.
    """

    density: str
    cdf: str
    survival: str
    quantile: str = ""
    upper_quantile: str = ""

    @property
    def correction(self) -> str:
        """The quantile at {p} from a stored {start}."""
        at = "{start}"
        return f"{at}+({{p}}-({self.cdf.replace('{x}', at)}))/({self.density.replace('{x}', at)})"

    @property
    def upper_correction(self) -> str:
        """The quantile exceeded with probability {q} from a stored {start}."""
        at = "{start}"
        return f"{at}+(({self.survival.replace('{x}', at)})-{{q}})/({self.density.replace('{x}', at)})"


def normal_density(z: str) -> str:
    """Standard normal density of the expression `z`."""
    return f"EXP(-(({z})^2)/2)/SQRT(2*PI())"


def normal_cdf(z: str) -> str:
    """Standard normal distribution function of the expression `z`, accurate in the lower tail."""
    return f"NORM.S.DIST({z},TRUE)"


def one_minus_exp(t: str) -> str:
    """1 - e^-t for t >= 0, exact for small t."""
    return f"IF(({t})>50,1-EXP(-({t})),2*EXP(-({t})/2)*SINH(({t})/2))"


def minus_log_one_minus(q: str) -> str:
    """-ln(1 - q) for 0 <= q < 1, exact for small q."""
    return f"IF(({q})<0.001,({q})*(1+({q})*(1/2+({q})*(1/3+({q})*(1/4+({q})/5)))),-LN(1-({q})))"


def above(bound: str, inside: str, otherwise: str) -> str:
    """`inside` where {x} is above `bound`, else `otherwise`."""
    return f"IF({{x}}>{bound},{inside},{otherwise})"
