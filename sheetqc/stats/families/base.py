"""The one shape of every family.

A family file declares its names and gives elementwise functions of x and the parameters; everything else (broadcasting
over resamples, likelihood, information, interval data, sampling) is derived here. Parameters are fitted by maximum
likelihood throughout: the normal standard deviation has divisor n.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.families.logs import log_difference
from sheetqc.stats.families.worksheet import Worksheet

Array = NDArray[np.float64]
Parameters = tuple[Array, ...]

_BLOCK = 32_000
"""Values fitted in one go: so many stay in the processor's cache, which halves the time of a large batch."""


class Family(ABC):
    """A family of distributions.

    Shapes: x is (..., m), theta is (..., k) with the parameters in the order of `parameter_names`; the result is
    (..., m), leading axes broadcast. A scalar x gives the leading axes of theta alone.
    """

    name: ClassVar[str]
    title: ClassVar[str]
    """Name for people."""
    use: ClassVar[str]
    """What it is used for in the trade, one sentence."""
    parameter_names: ClassVar[tuple[str, ...]]
    positive: ClassVar[tuple[str, ...]] = ()
    """Parameters that must be above 0; their logarithms are the coordinates of `internal`."""

    @property
    @abstractmethod
    def worksheet(self) -> Worksheet:
        """The spreadsheet expressions."""

    # Elementwise functions, given by each family. x and the parameters broadcast against each other.

    @abstractmethod
    def _log_density(self, x: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _cdf(self, x: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _survival(self, x: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _log_cdf(self, x: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _log_survival(self, x: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _quantile(self, probability: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _upper_quantile(self, q: Array, p: Parameters) -> Array: ...

    @abstractmethod
    def _fit(self, x: Array) -> Array:
        """Maximum likelihood for each row of x, shape (rows, n) -> (rows, k)."""

    @abstractmethod
    def refusal(self, x: ArrayLike) -> str:
        """Why the family cannot take the values, in plain words; "" when it can."""

    @abstractmethod
    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        """Lower and upper end of what can occur, each of the leading shape of theta."""

    # Derived functions.

    def _spread(self, x: ArrayLike, theta: ArrayLike) -> tuple[Array, Parameters]:
        values, table = np.asarray(x, dtype=float), np.asarray(theta, dtype=float)
        if table.shape[-1:] != (len(self.parameter_names),):
            raise ValueError(f"{self.name} has the parameters {', '.join(self.parameter_names)}")
        columns = (table[..., i] for i in range(table.shape[-1]))
        return values, tuple(c[..., None] if values.ndim else c for c in columns)

    def log_density(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Natural logarithm of the density; -inf outside the support."""
        with np.errstate(all="ignore"):
            return self._log_density(*self._spread(x, theta))

    def density(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Density, per unit of x."""
        return np.exp(self.log_density(x, theta))

    def cdf(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Probability of a value at most x."""
        with np.errstate(all="ignore"):
            return self._cdf(*self._spread(x, theta))

    def survival(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Probability of a value above x, exact in the upper tail."""
        with np.errstate(all="ignore"):
            return self._survival(*self._spread(x, theta))

    def log_cdf(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Natural logarithm of `cdf`, finite where `cdf` underflows."""
        with np.errstate(all="ignore"):
            return self._log_cdf(*self._spread(x, theta))

    def log_survival(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Natural logarithm of `survival`, finite where `survival` underflows."""
        with np.errstate(all="ignore"):
            return self._log_survival(*self._spread(x, theta))

    def quantile(self, p: ArrayLike, theta: ArrayLike) -> Array:
        """The value not exceeded with probability p."""
        with np.errstate(all="ignore"):
            return self._quantile(*self._spread(p, theta))

    def upper_quantile(self, q: ArrayLike, theta: ArrayLike) -> Array:
        """The value exceeded with probability q, exact for small q."""
        with np.errstate(all="ignore"):
            return self._upper_quantile(*self._spread(q, theta))

    def log_interval(self, low: ArrayLike, high: ArrayLike, theta: ArrayLike) -> Array:
        """Logarithm of the probability of a value in (low, high]: rounded, censored or grouped data.

        An open end is -inf or inf.
        """
        below, above = np.asarray(low, dtype=float), np.asarray(high, dtype=float)
        with np.errstate(all="ignore"):
            a, p = self._spread(below, theta)
            b, _ = self._spread(above, theta)
            from_below = log_difference(self._log_cdf(b, p), self._log_cdf(a, p))
            from_above = log_difference(self._log_survival(a, p), self._log_survival(b, p))
            return np.where(self._log_cdf(b, p) < np.log(0.5), from_below, from_above)

    def log_likelihood(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Log-likelihood of exact values, summed over the last axis of x."""
        return np.asarray(np.sum(self.log_density(x, theta), axis=-1))

    def fit(self, x: ArrayLike) -> Array:
        """Maximum-likelihood parameters.

        Parameters
        ----------
        x : shape (..., n); every leading index is fitted on its own, all at once

        Returns
        -------
        shape (..., k)
        """
        values = np.asarray(x, dtype=float)
        rows = values.reshape(-1, values.shape[-1])
        block = max(1, _BLOCK // max(values.shape[-1], 1))
        with np.errstate(all="ignore"):
            parts = [self._fit(rows[i : i + block]) for i in range(0, len(rows), block)]
        theta = parts[0] if len(parts) == 1 else np.concatenate(parts)
        return theta.reshape(*values.shape[:-1], len(self.parameter_names))

    def within(self, lower: float | None, upper: float | None) -> Family:
        """The family for values that cannot pass the given natural bounds; itself where it has no use for them."""
        return self

    def normal_scale(self, x: ArrayLike) -> Array | None:
        """The values on the scale on which they are normal when the family is right, free of its parameters.

        None for a family that no such scale exists for.
        """
        return None

    def information(self, x: ArrayLike, theta: ArrayLike) -> Array:
        """Observed information, minus the second derivatives of the log-likelihood: shape (..., k, k)."""
        from sheetqc.stats.families.information import observed_information

        return observed_information(self, np.asarray(x, dtype=float), np.asarray(theta, dtype=float))

    def internal(self, theta: ArrayLike) -> Array:
        """Unconstrained coordinates: logarithms of the positive parameters, the others as they are."""
        table = np.array(theta, dtype=float)
        for i in self._positive_columns():
            table[..., i] = np.log(table[..., i])
        return table

    def external(self, phi: ArrayLike) -> Array:
        """The parameters at unconstrained coordinates; inverse of `internal`."""
        table = np.array(phi, dtype=float)
        for i in self._positive_columns():
            table[..., i] = np.exp(table[..., i])
        return table

    def _positive_columns(self) -> list[int]:
        return [i for i, name in enumerate(self.parameter_names) if name in self.positive]

    def sample(self, theta: ArrayLike, size: int, rng: np.random.Generator) -> Array:
        """Random values, shape (..., size), by inversion."""
        table = np.asarray(theta, dtype=float)
        u = rng.random((*table.shape[:-1], size))
        # random() can give 0 exactly, where an unbounded family has no quantile
        return self.quantile(np.maximum(u, 2.0**-54), table)


def everywhere(theta: ArrayLike) -> tuple[Array, Array]:
    """The support of a family that takes any value."""
    lead = np.asarray(theta, dtype=float).shape[:-1]
    return np.full(lead, -np.inf), np.full(lead, np.inf)


def above_zero(theta: ArrayLike) -> tuple[Array, Array]:
    """The support of a family that begins at 0."""
    lead = np.asarray(theta, dtype=float).shape[:-1]
    return np.zeros(lead), np.full(lead, np.inf)
