"""The normal family between given bounds: what sorting leaves."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from sheetqc.stats.families.base import Array, Family, Parameters
from sheetqc.stats.families.maximise import Rows, maximum
from sheetqc.stats.families.normal_interval import interval_width, log_normal_interval
from sheetqc.stats.families.worksheet import Worksheet

_LOG_ROOT_2PI = 0.5 * float(np.log(2 * np.pi))
WIDEST = 30.0
"""The fitted sd is at most this many sample standard deviations: wider, the shape no longer changes visibly."""


class TruncatedNormal(Family):
    """A normal with the given mean and sd of which only values between lower and upper are seen.

    Without bounds it is the plain normal. mean and sd are those before sorting.
    """

    name = "truncated_normal"
    title = "truncated normal"
    use = "Lots sorted to one or both limits before they were measured; bounds given."
    parameter_names = ("mean", "sd")
    positive = ("sd",)

    def __init__(self, lower: float = -np.inf, upper: float = np.inf) -> None:
        self.lower, self.upper = float(lower), float(upper)

    def within(self, lower: float | None, upper: float | None) -> Family:
        return TruncatedNormal(-np.inf if lower is None else lower, np.inf if upper is None else upper)

    @property
    def worksheet(self) -> Worksheet:
        from sheetqc.stats.families.truncated_sheet import truncated_worksheet

        return truncated_worksheet(self.lower, self.upper)

    def _log_total(self, p: Parameters) -> Array:
        return _log_between(np.asarray(self.lower), np.asarray(self.upper), p[0], p[1])

    def _log_density(self, x: Array, p: Parameters) -> Array:
        z = (x - p[0]) / p[1]
        inside = -0.5 * z * z - _LOG_ROOT_2PI - np.log(p[1]) - self._log_total(p)
        return np.where((x >= self.lower) & (x <= self.upper), inside, -np.inf)

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        v = np.clip(x, self.lower, self.upper)
        below = _log_between(np.asarray(self.lower), v, p[0], p[1]) - self._log_total(p)
        return np.minimum(below, 0.0)

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        v = np.clip(x, self.lower, self.upper)
        above = _log_between(v, np.asarray(self.upper), p[0], p[1]) - self._log_total(p)
        return np.minimum(above, 0.0)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.exp(self._log_cdf(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.exp(self._log_survival(x, p))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        lower = self._from_low(np.log(probability), p)
        return np.where(probability <= 0.5, lower, self._from_high(np.log1p(-probability), p))

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        higher = self._from_high(np.log(q), p)
        return np.where(q <= 0.5, higher, self._from_low(np.log1p(-q), p))

    def _from_low(self, log_probability: Array, p: Parameters) -> Array:
        """The value with this probability below it, counted from the lower bound."""
        target = log_probability + self._log_total(p)
        if np.isinf(self.lower):
            return np.asarray(p[0] + p[1] * special.ndtri_exp(target))
        return np.minimum(self.lower + p[1] * interval_width((self.lower - p[0]) / p[1], target), self.upper)

    def _from_high(self, log_probability: Array, p: Parameters) -> Array:
        """The value with this probability above it, counted from the upper bound."""
        target = log_probability + self._log_total(p)
        if np.isinf(self.upper):
            return np.asarray(p[0] - p[1] * special.ndtri_exp(target))
        return np.maximum(self.upper - p[1] * interval_width((p[0] - self.upper) / p[1], target), self.lower)

    def normal_scale(self, x: ArrayLike) -> Array | None:
        return np.asarray(x, dtype=float) if np.isinf(self.lower) and np.isinf(self.upper) else None

    def _fit(self, x: Array) -> Array:
        if np.isinf(self.lower) and np.isinf(self.upper):
            return np.stack([x.mean(axis=-1), x.std(axis=-1)], axis=-1)
        return _fit_between(x, self.lower, self.upper)

    def refusal(self, x: ArrayLike) -> str:
        values = np.asarray(x)
        if np.min(values) < self.lower or np.max(values) > self.upper:
            return f"needs values between {self.lower:g} and {self.upper:g}"
        return ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        lead = np.shape(theta)[:-1]
        return np.full(lead, self.lower), np.full(lead, self.upper)


def _log_between(low: Array, high: Array, mean: Array, sd: Array) -> Array:
    """log of the normal probability between low and high, counted from the end that lies nearer to the middle."""
    a, b, width = (low - mean) / sd, (high - mean) / sd, (high - low) / sd
    mirrored = np.isinf(a) | (np.isfinite(b) & (a < 0) & (b < -a))
    whole = np.isinf(a) & np.isinf(b)
    start = np.where(whole, 0.0, np.where(mirrored, -b, a))
    width = np.where(low >= high, 0.0, width)
    return np.where(whole & (a < b), 0.0, log_normal_interval(start, width))


def _fit_between(x: Array, lower: float, upper: float) -> Array:
    """Newton steps in the natural parameters mean / sd^2 and 1 / sd^2, in which the likelihood has one maximum."""
    centre, spread = x.mean(axis=-1, keepdims=True), x.std(axis=-1, keepdims=True)
    low, high = (lower - centre[:, 0]) / spread[:, 0], (upper - centre[:, 0]) / spread[:, 0]
    n = x.shape[-1]

    def objective(phi: Array, rows: Rows) -> tuple[Array, Array]:
        precision = np.exp(phi[:, 1])
        mean, sd = phi[:, 0] / precision, 1 / np.sqrt(precision)
        log_total = _log_between(low[rows], high[rows], mean, sd)
        first, second = _moments(low[rows], high[rows], mean, sd, log_total)
        # the values have mean 0 and mean square 1 in these units
        value = -n * (0.5 * precision * (1 + mean * mean) + np.log(sd) + _LOG_ROOT_2PI + log_total)
        gradient = n * np.stack([-first, -0.5 * precision * (1 - second)], axis=-1)
        usable = np.isfinite(value) & np.all(np.isfinite(gradient), axis=-1)
        return np.where(usable, value, -np.inf), np.where(usable[:, None], gradient, 0.0)

    box = np.array([400.0, 12.0])
    phi = maximum(objective, np.zeros((len(x), 2)), np.array([-400.0, -2 * np.log(WIDEST)]), box).place
    precision = np.exp(phi[:, 1:])
    return np.concatenate([centre + spread * phi[:, :1] / precision, spread / np.sqrt(precision)], axis=-1)


def _moments(low: Array, high: Array, mean: Array, sd: Array, log_total: Array) -> tuple[Array, Array]:
    """First and second moment of the truncated normal."""
    ends = []
    for end in (low, high):
        z = (end - mean) / sd
        height = np.exp(-0.5 * z * z - _LOG_ROOT_2PI - log_total)
        ends.append((height, np.where(np.isinf(z), 0.0, z) * height))
    z_first = ends[0][0] - ends[1][0]
    z_second = 1 + ends[0][1] - ends[1][1]
    first = mean + sd * z_first
    return first, mean * mean + 2 * mean * sd * z_first + sd * sd * z_second
