"""The families, one file each. The register `FAMILIES` is the only list of what exists.

The package is callable: `families()` gives the names.
"""

from __future__ import annotations

import sys
from types import ModuleType

from sheetqc.stats.families.base import Family
from sheetqc.stats.families.beta import Beta
from sheetqc.stats.families.exponential import Exponential
from sheetqc.stats.families.folded_normal import FoldedNormal
from sheetqc.stats.families.gamma import Gamma
from sheetqc.stats.families.gamma_threshold import GammaThreshold
from sheetqc.stats.families.gev import Gev
from sheetqc.stats.families.gumbel_max import GumbelMax
from sheetqc.stats.families.gumbel_min import GumbelMin
from sheetqc.stats.families.half_normal import HalfNormal
from sheetqc.stats.families.inverse_gaussian import InverseGaussian
from sheetqc.stats.families.johnson_sb import JohnsonSB
from sheetqc.stats.families.johnson_su import JohnsonSU
from sheetqc.stats.families.logistic import Logistic
from sheetqc.stats.families.loglogistic import Loglogistic
from sheetqc.stats.families.lognormal import Lognormal
from sheetqc.stats.families.lognormal_threshold import LognormalThreshold
from sheetqc.stats.families.normal import Normal
from sheetqc.stats.families.normal_mixture import NormalMixture
from sheetqc.stats.families.rayleigh import Rayleigh
from sheetqc.stats.families.truncated_normal import TruncatedNormal
from sheetqc.stats.families.weibull import Weibull
from sheetqc.stats.families.weibull_threshold import WeibullThreshold

__all__ = ["FAMILIES", "Family", "family", "names"]

FAMILIES: tuple[Family, ...] = (
    Normal(),
    Lognormal(),
    LognormalThreshold(),
    Weibull(),
    WeibullThreshold(),
    Gamma(),
    GammaThreshold(),
    Exponential(),
    HalfNormal(),
    FoldedNormal(),
    Rayleigh(),
    Logistic(),
    Loglogistic(),
    GumbelMax(),
    GumbelMin(),
    Gev(),
    Beta(),
    TruncatedNormal(),
    InverseGaussian(),
    JohnsonSU(),
    JohnsonSB(),
    NormalMixture(),
)


def names() -> tuple[str, ...]:
    """The names of all families, in the order of the register."""
    return tuple(f.name for f in FAMILIES)


def family(name: str) -> Family:
    """The family of a name.

    Raises
    ------
    KeyError : when no family has the name
    """
    for candidate in FAMILIES:
        if candidate.name == name:
            return candidate
    raise KeyError(f"no family is called {name!r}; there are {', '.join(names())}")


class _CallablePackage(ModuleType):
    def __call__(self) -> tuple[str, ...]:
        return names()


sys.modules[__name__].__class__ = _CallablePackage
