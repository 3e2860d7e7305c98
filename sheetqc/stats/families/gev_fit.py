"""Maximum likelihood of the generalised extreme-value family."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.families.maximise import Rows, at_rows, maximum

Array = NDArray[np.float64]

_LOW = np.array([-20.0, -15.0, -1.0])
_HIGH = np.array([20.0, 5.0, 6.0])


def reduced(z: Array, xi: Array) -> Array:
    """log(1 + xi z) / xi, and z itself at xi = 0."""
    u = np.where(xi == 0, 0.0, xi * z)
    safe = np.where(np.abs(u) < 1e-300, 1.0, xi)
    return np.where(np.abs(u) < 1e-300, z, np.log1p(u) / safe)


def fit_gev(x: Array) -> Array:
    """Location, scale and xi for each row, shape (rows, n) -> (rows, 3).

    Newton steps from the estimates by probability-weighted moments (Hosking, Wallis & Wood 1985), xi held at -1 or
    above, where the likelihood is bounded.
    """
    centre, spread = x.mean(axis=-1, keepdims=True), x.std(axis=-1, keepdims=True)
    u = (x - centre) / spread

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        return _likelihood(at_rows(u, rows), phi)

    phi, value, _ = maximum(objective, _start(u), _LOW, _HIGH)
    border = _at_minus_one(u)
    phi = np.where((objective(border, np.arange(len(u)))[0] > value)[:, None], border, phi)
    scale = np.exp(phi[:, 1])
    return np.stack([centre[:, 0] + spread[:, 0] * phi[:, 0], spread[:, 0] * scale, phi[:, 2]], axis=-1)


def _at_minus_one(u: Array) -> Array:
    """The best location and scale at xi = -1: an exponential tail that ends a hair above the largest value."""
    mean = u.mean(axis=-1)
    return np.stack([mean, np.log((u.max(axis=-1) - mean) * (1 + 1e-9)), np.full(len(u), -1.0)], axis=-1)


def _likelihood(u: Array, phi: Array) -> tuple[Array, Array]:
    """Log-likelihood and gradient in (location, log scale, xi)."""
    location, scale, xi = phi[:, :1], np.exp(phi[:, 1:2]), phi[:, 2:]
    z = (u - location) / scale
    w = 1 + xi * z
    y = reduced(z, xi)
    t = np.exp(-y)
    n = u.shape[-1]
    log_likelihood = -n * phi[:, 1] - (1 + xi[:, 0]) * y.sum(axis=-1) - t.sum(axis=-1)
    slope = t - (1 + xi)
    along = slope / w
    by_location = -along.sum(axis=-1) / scale[:, 0]
    by_scale = -n - np.einsum("ij,ij->i", along, z)
    by_xi = np.einsum("ij,ij->i", slope, _by_xi(z, w, y, xi)) - y.sum(axis=-1)
    inside = np.all(w > 0, axis=-1) & np.isfinite(log_likelihood)
    gradient = np.stack([by_location, by_scale, by_xi], axis=-1)
    return np.where(inside, log_likelihood, -np.inf), np.where(inside[:, None], gradient, 0.0)


def _by_xi(z: Array, w: Array, y: Array, xi: Array) -> Array:
    """d/d xi of log(1 + xi z) / xi; by its series where the two terms cancel."""
    v = xi * z
    series = z * z * (-1 / 2 + v * (2 / 3 - v * (3 / 4 - v * (4 / 5 - v * 5 / 6))))
    return np.where(np.abs(v) < 1e-3, series, (z / w - y) / np.where(xi == 0, 1.0, xi))


def _start(u: Array) -> Array:
    """Estimates by probability-weighted moments, xi drawn towards 0 until every value is inside the support."""
    ordered = np.sort(u, axis=-1)
    n = u.shape[-1]
    rank = np.arange(n) / max(n - 1, 1)
    first, second = ordered.mean(axis=-1), (ordered * rank).mean(axis=-1)
    third = (ordered * rank * np.maximum(np.arange(n) - 1, 0) / max(n - 2, 1)).mean(axis=-1)
    c = (2 * second - first) / (3 * third - first) - np.log(2) / np.log(3)
    xi = np.clip(-(7.8590 * c + 2.9554 * c * c), -0.8, 0.8)
    xi = np.where(np.isfinite(xi), xi, 0.1)
    location, scale = _match(first, second, xi)
    for _ in range(12):
        outside = np.any(1 + (xi / scale)[:, None] * (u - location[:, None]) <= 0.02, axis=-1)
        if not np.any(outside):
            break
        xi = np.where(outside, 0.6 * xi, xi)
        location, scale = _match(first, second, xi)
    return np.stack([location, np.log(scale), xi], axis=-1)


def _match(first: Array, second: Array, xi: Array) -> tuple[Array, Array]:
    """Location and scale that give the first two moments at this xi."""
    shape = np.where(np.abs(xi) < 1e-4, 1e-4, xi)
    rise = special.gamma(1 - shape)
    scale = np.maximum((2 * second - first) * shape / (rise * (2**shape - 1)), 0.05)
    return first - scale * (rise - 1) / shape, scale
