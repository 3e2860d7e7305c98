"""The logistic family: bell-shaped with longer tails than the normal."""

from __future__ import annotations

import numpy as np

from sheetqc.stats.families.base import Array
from sheetqc.stats.families.location_scale import LocationScale
from sheetqc.stats.families.moments import standardised
from sheetqc.stats.families.standard import LOGISTIC
from sheetqc.stats.families.worksheet import Worksheet

_Z = "({x}-{location})/{scale}"


class Logistic(LocationScale):
    """F(x) = 1 / (1 + e^-z), z = (x - location) / scale."""

    name = "logistic"
    title = "logistic"
    use = "Two-sided dimensions with more far-out values than the normal allows: mixed lots, hand adjustment."
    parameter_names = ("location", "scale")
    positive = ("scale",)
    standard = LOGISTIC

    @property
    def worksheet(self) -> Worksheet:
        ratio = f"EXP(-ABS({_Z}))"
        return Worksheet(
            density=f"{ratio}/({{scale}}*(1+{ratio})^2)",
            cdf=f"IF({_Z}>0,1,{ratio})/(1+{ratio})",
            survival=f"IF({_Z}>0,{ratio},1)/(1+{ratio})",
            quantile="{location}+{scale}*LN(({p})/(1-({p})))",
            upper_quantile="{location}-{scale}*LN(({q})/(1-({q})))",
        )

    def _fit(self, x: Array) -> Array:
        return fit_logistic(x)


def fit_logistic(x: Array) -> Array:
    """Maximum likelihood for each row, shape (rows, n) -> (rows, 2).

    In a = location / scale and b = 1 / scale the log-likelihood is concave (Burridge 1981), so Newton steps, shortened
    where they are long, lead to its one maximum from the moments.
    """
    u, centre, spread = standardised(x)
    squares = u * u
    count = len(u)
    a, b = np.zeros(count), np.full(count, 1.8)
    active = np.arange(count)
    for _ in range(200):
        rows = slice(None) if len(active) == count else active
        step_a, step_b = _newton_step(u[rows], squares[rows], a[rows], b[rows])
        longest = np.maximum(np.abs(step_a), np.abs(step_b) / (0.6 * b[rows]))
        shorten = np.where(longest > 1, 1 / longest, 1.0)
        a[rows] += shorten * step_a
        b[rows] += shorten * step_b
        active = active[longest > 1e-5]
        if not len(active):
            break
    return np.stack([centre[:, 0] + spread[:, 0] * a / b, spread[:, 0] / b], axis=-1)


def _newton_step(u: Array, squares: Array, a: Array, b: Array) -> tuple[Array, Array]:
    """The Newton step in (a, b); z = b u - a, log-likelihood n log b - 2 sum log cosh(z / 2)."""
    n = u.shape[-1]
    # tanh(z / 2) by way of one exponential
    e = np.exp(np.minimum(a[:, None] - b[:, None] * u, 700.0))
    t = (1 - e) / (1 + e)
    curve = 0.5 * (1 - t * t)
    slope_a, slope_b = np.add.reduce(t, axis=-1), n / b - np.einsum("ij,ij->i", t, u)
    aa = np.add.reduce(curve, axis=-1)
    ab = -np.einsum("ij,ij->i", curve, u)
    bb = np.einsum("ij,ij->i", curve, squares) + n / (b * b)
    area = aa * bb - ab * ab
    return (bb * slope_a - ab * slope_b) / area, (aa * slope_b - ab * slope_a) / area
