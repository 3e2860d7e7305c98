"""Families that are a standard form moved and stretched, on the scale of x or of log x."""

from __future__ import annotations

from abc import abstractmethod
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from sheetqc.stats.families.base import Array, Family, Parameters, above_zero, everywhere
from sheetqc.stats.families.standard import Standard


class LocationScale(Family):
    """x = location + scale * z, with z of a standard form."""

    standard: ClassVar[Standard]

    def _z(self, x: Array, p: Parameters) -> Array:
        return (x - p[0]) / p[1]

    def _log_density(self, x: Array, p: Parameters) -> Array:
        return self.standard.log_density(self._z(x, p)) - np.log(p[1])

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return self.standard.cdf(self._z(x, p))

    def _survival(self, x: Array, p: Parameters) -> Array:
        return self.standard.survival(self._z(x, p))

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return self.standard.log_cdf(self._z(x, p))

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return self.standard.log_survival(self._z(x, p))

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return p[0] + p[1] * self.standard.quantile(probability)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return p[0] + p[1] * self.standard.upper_quantile(q)

    def refusal(self, x: ArrayLike) -> str:
        return ""

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return everywhere(theta)


class LogLocationScale(Family):
    """log x = location + scale * z, with z of a standard form; x above 0."""

    standard: ClassVar[Standard]

    @abstractmethod
    def _z(self, x: Array, p: Parameters) -> Array:
        """The standard value belonging to x > 0."""

    @abstractmethod
    def _x(self, z: Array, p: Parameters) -> Array:
        """Inverse of `_z`."""

    @abstractmethod
    def _log_slope(self, p: Parameters) -> Array:
        """Logarithm of dz / d log x."""

    def _log_density(self, x: Array, p: Parameters) -> Array:
        safe = np.where(x > 0, x, 1.0)
        inside = self.standard.log_density(self._z(safe, p)) + self._log_slope(p) - np.log(safe)
        return np.where(x > 0, inside, -np.inf)

    def _cdf(self, x: Array, p: Parameters) -> Array:
        return np.where(x > 0, self.standard.cdf(self._z(np.where(x > 0, x, 1.0), p)), 0.0)

    def _survival(self, x: Array, p: Parameters) -> Array:
        return np.where(x > 0, self.standard.survival(self._z(np.where(x > 0, x, 1.0), p)), 1.0)

    def _log_cdf(self, x: Array, p: Parameters) -> Array:
        return np.where(x > 0, self.standard.log_cdf(self._z(np.where(x > 0, x, 1.0), p)), -np.inf)

    def _log_survival(self, x: Array, p: Parameters) -> Array:
        return np.where(x > 0, self.standard.log_survival(self._z(np.where(x > 0, x, 1.0), p)), 0.0)

    def _quantile(self, probability: Array, p: Parameters) -> Array:
        return self._x(self.standard.quantile(probability), p)

    def _upper_quantile(self, q: Array, p: Parameters) -> Array:
        return self._x(self.standard.upper_quantile(q), p)

    def refusal(self, x: ArrayLike) -> str:
        return needs_above_zero(x)

    def support(self, theta: ArrayLike) -> tuple[Array, Array]:
        return above_zero(theta)


def needs_above_zero(x: ArrayLike) -> str:
    """The refusal of a family that takes no 0 and nothing below it."""
    return "needs values above 0" if np.min(np.asarray(x)) <= 0 else ""


def needs_not_below_zero(x: ArrayLike) -> str:
    """The refusal of a family that takes 0 but nothing below it."""
    return "needs values of at least 0" if np.min(np.asarray(x)) < 0 else ""
