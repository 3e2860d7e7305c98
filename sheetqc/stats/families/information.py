"""Observed information of any family by differences of its log-likelihood."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from sheetqc.stats.families.base import Family

Array = NDArray[np.float64]

_DROP = 0.02
"""The loss of log-likelihood a step is sized for: large against rounding, small against the curvature's own change."""


def observed_information(family: Family, x: Array, theta: Array) -> Array:
    """Minus the second derivatives of the log-likelihood at theta, in the parameters themselves.

    Central differences with two step sizes, extrapolated (Richardson), error about 1e-6 relative. Where theta lies on
    a border of the parameter space the entries of that parameter are nan.

    Parameters
    ----------
    x : shape (..., n)
    theta : shape (..., k)

    Returns
    -------
    shape (..., k, k)
    """
    steps = _steps(family, x, theta)
    with np.errstate(all="ignore"):
        coarse = _second_differences(family, x, theta, steps)
        fine = _second_differences(family, x, theta, 0.5 * steps)
    return -(4 * fine - coarse) / 3


def standard_errors(information: Array) -> Array:
    """Square roots of the diagonal of the inverse; nan where the matrix is not positive definite."""
    k = information.shape[-1]
    flat = information.reshape(-1, k, k)
    result = np.full((len(flat), k), np.nan)
    usable = np.flatnonzero(np.all(np.isfinite(flat), axis=(-2, -1)))
    for row in usable:
        size = np.sqrt(np.abs(np.diagonal(flat[row])))
        if np.any(size == 0):
            continue
        scaled = flat[row] / np.outer(size, size)
        if np.linalg.eigvalsh(scaled)[0] > 1e-10:
            result[row] = np.sqrt(np.diagonal(np.linalg.inv(scaled))) / size
    return result.reshape(information.shape[:-1])


def _steps(family: Family, x: Array, theta: Array) -> Array:
    """Step per parameter at which the log-likelihood falls by about `_DROP`."""
    base = family.log_likelihood(x, theta)
    spread = x.std(axis=-1) / np.sqrt(x.shape[-1])
    steps = np.array(np.broadcast_to(theta, (*base.shape, theta.shape[-1])), dtype=float)
    for i, name in enumerate(family.parameter_names):
        size = np.abs(steps[..., i]) if name in family.positive else spread
        h = 0.01 * size
        for _ in range(4):
            with np.errstate(all="ignore"):
                loss = np.maximum(
                    np.abs(base - family.log_likelihood(x, _moved(theta, i, h))),
                    np.abs(base - family.log_likelihood(x, _moved(theta, i, -h))),
                )
                factor = np.sqrt(_DROP / loss)
            factor = np.where(np.isfinite(factor), np.clip(factor, 0.05, 20.0), 0.1)
            h = np.minimum(h * factor, 0.3 * size if name in family.positive else np.inf)
        steps[..., i] = h
    return steps


def _moved(theta: Array, i: int, h: Array, j: int | None = None, g: Array | None = None) -> Array:
    moved = np.array(np.broadcast_to(theta, (*np.shape(h), theta.shape[-1])), dtype=float)
    moved[..., i] += h
    if j is not None and g is not None:
        moved[..., j] += g
    return moved


def _second_differences(family: Family, x: Array, theta: Array, steps: Array) -> Array:
    k = theta.shape[-1]
    base = family.log_likelihood(x, theta)
    result = np.empty((*base.shape, k, k))
    for i in range(k):
        h = steps[..., i]
        pair = family.log_likelihood(x, _moved(theta, i, h)) + family.log_likelihood(x, _moved(theta, i, -h))
        result[..., i, i] = (pair - 2 * base) / (h * h)
        for j in range(i):
            g = steps[..., j]
            alike = family.log_likelihood(x, _moved(theta, i, h, j, g))
            alike = alike + family.log_likelihood(x, _moved(theta, i, -h, j, -g))
            across = family.log_likelihood(x, _moved(theta, i, h, j, -g))
            across = across + family.log_likelihood(x, _moved(theta, i, -h, j, g))
            result[..., i, j] = result[..., j, i] = (alike - across) / (4 * h * g)
    return result
