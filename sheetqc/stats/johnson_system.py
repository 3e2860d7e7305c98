"""Johnson's system from four quantiles: which of its three forms, and its parameters.

z = gamma + delta * form((x - xi) / lambda) is standard normal, with the forms ln(u / (1 - u)) (SB, bounded), arsinh(u)
(SU, unbounded) and ln(u) (SL, with one bound).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError

Array = NDArray[np.float64]
Form = Literal["SB", "SU", "SL"]

LOGNORMAL_BAND = 1e-3
"""Distance of the ratio from 1 within which the form is taken for the lognormal one."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Johnson:
    """A member of the system; `scale` is Johnson's lambda.

    `ratio` told the form of a fit to quantiles: below 1 SB, above 1 SU; None for a fit to moments.
    """

    form: Form
    gamma: float
    delta: float
    xi: float
    scale: float
    ratio: float | None = None
    quantiles: tuple[float, ...] = ()
    """The four sample quantiles it rests on, at -3z, -z, z and 3z; none for a fit to moments."""

    def transform(self, x: ArrayLike) -> Array:
        """Standard normal scores; nan outside the bounds of the form. Order is kept."""
        u = (np.asarray(x, dtype=float) - self.xi) / self.scale
        with np.errstate(all="ignore"):
            if self.form == "SU":
                inner = np.arcsinh(u)
            elif self.form == "SB":
                inner = np.log(u / (1 - u))
            else:
                inner = np.log(u)
        return np.asarray(self.gamma + self.delta * inner)

    def back(self, z: ArrayLike) -> Array:
        """Values of standard normal scores."""
        inner = (np.asarray(z, dtype=float) - self.gamma) / self.delta
        if self.form == "SU":
            u = np.sinh(inner)
        elif self.form == "SB":
            u = special.expit(inner)
        else:
            u = np.exp(inner)
        return np.asarray(self.xi + self.scale * u)


def johnson(x: ArrayLike, z: float = 0.524) -> Johnson:
    """The member of Johnson's system that goes through four sample quantiles.

    Parameters
    ----------
    x : shape (n,), n >= 10
    z : half the distance of the inner quantiles in standard normal units; the outer ones stand at 3z

    Raises
    ------
    DataError : when quantiles coincide or 3z lies outside the values

    Reference: Slifker & Shapiro (1980), Technometrics 22, 239-246.
    """
    values = np.sort(measured_values(x, at_least=10))
    four = _quantiles(values, z)
    m, p, n = four[3] - four[2], four[2] - four[1], four[1] - four[0]
    if min(m, p, n) <= 0:
        raise DataError("too many equal values: quantiles that should differ coincide")
    ratio = m * n / p**2
    middle = (four[1] + four[2]) / 2
    if abs(ratio - 1) <= LOGNORMAL_BAND:
        return _lognormal(m, p, n, z, middle, ratio, four)
    fit = _bounded if ratio < 1 else _unbounded
    return fit(m / p, n / p, p, z, middle, ratio, four)


def _quantiles(values: Array, z: float) -> tuple[float, ...]:
    """Order statistics at n F(z) + 1/2, interpolated."""
    n = len(values)
    places = n * special.ndtr(z * np.array([-3.0, -1.0, 1.0, 3.0])) + 0.5
    if places[0] < 1 or places[3] > n:
        raise DataError(f"z is {z:g}: its outer quantiles lie beyond the {n} values")
    return tuple(float(q) for q in np.interp(places, np.arange(1, n + 1), values))


def _unbounded(
    mp: float, np_: float, p: float, z: float, middle: float, ratio: float, four: tuple[float, ...]
) -> Johnson:
    delta = 2 * z / math.acosh((mp + np_) / 2)
    gamma = delta * math.asinh((np_ - mp) / (2 * math.sqrt(mp * np_ - 1)))
    scale = 2 * p * math.sqrt(mp * np_ - 1) / ((mp + np_ - 2) * math.sqrt(mp + np_ + 2))
    xi = middle + p * (np_ - mp) / (2 * (mp + np_ - 2))
    return Johnson(form="SU", gamma=gamma, delta=delta, xi=xi, scale=scale, ratio=ratio, quantiles=four)


def _bounded(
    mp: float, np_: float, p: float, z: float, middle: float, ratio: float, four: tuple[float, ...]
) -> Johnson:
    pm, pn = 1 / mp, 1 / np_
    delta = z / math.acosh(0.5 * math.sqrt((1 + pm) * (1 + pn)))
    root = math.sqrt((1 + pm) * (1 + pn) - 4)
    gamma = delta * math.asinh((pn - pm) * root / (2 * (pm * pn - 1)))
    scale = p * math.sqrt(((1 + pm) * (1 + pn) - 2) ** 2 - 4) / (pm * pn - 1)
    xi = middle - scale / 2 + p * (pn - pm) / (2 * (pm * pn - 1))
    return Johnson(form="SB", gamma=gamma, delta=delta, xi=xi, scale=scale, ratio=ratio, quantiles=four)


def _lognormal(m: float, p: float, n: float, z: float, middle: float, ratio: float, four: tuple[float, ...]) -> Johnson:
    mp = m / p
    if mp <= 1:
        raise DataError("the values lean to the left with no bound above: turn their sign, or use another family")
    delta = 2 * z / math.log(mp)
    gamma = delta * math.log((mp - 1) / (p * math.sqrt(mp)))
    xi = middle - p / 2 * (mp + 1) / (mp - 1)
    return Johnson(form="SL", gamma=gamma, delta=delta, xi=xi, scale=1.0, ratio=ratio, quantiles=four)
