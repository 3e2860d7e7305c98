"""Maximum likelihood of a mixture of two normals."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sheetqc.stats.families.maximise import Rows, at_rows, maximum

Array = NDArray[np.float64]

_LOGIT = float(np.log(0.98 / 0.02))
_LOW = np.array([-_LOGIT, -20.0, np.log(0.1), -20.0, np.log(0.1)])
_HIGH = np.array([_LOGIT, 20.0, np.log(5.0), 20.0, np.log(5.0)])
_SPLITS = (0.1, 0.3, 0.5, 0.7, 0.9)
_WINDOWS = ((0.0, 0.2), (0.2, 0.4), (0.3, 0.7), (0.4, 0.6), (0.6, 0.8), (0.8, 1.0))
_EM_STEPS = 8
_CLIMBS = 3


def fit_mixture(x: Array) -> Array:
    """weight, mean1, sd1, mean2, sd2 for each row, shape (rows, n) -> (rows, 5).

    A few steps of expectation and maximisation (Dempster, Laird & Rubin 1977) from cuts and windows of the ordered
    values and from two normals on the same place, then Newton steps from the best three; there may be several maxima.
    """
    centre, spread = x.mean(axis=-1, keepdims=True), x.std(axis=-1, keepdims=True)
    u = np.sort((x - centre) / spread, axis=-1)

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        return _likelihood(at_rows(u, rows), phi)

    every = np.arange(len(u))
    starts = np.stack([_improved(u, share) for share in _first_shares(u)])
    heights = np.stack([objective(start, every)[0] for start in starts])
    order = np.argsort(-heights, axis=0)[:_CLIMBS]
    found = [maximum(objective, starts[chosen, every], _LOW, _HIGH, rounds=120) for chosen in order]
    best = np.argmax(np.stack([top.value for top in found]), axis=0)
    phi = np.stack([top.place for top in found])[best, every]
    return _ordered(phi, centre, spread)


def _first_shares(u: Array) -> list[Array]:
    """For each start the share of every ordered value that belongs to the first component."""
    n = u.shape[-1]
    rank = np.arange(n) + 0.5
    sets = [rank < max(2, round(s * n)) for s in _SPLITS]
    sets += [(rank > low * n) & (rank < high * n) for low, high in _WINDOWS]
    cuts = [np.broadcast_to(chosen.astype(float), u.shape) for chosen in sets]
    narrow = np.exp(-0.5 * (u / 0.5) ** 2) / 0.5
    wide = np.exp(-0.5 * (u / 1.6) ** 2) / 1.6
    return [*cuts, narrow / (narrow + wide)]


def _improved(u: Array, share: Array) -> Array:
    """Coordinates after some steps of expectation and maximisation from the shares."""
    phi = _from_shares(u, share)
    for _ in range(_EM_STEPS):
        phi = _from_shares(u, _terms(u, phi)[2])
    return phi


def _from_shares(u: Array, share: Array) -> Array:
    columns = []
    for part in (share, 1 - share):
        total = part.sum(axis=-1) + 1e-12
        mean = np.einsum("ij,ij->i", part, u) / total
        variance = np.einsum("ij,ij->i", part, (u - mean[:, None]) ** 2) / total
        columns += [mean, 0.5 * np.log(variance + 1e-12)]
    weight = share.mean(axis=-1)
    logit = np.log(weight + 1e-12) - np.log(1 - weight + 1e-12)
    return np.asarray(np.clip(np.stack([logit, *columns], axis=-1), _LOW, _HIGH))


def _terms(u: Array, phi: Array) -> tuple[Array, Array, Array, Array]:
    """Standard values of both components, the share of the first, and the log density of every value."""
    logit, mean1, log_sd1, mean2, log_sd2 = (phi[:, i : i + 1] for i in range(5))
    a, b = (u - mean1) * np.exp(-log_sd1), (u - mean2) * np.exp(-log_sd2)
    one = -np.logaddexp(0, -logit) - 0.5 * a * a - log_sd1
    two = -np.logaddexp(0, logit) - 0.5 * b * b - log_sd2
    gap = two - one
    return a, b, 1 / (1 + np.exp(gap)), np.maximum(one, two) + np.log1p(np.exp(-np.abs(gap)))


def _likelihood(u: Array, phi: Array) -> tuple[Array, Array]:
    """Log-likelihood, less its constant, and gradient in (logit weight, mean1, log sd1, mean2, log sd2)."""
    a, b, share, log_density = _terms(u, phi)
    rest = 1 - share
    weight = 1 / (1 + np.exp(-phi[:, 0]))
    gradient = np.stack(
        [
            share.sum(axis=-1) - u.shape[-1] * weight,
            np.einsum("ij,ij->i", share, a) * np.exp(-phi[:, 2]),
            np.einsum("ij,ij,ij->i", share, a, a) - share.sum(axis=-1),
            np.einsum("ij,ij->i", rest, b) * np.exp(-phi[:, 4]),
            np.einsum("ij,ij,ij->i", rest, b, b) - rest.sum(axis=-1),
        ],
        axis=-1,
    )
    return log_density.sum(axis=-1), gradient


def _ordered(phi: Array, centre: Array, spread: Array) -> Array:
    """The parameters in the unit of x, the component of the smaller mean first."""
    weight = 1 / (1 + np.exp(-phi[:, :1]))
    mean1, mean2 = centre + spread * phi[:, 1:2], centre + spread * phi[:, 3:4]
    sd1, sd2 = spread * np.exp(phi[:, 2:3]), spread * np.exp(phi[:, 4:5])
    plain = np.concatenate([weight, mean1, sd1, mean2, sd2], axis=-1)
    swapped = np.concatenate([1 - weight, mean2, sd2, mean1, sd1], axis=-1)
    return np.where(mean1 <= mean2, plain, swapped)
