"""Kinds of characteristic, with what is known of each before a value is seen.

The families are common practice, no single source; each `reason` says why they are the ones to consider.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Kind:
    """A kind of characteristic.

    `natural_lower` is the bound no value can pass, in any unit, None where there is none; `families` are the models an
    engineer would consider, the first choice first.
    """

    name: str
    reason: str
    natural_lower: float | None
    families: tuple[str, ...]


KINDS: tuple[Kind, ...] = (
    Kind(
        name="two-sided dimension",
        reason="A size scatters to both sides of its setting by many small causes; wear skews it a little to one side.",
        natural_lower=None,
        families=("normal", "logistic", "gumbel_max", "gumbel_min", "truncated_normal", "beta"),
    ),
    Kind(
        name="form",
        reason="A form deviation is the distance between two extremes of a surface: above 0 and skewed upwards.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "folded_normal", "rayleigh", "gumbel_max", "half_normal"),
    ),
    Kind(
        name="flatness",
        reason="Flatness is the distance between two planes that hold the surface: above 0 and skewed upwards.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "folded_normal", "rayleigh", "gumbel_max", "half_normal"),
    ),
    Kind(
        name="orientation",
        reason="Parallelism or squareness is a width of a zone: the size of a tilt without its sign, above 0.",
        natural_lower=0.0,
        families=("folded_normal", "rayleigh", "weibull", "gamma", "lognormal", "half_normal"),
    ),
    Kind(
        name="runout",
        reason="Runout is twice the distance of two axes plus form: the length of a vector with two scattering parts.",
        natural_lower=0.0,
        families=("rayleigh", "weibull", "gamma", "lognormal", "folded_normal", "half_normal"),
    ),
    Kind(
        name="concentricity",
        reason="The distance of two axes is the length of a vector with two scattering parts, so it is above 0.",
        natural_lower=0.0,
        families=("rayleigh", "weibull", "folded_normal", "gamma", "lognormal", "half_normal"),
    ),
    Kind(
        name="position",
        reason="A position deviation is twice the length of a vector whose two parts scatter about an offset.",
        natural_lower=0.0,
        families=("rayleigh", "weibull", "gamma", "lognormal", "folded_normal"),
    ),
    Kind(
        name="roughness",
        reason="Roughness is above 0 and grows by factors (tool edge, feed), so it is skewed upwards.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "loglogistic", "inverse_gaussian", "gumbel_max"),
    ),
    Kind(
        name="strength",
        reason="A part breaks at its weakest place, which gives the smallest of many strengths.",
        natural_lower=0.0,
        families=("weibull", "normal", "gumbel_min", "lognormal", "logistic"),
    ),
    Kind(
        name="burst pressure",
        reason="A vessel bursts at its weakest place, which gives the smallest of many strengths.",
        natural_lower=0.0,
        families=("weibull", "gumbel_min", "normal", "lognormal", "logistic"),
    ),
    Kind(
        name="hardness",
        reason="Hardness scatters to both sides by many small causes of material and treatment.",
        natural_lower=0.0,
        families=("normal", "logistic", "weibull", "lognormal", "gumbel_min"),
    ),
    Kind(
        name="time",
        reason="A duration is above 0, and delays have no upper end.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "inverse_gaussian", "loglogistic", "exponential"),
    ),
    Kind(
        name="life",
        reason="Life ends at the first of many possible failures, or by wear that adds up.",
        natural_lower=0.0,
        families=("weibull", "lognormal", "gamma", "exponential", "loglogistic", "inverse_gaussian"),
    ),
    Kind(
        name="leak rate",
        reason="A leak rate is above 0 and depends on powers of a gap's width, which skews it strongly.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "loglogistic", "exponential"),
    ),
    Kind(
        name="concentration",
        reason="A concentration is above 0 and comes about by factors (dilution, carry-over), which skews it.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "weibull", "loglogistic", "inverse_gaussian"),
    ),
    Kind(
        name="coating thickness",
        reason="A coating grows at a rate that differs by factors over the rack, so it is above 0 and skewed a little.",
        natural_lower=0.0,
        families=("lognormal", "gamma", "normal", "weibull", "loglogistic"),
    ),
    Kind(
        name="torque",
        reason="A torque is a force times friction: near normal when set, skewed upwards when friction rules.",
        natural_lower=0.0,
        families=("normal", "lognormal", "gamma", "logistic", "weibull"),
    ),
    Kind(
        name="force",
        reason="A force scatters to both sides of its setting by many small causes.",
        natural_lower=None,
        families=("normal", "logistic", "lognormal", "weibull", "gumbel_max"),
    ),
    Kind(
        name="mass",
        reason="A mass or filling scatters to both sides of its setting by many small causes.",
        natural_lower=0.0,
        families=("normal", "logistic", "lognormal", "gamma", "gumbel_max", "gumbel_min"),
    ),
    Kind(
        name="imbalance",
        reason="An imbalance is the length of a vector with two scattering parts, so it is above 0.",
        natural_lower=0.0,
        families=("rayleigh", "weibull", "gamma", "lognormal", "folded_normal"),
    ),
    Kind(
        name="angle",
        reason="An angle scatters to both sides of its setting by many small causes.",
        natural_lower=None,
        families=("normal", "logistic", "gumbel_max", "gumbel_min", "truncated_normal", "beta"),
    ),
    Kind(
        name="electrical value",
        reason="An electrical value scatters to both sides of its setting; sorted components lack their tails.",
        natural_lower=None,
        families=("normal", "logistic", "lognormal", "truncated_normal", "beta"),
    ),
)
"""The register of kinds."""
