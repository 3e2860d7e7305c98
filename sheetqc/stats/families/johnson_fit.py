"""Maximum likelihood of the Johnson families.

Both say that w(x; xi, lambda) is normal after gamma + delta w. Given xi and lambda the best gamma and delta are those
that give gamma + delta w mean 0 and variance 1, so two coordinates remain.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.families.maximise import Objective, Rows, at_rows, best_start, maximum
from sheetqc.stats.families.moments import standardised

Array = NDArray[np.float64]

_HALF_LOG_2PI_E = 0.5 * float(np.log(2 * np.pi) + 1)

# far out SU is a lognormal or a normal distribution to eight digits; the box ends there
_SU_LOW, _SU_HIGH = np.array([-19.0, -11.5]), np.array([19.0, 9.5])
_SU_GRID = [(place, width) for width in (-1.0, 0.3, 1.6) for place in (-2.2, -1.0, -0.4, 0.0, 0.4, 1.0, 2.2)]

# an end of SB closer than 0.05 s to the values would let the likelihood grow without bound
_SB_LOW, _SB_HIGH = np.log([0.05, 0.05]), np.array([9.5, 9.5])
_SB_GRID = [(a, b) for a in (-3.0, -1.2, 0.0, 1.5, 4.0, 9.5) for b in (-3.0, -1.2, 0.0, 1.5, 4.0, 9.5)]


def _standardised(w: Array) -> tuple[Array, Array, Array]:
    """gamma and delta that standardise w, and the values z they give."""
    z, centre, spread = standardised(w)
    return -centre / spread, 1 / spread, z


def fit_su(x: Array) -> Array:
    """gamma, delta, xi, lambda for each row, shape (rows, n) -> (rows, 4)."""
    u, centre, spread = standardised(x)

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        return _su_likelihood(at_rows(u, rows), phi)

    starts = np.broadcast_to(np.array(_SU_GRID)[:, None, :], (len(_SU_GRID), len(u), 2))
    phi, value, left = maximum(objective, best_start(objective, starts), _SU_LOW, _SU_HIGH, rounds=6)
    if len(left):

        def remaining(place: Array, rows: Rows) -> tuple[Array, Array]:
            return objective(place, left[rows])

        phi[left] = maximum(remaining, _at_limit(remaining, phi[left], value[left]), _SU_LOW, _SU_HIGH).place
    xi, width = np.sinh(phi[:, :1]), np.exp(phi[:, 1:])
    gamma, delta, _ = _standardised(np.arcsinh((u - xi) / width))
    return np.concatenate([gamma, delta, centre + spread * xi, spread * width], axis=-1)


def _at_limit(objective: Objective, phi: Array, value: Array) -> Array:
    """The lognormal or normal limit in place of coordinates on the way there, where the likelihood is no lower in it.

    Steps towards a limit only halve the distance; this goes there at once.
    """
    narrow = phi[:, 1] < 0
    limit = np.where(narrow, _SU_LOW[1], _SU_HIGH[1])
    place = np.where(narrow, phi[:, 0], np.arcsinh(np.sinh(phi[:, 0]) * np.exp(np.maximum(limit - phi[:, 1], 0.0))))
    there = np.clip(np.stack([place, limit], axis=-1), _SU_LOW, _SU_HIGH)
    height, _ = objective(there, np.arange(len(phi)))
    return np.where((height >= value)[:, None], there, phi)


def _su_likelihood(u: Array, phi: Array) -> tuple[Array, Array]:
    """Profile log-likelihood and gradient in (asinh xi, log lambda)."""
    n = u.shape[-1]
    xi, width = np.sinh(phi[:, :1]), np.exp(phi[:, 1:])
    d = (u - xi) / width
    square = 1 + d * d
    root = np.sqrt(square)
    # the inverse hyperbolic sine by way of the root at hand
    _, delta, z = _standardised(np.copysign(np.log(np.abs(d) + root), d))
    value = n * (np.log(delta[:, 0]) - phi[:, 1] - _HALF_LOG_2PI_E) - np.add.reduce(np.log(root), axis=-1)
    inverse = 1 / square
    pull = delta * z / root
    by_place = (np.add.reduce(pull, axis=-1) + np.einsum("ij,ij->i", d, inverse)) / width[:, 0]
    by_width = np.einsum("ij,ij->i", pull, d) - np.add.reduce(inverse, axis=-1)
    usable = np.isfinite(value)
    gradient = np.stack([by_place * np.cosh(phi[:, 0]), by_width], axis=-1)
    return np.where(usable, value, -np.inf), np.where(usable[:, None], gradient, 0.0)


def fit_sb(x: Array) -> Array:
    """gamma, delta, xi, lambda for each row, shape (rows, n) -> (rows, 4); ends at least 0.05 s outside the values."""
    smallest, largest = x.min(axis=-1, keepdims=True), x.max(axis=-1, keepdims=True)
    spread = x.std(axis=-1, keepdims=True)
    below, above = (x - smallest) / spread, (largest - x) / spread

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        return _sb_likelihood(at_rows(below, rows), at_rows(above, rows), phi)

    starts = np.broadcast_to(np.array(_SB_GRID)[:, None, :], (len(_SB_GRID), len(x), 2))
    phi = maximum(objective, best_start(objective, starts), _SB_LOW, _SB_HIGH).place
    ends = np.exp(phi)
    gamma, delta, _ = _standardised(np.log(below + ends[:, :1]) - np.log(above + ends[:, 1:]))
    width = below.max(axis=-1, keepdims=True) + ends.sum(axis=-1, keepdims=True)
    return np.concatenate([gamma, delta, smallest - spread * ends[:, :1], spread * width], axis=-1)


def _sb_likelihood(below: Array, above: Array, phi: Array) -> tuple[Array, Array]:
    """Profile log-likelihood and gradient in the logarithms of the distances of both ends from the values."""
    n = below.shape[-1]
    ends = np.exp(phi)
    left, right = below + ends[:, :1], above + ends[:, 1:]
    width = left[:, 0] + right[:, 0]
    log_left, log_right = np.log(left), np.log(right)
    _, delta, z = _standardised(log_left - log_right)
    value = n * (np.log(delta[:, 0]) + np.log(width) - _HALF_LOG_2PI_E) - (log_left + log_right).sum(axis=-1)
    pull = delta * z
    by_left = n / width - np.sum((1 + pull) / left, axis=-1)
    by_right = n / width - np.sum((1 - pull) / right, axis=-1)
    usable = np.isfinite(value)
    gradient = np.stack([by_left, by_right], axis=-1) * ends
    return np.where(usable, value, -np.inf), np.where(usable[:, None], gradient, 0.0)


def fit_sb_within(x: Array, low: float, high: float) -> Array:
    """gamma and delta for each row when both ends are given, shape (rows, n) -> (rows, 2)."""
    gamma, delta, _ = _standardised(np.log(x - low) - np.log(high - x))
    return np.concatenate([gamma, delta], axis=-1)
