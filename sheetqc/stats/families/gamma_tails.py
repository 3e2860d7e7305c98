"""Tails of the gamma distribution beyond where they underflow, and in spreadsheet notation."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import special

Array = NDArray[np.float64]

_TINY = 1e-290
_NODES, _WEIGHTS = np.polynomial.laguerre.laggauss(14)


def log_lower(a: Array, y: Array) -> Array:
    """log P(a, y); by the first terms of its power series where P underflows."""
    direct = np.asarray(special.gammainc(a, y))
    if np.all(direct > _TINY):
        return np.log(direct)
    term, total = np.ones_like(direct), np.ones_like(direct)
    for i in range(1, 60):
        term = term * y / (a + i)
        total = total + term
    series = a * np.log(y) - y - special.gammaln(a + 1) + np.log(total)
    return np.where(direct > _TINY, np.log(direct), series)


def log_upper(a: Array, y: Array) -> Array:
    """log Q(a, y); by Gauss-Laguerre quadrature where Q underflows."""
    direct = np.asarray(special.gammaincc(a, y))
    if np.all(direct > _TINY):
        return np.log(direct)
    gap = np.maximum(y - a + 1, 1.0)
    total = np.zeros_like(direct)
    for node, weight in zip(_NODES, _WEIGHTS, strict=True):
        total = total + weight * np.exp(node - node * y / gap + (a - 1) * np.log1p(node / gap))
    far = a * np.log(y) - y - special.gammaln(a) - np.log(gap) + np.log(total)
    return np.where(direct > _TINY, np.log(direct), np.where(np.isinf(y), -np.inf, far))


def upper_tail_expression(x: str, shape: str, scale: str) -> str:
    """Upper tail of the gamma distribution in spreadsheet notation.

    Spreadsheets offer only the lower tail, and the chi-square tail cuts its degrees of freedom to whole numbers. Below
    one in a thousand the tail is the density times a Gauss-Laguerre sum of 14 terms, good to ten digits.
    """
    y = f"({x}/{scale})"
    gap = f"({y}-{shape}+1)"
    nodes = "{{" + ",".join(f"{v:.15g}" for v in _NODES) + "}}"
    logs = "{{" + ",".join(f"{v:.15g}" for v in _NODES + np.log(_WEIGHTS)) + "}}"
    total = f"SUMPRODUCT(EXP({logs}-{nodes}*{y}/{gap}+({shape}-1)*LN(1+{nodes}/{gap})))"
    lower = f"GAMMA.DIST({x},{shape},{scale},TRUE)"
    return f"IF({lower}<0.999,1-{lower},{x}*GAMMA.DIST({x},{shape},{scale},FALSE)/{gap}*{total})"
