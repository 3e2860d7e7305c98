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
"""Largest absolute lambda looked at, unless the values lie so close together that their powers hardly differ."""
SPREADS = 4.0
"""Largest absolute lambda looked at then, in standard deviations of the logarithms."""

CLOSEST = 1e-10
"""Range of the logarithms, beside their size, below which rounding alone would choose the power."""


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
        with np.errstate(over="ignore", invalid="ignore"):
            variance = float(np.var(centred if lam == 0 else np.expm1(lam * centred) / lam))
        if not variance > 0 or not math.isfinite(variance):
            return -math.inf
        return float(-0.5 * len(values) * math.log(variance) - logs.sum())

    return _fitted(profile, box_cox_forward, box_cox_backward, confidence, _reach(logs))


def yeo_johnson(x: ArrayLike, confidence: float = 0.95) -> PowerTransform:
    """Yeo-Johnson transform by maximum likelihood; takes values of either sign.

    Parameters
    ----------
    x : shape (n,), n >= 3

    Reference: Yeo & Johnson (2000), Biometrika 87, 954-959.
    """
    values = measured_values(x, at_least=3)
    logs = np.sign(values) * np.log1p(np.abs(values))
    slope = float(np.sum(logs))

    def profile(lam: float) -> float:
        with np.errstate(over="ignore", invalid="ignore"):
            variance = float(np.var(yeo_johnson_forward(values, lam)))
        if not variance > 0 or not math.isfinite(variance):
            return -math.inf
        return -0.5 * len(values) * math.log(variance) + (lam - 1) * slope

    return _fitted(profile, yeo_johnson_forward, yeo_johnson_backward, confidence, _reach(logs))


def _reach(logs: Array) -> float:
    if float(np.ptp(logs)) < CLOSEST * max(1.0, float(np.abs(logs).max())):
        raise DataError("the values differ too little, beside their size, for a power to change their shape")
    return max(SEARCH, SPREADS / float(logs.std()))


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
    profile: Callable[[float], float], forward: Mapping, backward: Mapping, confidence: float, reach: float
) -> PowerTransform:
    from scipy.optimize import minimize_scalar

    # fine near the powers in use, coarser and coarser beyond
    tail = np.geomspace(5, reach, 40)[1:]
    grid = np.concatenate([-tail[::-1], np.linspace(-5, 5, 41), tail])
    top = int(np.argmax([profile(lam) for lam in grid]))
    if top in (0, len(grid) - 1):
        raise DataError(f"no power makes these values look normal: the best one lies beyond {grid[top]:.0f}")
    low, high = grid[top - 1], grid[top + 1]
    found = minimize_scalar(lambda lam: -profile(lam), bounds=(low, high), method="bounded", options={"xatol": 1e-10})
    lam, height = float(found.x), -float(found.fun)
    if not math.isfinite(height):
        raise DataError("the values reach too far out for their powers to be computed")
    drop = 0.5 * float(special.chdtri(1, 1 - confidence))
    return PowerTransform(
        lambda_=lam,
        log_likelihood=height,
        lower=_end(profile, lam, height - drop, -reach),
        upper=_end(profile, lam, height - drop, reach),
        confidence=confidence,
        _forward=forward,
        _backward=backward,
    )


def _end(profile: Callable[[float], float], lam: float, level: float, reach: float) -> float | None:
    """Where the profile falls to a level on the side of `reach`; None when it does not within it."""
    from scipy.optimize import brentq

    step = math.copysign(0.05, reach)
    while profile(lam + step) > level:
        step *= 2
        if abs(step) > abs(reach):
            return None
    # where the powers overflow the profile is minus infinity, with which no root can be bracketed
    return float(brentq(lambda at: max(profile(at) - level, -1e9), lam, lam + step, xtol=1e-10))
