"""Points on the border of a likelihood region, all directions at once and without an optimiser."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
LogLikelihood = Callable[[Array], Array]
"""Log-likelihoods (m,) of parameter values (m, k) in unconstrained coordinates; -inf where impossible."""

Aims = Callable[[Array], Array]
"""Quantities (m, q) of parameter values (m, k) whose extremes are wanted."""

ROUNDS = 6
BENDS = 2
INWARDS = 0.8
"""Where on the way from the centre to an extreme rays are sent out again."""

STEEP = 50.0
"""Fall that stands for a step out of what is possible."""


def border(log_likelihood: LogLikelihood, centre: Array, drops: Array, aims: Aims | None = None) -> Array:
    """Points where the log-likelihood has fallen by each of `drops` from its value at the centre.

    Directions are spread evenly in the axes of the observed information; along each the radius is found by secant
    steps on the root of the fall, which is nearly straight, kept inside a bracket.

    Parameters
    ----------
    log_likelihood : of parameter values (m, k)
    centre : shape (k,), the maximum-likelihood point
    drops : shape (r,), each above 0
    aims : gives quantities (m, q) of parameter values; with more than 2 parameters the directions in which each of
        them changes fastest are added, since few directions fill many dimensions, and rays are sent out again from
        near the extremes found, since regions of such families are bent

    Returns
    -------
    shape (r, directions, k)
    """
    centre = np.asarray(centre, dtype=float)
    top = float(log_likelihood(centre[None])[0])
    if not np.isfinite(top):
        return np.broadcast_to(centre, (len(drops), 1, len(centre)))
    turned = axes(log_likelihood, centre, top)
    steps = directions(len(centre)) @ turned.T
    if aims is not None and len(centre) > 2:
        steps = np.concatenate([steps, _steepest(aims, centre, turned) @ turned.T])
    wanted = np.repeat(np.asarray(drops, dtype=float), len(steps))
    rays = np.tile(steps, (len(drops), 1))
    radius = radii(lambda t: top - log_likelihood(centre + t[:, None] * rays), wanted)
    found = (centre + radius[:, None] * rays).reshape(len(drops), len(steps), len(centre))
    for _ in range(BENDS if aims is not None and len(centre) > 2 else 0):
        assert aims is not None
        found = _bent(log_likelihood, centre, top, found, drops, aims, steps)
    return found


def _bent(
    log_likelihood: LogLikelihood, centre: Array, top: float, found: Array, drops: Array, aims: Aims, steps: Array
) -> Array:
    """The border points with those met on rays from near the extremes among them; shape (r, more, k)."""
    levels, _, k = found.shape
    reached = aims(found.reshape(-1, k)).reshape(levels, -1, 2)
    lowest = np.argmin(np.where(np.isfinite(reached), reached, np.inf), axis=1)
    highest = np.argmax(np.where(np.isfinite(reached), reached, -np.inf), axis=1)
    corners = np.take_along_axis(found, np.concatenate([lowest, highest], axis=1)[..., None], axis=1)
    inner = centre + INWARDS * (corners - centre)
    wanted = np.broadcast_to(np.asarray(drops)[:, None], inner.shape[:2])
    outside = top - log_likelihood(inner.reshape(-1, k)).reshape(wanted.shape) >= wanted
    inner = np.where(outside[..., None], centre, inner)
    origins = np.repeat(inner.reshape(-1, k), len(steps), axis=0)
    rays = np.tile(steps, (len(origins) // len(steps), 1))
    goal = np.repeat(wanted.reshape(-1), len(steps))
    # off the centre the fall is no parabola, and takes more rounds
    radius = radii(lambda t: top - log_likelihood(origins + t[:, None] * rays), goal, rounds=2 * ROUNDS)
    more = (origins + radius[:, None] * rays).reshape(levels, -1, k)
    return np.concatenate([found, more], axis=1)


def _steepest(aims: Aims, centre: Array, turned: Array) -> Array:
    """Unit vectors, in the axes, along which each quantity rises or falls fastest; shape (2 q, k)."""
    ahead, behind = aims(centre + 0.5 * turned.T), aims(centre - 0.5 * turned.T)
    gradient = np.nan_to_num(ahead - behind, nan=0.0, posinf=0.0, neginf=0.0).T
    length = np.linalg.norm(gradient, axis=1, keepdims=True)
    units = gradient / np.where(length > 0, length, 1.0)
    return np.concatenate([units, -units])


def directions(k: int) -> Array:
    """Unit vectors over the sphere of k dimensions, opposite ones in pairs; evenly for 2, else axes and diagonals."""
    if k == 1:
        return np.array([[1.0], [-1.0]])
    if k == 2:
        angle = np.arange(24) * np.pi / 12
        return np.stack([np.cos(angle), np.sin(angle)], axis=1)
    grid = np.stack(np.meshgrid(*[[-1.0, 0.0, 1.0]] * k, indexing="ij"), axis=-1).reshape(-1, k)
    length = np.linalg.norm(grid, axis=1)
    near = (length > 0) & (length < 1.5)
    return np.asarray(grid[near] / length[near, None])


def axes(log_likelihood: LogLikelihood, centre: Array, top: float) -> Array:
    """Columns along which a unit step costs about half a unit of log-likelihood: the root of the inverse information.

    Where the likelihood is flat to second order (a maximum on a symmetry axis) the step is the longest usable one.
    """
    k = len(centre)
    unit = _unit_steps(log_likelihood, centre, top)
    pairs = [(i, j) for i in range(k) for j in range(i)]
    single = np.concatenate([np.diag(unit), -np.diag(unit)])
    double = [unit * (np.eye(k)[i] + sign * np.eye(k)[j]) for i, j in pairs for sign in (1.0, -1.0)]
    with np.errstate(all="ignore"):
        fall = top - log_likelihood(centre + np.concatenate([single, np.array(double).reshape(-1, k)]))
    fall = np.nan_to_num(fall, nan=STEEP, posinf=STEEP, neginf=0.0)
    matrix = np.diag(np.maximum(fall[:k] + fall[k : 2 * k], 1e-3))
    for number, (i, j) in enumerate(pairs):
        together, apart = fall[2 * k + 2 * number : 2 * k + 2 * number + 2]
        matrix[i, j] = matrix[j, i] = 0.5 * (together - apart)
    size, turn = np.linalg.eigh(matrix)
    return np.asarray(unit[:, None] * turn / np.sqrt(np.maximum(size, 0.02 * size.max())))


def _unit_steps(log_likelihood: LogLikelihood, centre: Array, top: float) -> Array:
    """Step in each coordinate that costs about half a unit."""
    k = len(centre)
    step = np.full(k, 0.1) * np.maximum(1.0, 0.1 * np.abs(centre))
    for _ in range(5):
        with np.errstate(all="ignore"):
            fall = top - np.minimum(log_likelihood(centre + np.diag(step)), log_likelihood(centre - np.diag(step)))
            factor = np.sqrt(0.5 / np.maximum(fall, 1e-12))
        step = step * np.clip(np.where(np.isfinite(fall), factor, 0.2), 0.05, 8.0)
    return step


def radii(fall: Callable[[Array], Array], wanted: Array, *, rounds: int = ROUNDS) -> Array:
    """Radius along each ray at which the fall reaches what is wanted."""
    radius = np.sqrt(2 * wanted)
    inside, outside = np.zeros_like(radius), np.full_like(radius, np.inf)
    for _ in range(rounds):
        with np.errstate(all="ignore"):
            value = fall(radius)
            value = np.where(np.isnan(value), np.inf, value)
            near = value <= wanted
            inside, outside = np.where(near, radius, inside), np.where(near, outside, radius)
            guess = radius * np.sqrt(wanted / np.maximum(value, 1e-12))
        guess = np.clip(guess, 0.2 * radius, 3.0 * radius)
        usable = (guess >= inside) & (guess <= outside) & np.isfinite(value)
        bounded = np.isfinite(outside)
        middle = np.where(bounded, 0.5 * (inside + np.where(bounded, outside, 0.0)), 2 * radius)
        radius = np.where(usable, guess, middle)
    return np.asarray(np.minimum(radius, outside))
