"""Words: tags, headings in eleven languages, kinds, models, studies."""

from __future__ import annotations

import json
from importlib import resources

import pytest

from sheetqc import vocabulary
from sheetqc.vocabulary import KINDS, MODELS, TAGS

BLOCKS = ("study", "characteristics", "measurements", "gauge", "counts", "places")
LANGUAGES = ("en", "de", "fr", "es", "it", "pl", "cs", "pt", "tr", "zh", "ja")

CONTRACT = {
    "study": "Part number, Part name, Supplier, Lot, Date, Prepared by, Requirement, Requirement on, Confidence, "
    "Study, Note",
    "characteristics": "Id, Name, Unit, Nominal, LSL, USL, Natural lower bound, Natural upper bound, Kind, Model, "
    "Requirement, Subgroup size, Resolution, Class, Claimed index, Claimed value, Note",
    "measurements": "Subgroup, Time, Stream, Leave out, Characteristic, Value",
    "gauge": "Part, Appraiser, Trial, Characteristic, Value",
    "counts": "Category, Count, Period, Inspected, Cost",
    "places": "Characteristic, What, Where",
}


@pytest.mark.parametrize("block", BLOCKS)
def test_headings_of_the_contract_are_written_as_there(block: str) -> None:
    titles = {h.title for h in vocabulary.headings(block) if h.field != "aside"}
    assert titles == set(CONTRACT[block].split(", "))


@pytest.mark.parametrize("block", BLOCKS)
def test_no_word_means_two_fields_of_a_block(block: str) -> None:
    seen: dict[str, str] = {}
    for heading in vocabulary.headings(block):
        for word in heading.words:
            assert vocabulary.key(word), word
            assert seen.setdefault(vocabulary.key(word), heading.field) == heading.field, word


@pytest.mark.parametrize("block", BLOCKS)
def test_every_field_has_a_word_in_every_language(block: str) -> None:
    data = json.loads(resources.files("sheetqc").joinpath("vocabulary.json").read_text(encoding="utf-8"))
    for field, by_language in data["headings"][block].items():
        assert tuple(by_language) == LANGUAGES, field
        assert all(by_language.values()), field
    assert set(data["source"]["memory"]) == set(LANGUAGES)


@pytest.mark.parametrize(
    ("block", "text", "field"),
    [
        ("characteristics", "lower LIMIT", "lower"),
        ("characteristics", "Lower specification limit", "lower"),
        ("characteristics", "Min.", "lower"),
        ("characteristics", "ｕｓｌ", "upper"),
        ("characteristics", "Sub-group size:", "subgroup_size"),
        ("characteristics", "Untere Toleranzgrenze", "lower"),
        ("characteristics", "limite superieure", "upper"),
        ("characteristics", "上限", "upper"),
        ("characteristics", "規格上限", "upper"),
        ("measurements", "Numer kawałka", None),
        ("measurements", "Échantillon", "subgroup"),
        ("measurements", "CAVITY", "stream"),
        ("measurements", "Leave-Out", "leave_out"),
        ("study", "Part no.", "part_number"),
        ("study", "Číslo dílu", "part_number"),
        ("gauge", "Prüfer", "appraiser"),
        ("counts", "Defect type", "category"),
        ("study", "", None),
    ],
)
def test_headings_without_regard_to_case_blanks_and_punctuation(block: str, text: str, field: str | None) -> None:
    assert vocabulary.field_of(block, text) == field


@pytest.mark.parametrize("tag", TAGS)
def test_tags(tag: str) -> None:
    assert vocabulary.tag_of(f"  {tag.upper()}\u00a0\n") == tag
    assert vocabulary.tag_of(tag + "x") is None
    assert vocabulary.tag_of(f"see {tag}") is None


def test_kinds_are_one_register() -> None:
    assert len({k.name for k in KINDS}) == len(KINDS)
    for kind in KINDS:
        assert set(kind.families) <= set(MODELS) - {""}
        assert len(kind.families) == len(set(kind.families)) >= 3
        assert kind.reason.endswith(".")
        assert vocabulary.kind_named(kind.name.upper()) is kind


def test_every_kind_is_known_in_every_language() -> None:
    data = json.loads(resources.files("sheetqc").joinpath("vocabulary.json").read_text(encoding="utf-8"))
    assert set(data["kinds"]) == {k.name for k in KINDS}
    owners: dict[str, str] = {}
    for name, by_language in data["kinds"].items():
        assert tuple(by_language) == LANGUAGES
        for word in (w for words in by_language.values() for w in words):
            assert owners.setdefault(vocabulary.key(word), name) == name, word
            found = vocabulary.kind_named(word)
            assert found is not None
            assert found.name == name


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("Diameter", "two-sided dimension"),
        ("Run-out", "runout"),
        ("Ebenheit", "flatness"),
        ("膜厚", "coating thickness"),
    ],
)
def test_kinds_by_other_words(text: str, kind: str) -> None:
    found = vocabulary.kind_named(text)
    assert found is not None
    assert found.name == kind


def test_no_kind_for_no_word() -> None:
    assert vocabulary.kind_named("") is None
    assert vocabulary.kind_named("smell") is None


def test_kinds_that_cannot_be_negative_say_so() -> None:
    bounded = {k.name for k in KINDS if k.natural_lower == 0}
    assert {"flatness", "runout", "position", "roughness", "leak rate", "coating thickness"} <= bounded
    assert "two-sided dimension" not in bounded


@pytest.mark.parametrize(
    ("text", "model"),
    [
        ("", ""),
        ("Weibull", "weibull"),
        ("Weibull distribution", "weibull"),
        ("log-normal", "lognormal"),
        ("Johnson SU", "johnson_su"),
        ("Normalverteilung", "normal"),
        ("gumbel max", "gumbel_max"),
        ("weibul", None),
        ("distribution", None),
    ],
)
def test_models(text: str, model: str | None) -> None:
    assert vocabulary.model_named(text) == model


@pytest.mark.parametrize(
    ("text", "stage"),
    [
        ("Preliminary", "preliminary"),
        ("vorläufig", "preliminary"),
        ("on-going", "ongoing"),
        ("量産", "ongoing"),
        ("x", None),
    ],
)
def test_studies(text: str, stage: str | None) -> None:
    assert vocabulary.stage_named(text) == stage


@pytest.mark.parametrize(("text", "index"), [("PPK", "Ppk"), (" cpk ", "Cpk"), ("Cp", "Cpk"), ("Cmk", None)])
def test_indices(text: str, index: str | None) -> None:
    assert vocabulary.index_named(text) == index


@pytest.mark.parametrize(
    ("group", "text"), [("missing", "-"), ("missing", " N/A "), ("undetected", "n.d."), ("mark", "*")]
)
def test_words_of_punctuation_alone(group: str, text: str) -> None:
    assert vocabulary.word_in(group, text)
    assert not vocabulary.word_in(group, "12")
