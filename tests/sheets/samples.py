"""Samples of an invented pump maker's characteristics, one for each shape that the sheets must cope with."""

from __future__ import annotations

import numpy as np

from tests.sheets.made import Asked

EVERY = (
    "normal", "lognormal", "weibull", "gamma", "exponential", "folded_normal", "rayleigh", "logistic", "loglogistic",
    "gumbel_max", "gumbel_min",
)  # fmt: skip


def bore(**changes: object) -> Asked:
    """Two limits, subgroups of five, one value read from a text."""
    rng = np.random.default_rng(3)
    values = np.round(25.012 + 0.004 * rng.standard_normal(125), 3)
    given = {"id": "D12", "values": values, "lower": 25.0, "upper": 25.03, "size": 5, "copied": (3,), **changes}
    return Asked(**given)  # type: ignore[arg-type]


def runout() -> Asked:
    """An upper limit only, the folded normal model in use (its quantiles have no closed form)."""
    rng = np.random.default_rng(4)
    values = np.round(np.abs(0.006 + 0.005 * rng.standard_normal(60)), 4)
    families = ("folded_normal", "weibull", "gamma", "normal")
    return Asked(id="R1", name="Shaft runout", values=values, upper=0.03, families=families, in_use="folded_normal")


def burst() -> Asked:
    """A lower limit only, every family a candidate."""
    rng = np.random.default_rng(5)
    values = np.round(88 * rng.weibull(14, 125), 1)
    return Asked(id="P7", name="Burst pressure", unit="bar", values=values, lower=45, families=EVERY)


def without_limits() -> Asked:
    """No limit at all."""
    rng = np.random.default_rng(6)
    return Asked(id="L 3", name="Leak rate", unit="ml/min", values=np.round(np.exp(0.4 * rng.standard_normal(50)), 2),
                 condition="There is no specification limit.")  # fmt: skip


def too_few() -> Asked:
    """Nothing can be computed."""
    return Asked(id="few", values=[1.0, 2.0], upper=3.0, condition="There are only 2 values.")


def all_equal() -> Asked:
    """No spread."""
    return Asked(id="eq", values=[1.0] * 40, upper=3.0, condition="All 40 values are 1.")


def no_values() -> Asked:
    """Nothing was measured."""
    return Asked(id="none", values=[], upper=3.0, condition="There are no values.")


def every_sample() -> tuple[Asked, ...]:
    """All of them."""
    return bore(), runout(), burst(), without_limits(), too_few(), all_equal(), no_values()
