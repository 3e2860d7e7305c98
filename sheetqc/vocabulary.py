"""The words sheetqc knows: tags, headings, kinds, models, studies; in the languages of `vocabulary.json`."""

from __future__ import annotations

import json
import unicodedata
from dataclasses import dataclass
from functools import cache, lru_cache
from importlib import resources
from typing import Any, get_args

from sheetqc.kinds import KINDS, Kind
from sheetqc.study import IndexName, Stage

__all__ = [
    "KINDS",
    "MODELS",
    "STUDIES",
    "TAGS",
    "Heading",
    "Kind",
    "field_of",
    "headings",
    "index_named",
    "key",
    "kind_named",
    "model_named",
    "stage_named",
    "tag_of",
    "word_in",
]

TAGS = ("qc:study", "qc:characteristics", "qc:measurements", "qc:gauge", "qc:counts", "qc:places")
"""Texts of a cell that opens a block."""

MODELS = (
    "",
    "normal",
    "lognormal",
    "lognormal_threshold",
    "weibull",
    "weibull_threshold",
    "gamma",
    "gamma_threshold",
    "exponential",
    "half_normal",
    "folded_normal",
    "rayleigh",
    "logistic",
    "loglogistic",
    "gumbel_max",
    "gumbel_min",
    "gev",
    "beta",
    "truncated_normal",
    "inverse_gaussian",
    "johnson_su",
    "johnson_sb",
    "normal_mixture",
)
"""Names of families that may stand under Model; empty leaves the choice to the judgement."""

STUDIES: tuple[Stage, ...] = get_args(Stage)
"""Words that may stand beside Study."""

_OTHER_NAMES_OF_MODELS = {
    "gauss": "normal",
    "gaussian": "normal",
    "normalverteilung": "normal",
    "logarithmicnormal": "lognormal",
    "lognormalverteilung": "lognormal",
    "weibullverteilung": "weibull",
    "gammaverteilung": "gamma",
    "exponentialverteilung": "exponential",
    "betragsverteilung": "half_normal",
    "rayleighverteilung": "rayleigh",
    "gumbel": "gumbel_max",
    "largestextremevalue": "gumbel_max",
    "smallestextremevalue": "gumbel_min",
    "generalizedextremevalue": "gev",
    "generalisedextremevalue": "gev",
    "wald": "inverse_gaussian",
    "mixture": "normal_mixture",
}

_LETTERS = str.maketrans("ıłøđ", "ilod")


@dataclass(frozen=True, slots=True, kw_only=True)
class Heading:
    """A heading of a block: the field it fills and the words it is known by, sheetqc's own first."""

    field: str
    words: tuple[str, ...]

    @property
    def title(self) -> str:
        """The heading as sheetqc writes it."""
        return self.words[0]


def key(text: str) -> str:
    """A text reduced to what is compared: no case, accents, blanks, punctuation, full-width forms."""
    folded = unicodedata.normalize("NFKD", unicodedata.normalize("NFKC", text).casefold())
    bare = "".join(c for c in folded if not unicodedata.combining(c)).translate(_LETTERS)
    return "".join(c for c in bare if c.isalnum())


def tag_of(text: str) -> str | None:
    """The tag a cell's text is, such as "qc:study"; None when it is another text."""
    if len(text) > 60:
        return None
    folded = unicodedata.normalize("NFKC", text).strip().casefold()
    return folded if folded in TAGS else None


def headings(block: str) -> tuple[Heading, ...]:
    """The headings of a block ("study", "characteristics", "measurements", "gauge", "counts", "places")."""
    return tuple(
        Heading(field=name, words=_all_words(by_language)) for name, by_language in _data()["headings"][block].items()
    )


def field_of(block: str, text: str) -> str | None:
    """The field a heading (or label) of a block means; None when it is not known."""
    return _fields(block).get(key(text))


@lru_cache(maxsize=4096)
def word_in(group: str, text: str) -> bool:
    """Whether a text is one of a group of words ("summary_row", "missing", "undetected", "mark")."""
    stripped = unicodedata.normalize("NFKC", text).strip().casefold()
    return stripped in _exact(group) or (key(text) in _keys(group) if key(text) else False)


def kind_named(text: str) -> Kind | None:
    """The kind of characteristic a text names, in any of the languages; None when it names none."""
    name = _kinds().get(key(text))
    return next((kind for kind in KINDS if kind.name == name), None)


def model_named(text: str) -> str | None:
    """The family a text names, "" for an empty text; None when it names none."""
    wanted = key(text).removesuffix("distribution") or key(text)
    known = {key(name): name for name in MODELS}
    return known.get(wanted, _OTHER_NAMES_OF_MODELS.get(wanted))


def stage_named(text: str) -> Stage | None:
    """The stage of a study a text names; None when it names none."""
    wanted = key(text)
    return next((stage for stage in STUDIES if wanted and wanted in _keys(stage)), None)


def index_named(text: str) -> IndexName | None:
    """The index a text names, Ppk or Cpk (or the pair's other member); None when it names none."""
    names: dict[str, IndexName] = {"ppk": "Ppk", "pp": "Ppk", "cpk": "Cpk", "cp": "Cpk"}
    return names.get(key(text))


@cache
def _data() -> Any:
    return json.loads(resources.files("sheetqc").joinpath("vocabulary.json").read_text(encoding="utf-8"))


def _all_words(by_language: dict[str, list[str]]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(word for words in by_language.values() for word in words))


@cache
def _fields(block: str) -> dict[str, str]:
    return {key(word): heading.field for heading in headings(block) for word in heading.words}


@cache
def _keys(group: str) -> frozenset[str]:
    return frozenset(key(word) for word in _all_words(_data()["words"][group])) - {""}


@cache
def _exact(group: str) -> frozenset[str]:
    """Words of punctuation alone, which `key` reduces to nothing."""
    words = _all_words(_data()["words"][group])
    return frozenset(unicodedata.normalize("NFKC", word).casefold() for word in words if not key(word))


@cache
def _kinds() -> dict[str, str]:
    named = {key(kind.name): kind.name for kind in KINDS}
    spoken = {key(w): name for name, by_language in _data()["kinds"].items() for w in _all_words(by_language)}
    return {**spoken, **named}
