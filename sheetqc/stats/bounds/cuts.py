"""How far below the best a log-likelihood may lie and still count as possible."""

from __future__ import annotations

from dataclasses import dataclass

from scipy import special


@dataclass(frozen=True, slots=True, kw_only=True)
class Cuts:
    """`union`: distance from the best of all candidates; `own`: distance from the family's own best."""

    union: float
    own: float


def cuts_for(n: int, confidence: float, prior: str) -> Cuts:
    """The cuts for a one-sided confidence.

    The own cut is the likelihood-ratio cut of a one-sided bound, half the square of the normal quantile, enlarged for
    the parameters fitted (Bartlett's correction to first order). With nothing known beforehand the union takes half
    the square of the two-sided quantile (1.92 at 95 %), which keeps the error near what is promised for every shape
    tried; a declared kind or model needs the own cut only.
    """
    one_sided = 0.5 * float(special.ndtri(confidence)) ** 2
    two_sided = 0.5 * float(special.ndtri(0.5 + confidence / 2)) ** 2
    own = one_sided * (1 + 3 / n)
    return Cuts(union=two_sided if prior == "open" else own, own=own)
