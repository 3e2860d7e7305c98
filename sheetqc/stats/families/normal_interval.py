"""Probability of a normal value between two points, without cancellation."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.families.logs import log_difference
from sheetqc.stats.families.newton import Rows, falling_root

Array = NDArray[np.float64]

_LOG_ROOT_2PI = 0.5 * float(np.log(2 * np.pi))
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
_NODES, _WEIGHTS = 0.5 * (_NODES + 1), 0.5 * _WEIGHTS


def log_normal_interval(start: Array, width: Array) -> Array:
    """log(Phi(start + width) - Phi(start)) for width >= 0.

    Narrow intervals by Gauss-Legendre quadrature of the density relative to its height at the start, wide ones by the
    tail on the side where both ends lie.
    """
    start, width = np.broadcast_arrays(start, width)
    end = start + width
    by_lower = log_difference(special.log_ndtr(end), special.log_ndtr(start))
    by_upper = log_difference(special.log_ndtr(-start), special.log_ndtr(-end))
    both = np.log1p(-special.ndtr(start) - special.ndtr(-end))
    result = np.where(end <= 0, by_lower, np.where(start >= 0, by_upper, both))
    narrow = (width * np.maximum(np.maximum(np.abs(start), width), 1.0) < 1) & np.isfinite(start)
    if np.any(narrow):
        result = np.asarray(result).copy()
        a, h = start[narrow], width[narrow]
        t = h[..., None] * _NODES
        relative = np.exp(-t * (a[..., None] + 0.5 * t)) @ _WEIGHTS
        result[narrow] = np.log(h) - 0.5 * a * a - _LOG_ROOT_2PI + np.log(relative)
    return np.asarray(result)


def interval_width(start: Array, target: Array) -> Array:
    """The width at which `log_normal_interval` reaches the target; 0 for a target of -inf."""
    start, target = np.broadcast_arrays(start, target)
    shape = target.shape
    a, goal = start.ravel(), target.ravel()
    width = np.zeros(goal.shape)
    take = np.flatnonzero(np.isfinite(goal))

    def equation(log_width: Array, rows: Rows) -> tuple[Array, Array]:
        left, h = a[take][rows], np.exp(log_width)
        log_probability = log_normal_interval(left, h)
        end = left + h
        slope = h * np.exp(-0.5 * end * end - _LOG_ROOT_2PI - log_probability)
        return goal[take][rows] - log_probability, -slope

    if len(take):
        # the density is at most 0.4, and nothing lies further than 40 from the middle
        low = goal[take] + _LOG_ROOT_2PI - 1e-9
        high = np.log(np.maximum(-a[take], 0.0) + 40.0)
        width[take] = np.exp(falling_root(equation, 0.5 * (low + high), low, high))
    return width.reshape(shape)
