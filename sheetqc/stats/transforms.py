"""Power transforms to normality: Box-Cox and Yeo-Johnson, with the profile interval of lambda.

An index computed on a transformed scale is another index than the quantile one; transformed values serve to look at
shape, and their quantiles are carried back.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError

Array = NDArray[np.float64]
Mapping = Callable[[Array, float], Array]

SEARCH = 30.0
"""Largest absolute lambda looked at."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PowerTransform:
    """A fitted transform; `lower` and `upper` are the ends of the profile interval of lambda, None where it is open."""

    lambda_: float
    log_likelihood: float
    lower: float | None
    upper: float | None
    confidence: float
    _forward: Mapping = field(repr=False)
    _backward: Mapping = field(repr=False)

    def transform(self, x: ArrayLike) -> Array:
        """Values on the transformed scale; nan outside its domain. Order is kept."""
        with np.errstate(all="ignore"):
            return self._forward(np.asarray(x, dtype=float), self.lambda_)

    def back(self, y: ArrayLike) -> Array:
        """Values on the original scale; nan for what no value is carried to."""
        with np.errstate(all="ignore"):
            return self._backward(np.asarray(y, dtype=float), self.lambda_)


def box_cox(x: ArrayLike, confidence: float = 0.95) -> PowerTransform:
    """Box-Cox transform by maximum likelihood.

    Parameters
    ----------
    x : shape (n,), n >= 3, all above 0
    confidence : of the profile interval of lambda

    Raises
    ------
    DataError : for values at or below 0; no constant is added to get round it

    Reference: Box & Cox (1964), J. R. Statist. Soc. B 26, 211-252.
    """
    values = measured_values(x, at_least=3)
    if values.min() <= 0:
        raise DataError(
            f"the smallest value is {values.min():g}: a power needs values above 0, and a constant added to get there "
            "would be a choice of its own; use a family with a threshold instead"
        )
    logs = np.log(values)
    # in units of the geometric mean every power is of the same size, whatever lambda
    centred = logs - logs.mean()

    def profile(lam: float) -> float:
        powers = centred if lam == 0 else np.expm1(lam * centred) / lam
        return float(-0.5 * len(values) * math.log(np.var(powers)) - logs.sum())

    return _fitted(profile, box_cox_forward, box_cox_backward, confidence)


def yeo_johnson(x: ArrayLike, confidence: float = 0.95) -> PowerTransform:
    """Yeo-Johnson transform by maximum likelihood; takes values of either sign.

    Parameters
    ----------
    x : shape (n,), n >= 3

    Reference: Yeo & Johnson (2000), Biometrika 87, 954-959.
    """
    values = measured_values(x, at_least=3)
    slope = float(np.sum(np.sign(values) * np.log1p(np.abs(values))))

    def profile(lam: float) -> float:
        variance = float(np.var(yeo_johnson_forward(values, lam)))
        if not variance > 0 or not math.isfinite(variance):
            return -math.inf
        return -0.5 * len(values) * math.log(variance) + (lam - 1) * slope

    return _fitted(profile, yeo_johnson_forward, yeo_johnson_backward, confidence)


def box_cox_forward(x: Array, lam: float) -> Array:
    """(x^lambda - 1) / lambda, the logarithm at lambda 0; nan for x at or below 0."""
    logs = np.log(np.where(x > 0, x, np.nan))
    return logs if lam == 0 else np.asarray(np.expm1(lam * logs) / lam)


def box_cox_backward(y: Array, lam: float) -> Array:
    """Inverse of `box_cox_forward`; nan where 1 + lambda y is not above 0."""
    if lam == 0:
        return np.exp(y)
    return np.exp(np.log1p(np.where(lam * y > -1, lam * y, np.nan)) / lam)


def yeo_johnson_forward(x: Array, lam: float) -> Array:
    """A power of x + 1 above 0, and of 1 - x with 2 - lambda below."""
    up, down = np.log1p(np.maximum(x, 0.0)), np.log1p(np.maximum(-x, 0.0))
    with np.errstate(over="ignore"):
        above = up if lam == 0 else np.expm1(lam * up) / lam
        below = down if lam == 2 else np.expm1((2 - lam) * down) / (2 - lam)
    return np.where(x >= 0, above, -below)


def yeo_johnson_backward(y: Array, lam: float) -> Array:
    """Inverse of `yeo_johnson_forward`; nan for what no value is carried to."""
    up, down = np.maximum(y, 0.0), np.maximum(-y, 0.0)
    above = np.expm1(up) if lam == 0 else np.expm1(np.log1p(np.where(lam * up > -1, lam * up, np.nan)) / lam)
    rest = 2 - lam
    below = np.expm1(down) if rest == 0 else np.expm1(np.log1p(np.where(rest * down > -1, rest * down, np.nan)) / rest)
    return np.where(y >= 0, above, -below)


def _fitted(
    profile: Callable[[float], float], forward: Mapping, backward: Mapping, confidence: float
) -> PowerTransform:
    from scipy.optimize import minimize_scalar

    grid = np.linspace(-5, 5, 41)
    heights = [profile(lam) for lam in grid]
    top = int(np.argmax(heights))
    low, high = grid[max(top - 1, 0)], grid[min(top + 1, len(grid) - 1)]
    if top in (0, len(grid) - 1):
        low, high = -SEARCH, SEARCH
    found = minimize_scalar(lambda lam: -profile(lam), bounds=(low, high), method="bounded", options={"xatol": 1e-10})
    lam, height = float(found.x), -float(found.fun)
    drop = 0.5 * float(special.chdtri(1, 1 - confidence))
    return PowerTransform(
        lambda_=lam,
        log_likelihood=height,
        lower=_end(profile, lam, height - drop, -1.0),
        upper=_end(profile, lam, height - drop, 1.0),
        confidence=confidence,
        _forward=forward,
        _backward=backward,
    )


def _end(profile: Callable[[float], float], lam: float, level: float, way: float) -> float | None:
    """Where the profile falls to a level on one side; None when it does not within the search."""
    from scipy.optimize import brentq

    step = 0.05
    while profile(lam + way * step) > level:
        step *= 2
        if step > SEARCH:
            return None
    return float(brentq(lambda at: profile(at) - level, lam, lam + way * step, xtol=1e-10))
