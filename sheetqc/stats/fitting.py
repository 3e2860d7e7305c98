"""A family fitted to values: one frozen record."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError
from sheetqc.stats.families import Family
from sheetqc.stats.families import family as family_of

Array = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class Fit:
    """Maximum-likelihood fit of one family to one row of values."""

    family: str
    model: Family
    theta: Array
    """Parameters in the order of the family, read-only."""
    x: Array
    """The values, read-only."""
    log_likelihood: float

    @property
    def n(self) -> int:
        """Number of values."""
        return len(self.x)

    @property
    def parameters(self) -> Mapping[str, float]:
        """Name of each parameter to its value."""
        return MappingProxyType(dict(zip(self.model.parameter_names, map(float, self.theta), strict=True)))

    @property
    def aicc(self) -> float:
        """Akaike's criterion corrected for small samples; inf when there are too few values for the correction.

        Reference: Hurvich & Tsai (1989).
        """
        k = len(self.theta)
        if self.n <= k + 1:
            return float("inf")
        return -2 * self.log_likelihood + 2 * k + 2 * k * (k + 1) / (self.n - k - 1)

    @cached_property
    def information(self) -> Array:
        """Observed information matrix, shape (k, k)."""
        return self.model.information(self.x, self.theta)

    @cached_property
    def standard_errors(self) -> Mapping[str, float | None]:
        """Large-sample standard error of each parameter; None where the likelihood has no regular maximum."""
        from sheetqc.stats.families.information import standard_errors

        errors = standard_errors(self.information)
        values = (float(e) if np.isfinite(e) else None for e in errors)
        return MappingProxyType(dict(zip(self.model.parameter_names, values, strict=True)))

    def density(self, x: ArrayLike) -> Array:
        """Density at x."""
        return self.model.density(x, self.theta)

    def cdf(self, x: ArrayLike) -> Array:
        """Probability of a value at most x."""
        return self.model.cdf(x, self.theta)

    def survival(self, x: ArrayLike) -> Array:
        """Probability of a value above x."""
        return self.model.survival(x, self.theta)

    def quantile(self, p: ArrayLike) -> Array:
        """The value not exceeded with probability p."""
        return self.model.quantile(p, self.theta)

    def upper_quantile(self, q: ArrayLike) -> Array:
        """The value exceeded with probability q."""
        return self.model.upper_quantile(q, self.theta)


def fit(
    x: ArrayLike, family: str | Family, *, natural_lower: float | None = None, natural_upper: float | None = None
) -> Fit:
    """Maximum-likelihood fit of a family.

    Parameters
    ----------
    x : shape (n,), measured values
    family : name of a family, or the family itself
    natural_lower, natural_upper : bounds no value can pass, for the families between given bounds (beta, truncated
        normal, bounded Johnson); the others have no use for them

    Returns
    -------
    Fit

    Raises
    ------
    DataError : n < 2, a missing or infinite value, all values equal, values the family cannot take
    """
    values = np.array(measured_values(x))
    model = named_family(family)
    if natural_lower is not None or natural_upper is not None:
        model = model.within(natural_lower, natural_upper)
    refusal = model.refusal(values)
    if refusal:
        raise DataError(f"the {model.title} model {refusal}")
    theta = model.fit(values)
    log_likelihood = float(model.log_likelihood(values, theta))
    if not (np.all(np.isfinite(theta)) and np.isfinite(log_likelihood)):
        raise DataError(f"the {model.title} model has no best fit to these values")
    values.flags.writeable = theta.flags.writeable = False
    return Fit(family=model.name, model=model, theta=theta, x=values, log_likelihood=log_likelihood)


def named_family(family: str | Family) -> Family:
    """The family itself, given it or its name.

    Raises
    ------
    DataError : when no family has the name
    """
    if isinstance(family, Family):
        return family
    try:
        return family_of(family)
    except KeyError as error:
        raise DataError(str(error.args[0])) from error
