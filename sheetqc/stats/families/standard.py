"""Standard forms (location 0, scale 1) that several families are made of."""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import NDArray
from scipy import special

from sheetqc.stats.families.logs import log_one_minus_exp

Array = NDArray[np.float64]

_LOG_ROOT_2PI = 0.5 * float(np.log(2 * np.pi))


class Standard(Protocol):
    """The functions of a standard form, elementwise."""

    def log_density(self, z: Array) -> Array: ...
    def cdf(self, z: Array) -> Array: ...
    def survival(self, z: Array) -> Array: ...
    def log_cdf(self, z: Array) -> Array: ...
    def log_survival(self, z: Array) -> Array: ...
    def quantile(self, p: Array) -> Array: ...
    def upper_quantile(self, q: Array) -> Array: ...


class StandardNormal:
    """The standard normal distribution."""

    def log_density(self, z: Array) -> Array:
        return -0.5 * z * z - _LOG_ROOT_2PI

    def cdf(self, z: Array) -> Array:
        return np.asarray(special.ndtr(z))

    def survival(self, z: Array) -> Array:
        return np.asarray(special.ndtr(-z))

    def log_cdf(self, z: Array) -> Array:
        return np.asarray(special.log_ndtr(z))

    def log_survival(self, z: Array) -> Array:
        return np.asarray(special.log_ndtr(-z))

    def quantile(self, p: Array) -> Array:
        return np.asarray(special.ndtri(p))

    def upper_quantile(self, q: Array) -> Array:
        return np.asarray(-special.ndtri(q))


class StandardLogistic:
    """The standard logistic distribution."""

    def log_density(self, z: Array) -> Array:
        size = np.abs(z)
        return np.asarray(-size - 2 * np.log1p(np.exp(-size)))

    def cdf(self, z: Array) -> Array:
        return np.asarray(special.expit(z))

    def survival(self, z: Array) -> Array:
        return np.asarray(special.expit(-z))

    def log_cdf(self, z: Array) -> Array:
        return np.asarray(special.log_expit(z))

    def log_survival(self, z: Array) -> Array:
        return np.asarray(special.log_expit(-z))

    def quantile(self, p: Array) -> Array:
        return np.asarray(special.logit(p))

    def upper_quantile(self, q: Array) -> Array:
        return np.asarray(-special.logit(q))


class StandardLargest:
    """The standard distribution of largest values: F(z) = exp(-exp(-z))."""

    def log_density(self, z: Array) -> Array:
        return -z - np.exp(-z)

    def cdf(self, z: Array) -> Array:
        return np.exp(-np.exp(-z))

    def survival(self, z: Array) -> Array:
        return np.asarray(-np.expm1(-np.exp(-z)))

    def log_cdf(self, z: Array) -> Array:
        return -np.exp(-z)

    def log_survival(self, z: Array) -> Array:
        # e^-z vanishes beyond 700 although its logarithm is plain
        return np.where(z > 700, -z, log_one_minus_exp(np.exp(-z)))

    def quantile(self, p: Array) -> Array:
        return -np.log(-np.log(p))

    def upper_quantile(self, q: Array) -> Array:
        return -np.log(-np.log1p(-q))


class StandardSmallest:
    """The standard distribution of smallest values: S(z) = exp(-exp(z)), the mirror image of the largest."""

    def log_density(self, z: Array) -> Array:
        return LARGEST.log_density(-z)

    def cdf(self, z: Array) -> Array:
        return LARGEST.survival(-z)

    def survival(self, z: Array) -> Array:
        return LARGEST.cdf(-z)

    def log_cdf(self, z: Array) -> Array:
        return LARGEST.log_survival(-z)

    def log_survival(self, z: Array) -> Array:
        return LARGEST.log_cdf(-z)

    def quantile(self, p: Array) -> Array:
        return -LARGEST.upper_quantile(p)

    def upper_quantile(self, q: Array) -> Array:
        return -LARGEST.quantile(q)


NORMAL = StandardNormal()
LOGISTIC = StandardLogistic()
LARGEST = StandardLargest()
SMALLEST = StandardSmallest()
