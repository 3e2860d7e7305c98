"""The whole assessment from values to verdict."""

import json
import math

import numpy as np
import pytest

import sheetqc
from sheetqc.errors import UsageError
from sheetqc.stats.bounds import ppk_of_triples


def values(n: int = 125, s: float = 0.1, seed: int = 9) -> list[float]:
    return np.random.default_rng(seed).normal(10, s, n).tolist()


def test_a_very_good_process_is_shown() -> None:
    found = sheetqc.assess(values(), lower=8.5, upper=11.5, kind="two-sided dimension")
    assert found.verdict.state == "shown"
    assert found.indices.Ppk.lower >= 1.33


def test_a_bad_process_is_not_met() -> None:
    found = sheetqc.assess(values(), lower=9.85, upper=10.15, kind="two-sided dimension")
    assert found.verdict.state == "not met"
    assert found.nonconforming.observed.count > 5


@pytest.mark.parametrize("limit", [10.3, 10.45, 10.5, 10.6, 10.8])
def test_the_state_follows_from_the_index_and_its_bounds(limit: float) -> None:
    found = sheetqc.assess(values(), upper=limit, kind="two-sided dimension")
    ppk, required = found.indices.Ppk, 1.33
    expected = (
        "shown"
        if ppk.lower >= required
        else "not met"
        if ppk.upper < required
        else "likely"
        if ppk.estimate >= required
        else "doubtful"
    )
    assert found.verdict.state == expected


def test_never_shown_on_the_estimate_alone() -> None:
    found = sheetqc.assess(values(50), upper=10 + 3 * 0.1 * 1.4)
    assert found.indices.Ppk.lower < found.indices.Ppk.estimate


@pytest.mark.parametrize("limits", [{"lower": 9.5}, {"upper": 10.5}, {"lower": 9.5, "upper": 10.6}])
def test_carried_triples_give_the_bounds(limits: dict[str, float]) -> None:
    found = sheetqc.assess(values(), **limits)
    index = ppk_of_triples(np.array(found.region), limits.get("lower"), limits.get("upper"))
    assert found.indices.Ppk.lower == pytest.approx(min(index.min(), found.indices.Ppk.estimate), rel=1e-12)
    assert found.indices.Ppk.upper == pytest.approx(max(index.max(), found.indices.Ppk.estimate), rel=1e-12)
    for model in found.models:
        own = ppk_of_triples(np.array(model.region), limits.get("lower"), limits.get("upper"))
        assert (model.ppk_lower, model.ppk_upper) == pytest.approx((own.min(), own.max()), rel=1e-12)


def test_a_declared_kind_tightens_the_bound() -> None:
    open_, declared = (
        sheetqc.assess(values(), lower=9.4, upper=10.6, kind=kind) for kind in (None, "two-sided dimension")
    )
    assert declared.indices.Ppk.lower > open_.indices.Ppk.lower


def test_the_same_input_gives_the_same_answer() -> None:
    first, second = (sheetqc.assess(values(), lower=9.4, upper=10.6).to_dict() for _ in range(2))
    assert first == second


def test_the_dictionary_is_plain_json() -> None:
    found = sheetqc.assess(values(), lower=9.4, upper=10.6, nominal=10.0, subgroups=5).to_dict()
    again = json.loads(json.dumps(found, allow_nan=False))
    assert set(again["indices"]) == {"Pp", "Ppk", "Cp", "Cpk", "Cpm"}
    assert again["subgroups"] == {"count": 25, "size": 5}
    assert set(again["models"][0]["quantiles"]) == {"x0.135", "x50", "x99.865"}
    assert again["nonconforming"]["observed"]["count"] == 0


def test_no_limits() -> None:
    found = sheetqc.assess(values())
    assert found.verdict.state == "no verdict"
    assert found.indices.Ppk is None
    assert found.models[0].ppk is None
    assert found.summary is not None


def test_crossed_limits() -> None:
    found = sheetqc.assess(values(), lower=11.0, upper=9.0)
    assert found.verdict.state == "no verdict"
    assert found.indices.Ppk is None


@pytest.mark.parametrize("bad", [[], [1.0], [1.0, 2.0], [5.0] * 40])
def test_values_nothing_can_be_computed_from(bad: list[float]) -> None:
    found = sheetqc.assess(bad, upper=9.0)
    assert found.verdict.state == "no verdict"
    assert found.summary is None
    assert found.findings
    json.dumps(found.to_dict(), allow_nan=False)


def test_too_few_values_describe_the_past_only() -> None:
    found = sheetqc.assess(values(12), upper=11.0)
    assert found.verdict.state == "no verdict"
    assert found.indices.Ppk is not None
    capable = dict(found.answers)["capable"]
    assert "describes these values only" in capable


def test_a_requirement_on_cpk_needs_the_normal_model() -> None:
    from sheetqc.judgement.assemble import assessment_of
    from sheetqc.judgement.terms import Terms
    from sheetqc.study import Characteristic, Limits, Sample

    terms = Terms(index="Cpk")
    normal = assessment_of(
        Characteristic(id="D", limits=Limits(lower=9.0, upper=11.0), kind="two-sided dimension", subgroup_size=5),
        Sample(characteristic="D", values=tuple(values())),
        terms,
    )
    assert normal.verdict.index == "Cpk"
    skewed = assessment_of(
        Characteristic(id="D", limits=Limits(upper=9.0), kind="leak rate"),
        Sample(characteristic="D", values=tuple(np.exp(np.random.default_rng(3).normal(0, 0.5, 100)).tolist())),
        terms,
    )
    assert skewed.verdict.index == "Ppk"
    assert any(f.code == "judged-on-ppk" for f in skewed.findings)


def test_observed_and_expected_that_contradict_each_other_are_told() -> None:
    rng = np.random.default_rng(8)
    x = np.concatenate([rng.normal(10, 0.1, 117), [11.2] * 8])
    rng.shuffle(x)
    found = sheetqc.assess(x.tolist(), upper=11.0, model="normal")
    assert found.nonconforming.observed.count == 8
    assert any(f.code == "observed-against-expected" for f in found.findings)


def test_streams_that_differ_forbid_a_verdict() -> None:
    rng = np.random.default_rng(8)
    x = np.where(np.arange(100) % 2 == 0, rng.normal(10, 0.1, 100), rng.normal(10.15, 0.1, 100))
    found = sheetqc.assess(x.tolist(), lower=9.0, upper=11.0, streams=["1", "2"] * 50)
    assert found.verdict.state == "no verdict"
    assert any(f.code == "streams-differ" for f in found.findings)


def test_streams_alike_are_left_in_peace_in_99_of_100_studies() -> None:
    from sheetqc.judgement.streams import stream_view

    rng = np.random.default_rng(9)
    refused = sum(bool(stream_view(rng.normal(10, 0.1, 100), ["1", "2"] * 50, "mm")[0]) for _ in range(1000))
    assert refused <= 20


@pytest.mark.parametrize(
    ("call", "words"),
    [
        ({"values": [1.0, math.nan, 2.0]}, "value 2"),
        ({"values": ["a", "b"]}, "not a number"),
        ({"values": [[1.0, 2.0]]}, "dimensions"),
        ({"confidence": 1.0}, "confidence"),
        ({"requirement": 0.0}, "requirement"),
        ({"subgroups": [1, 2]}, "subgroups"),
        ({"streams": ["a"]}, "streams"),
    ],
)
def test_wrong_calls(call: dict[str, object], words: str) -> None:
    with pytest.raises(UsageError, match=words):
        sheetqc.assess(**{"values": values(), "upper": 11.0, **call})  # type: ignore[arg-type]


def test_many_values_are_judged_without_the_test_that_ends_at_5000() -> None:
    found = sheetqc.assess(values(6000), lower=9.0, upper=11.0, kind="two-sided dimension")
    assert found.normality.shapiro_wilk is None
    assert found.normality.anderson_darling is not None
    assert found.verdict.state == "shown"


@pytest.mark.parametrize("wild", [1e200, -1e307, 1e160])
def test_a_value_of_a_size_nothing_measured_has_is_told(wild: float) -> None:
    found = sheetqc.assess([*values(40), wild], upper=11.0)
    assert found.verdict.state == "no verdict"
    assert any(f.code == "absurd-values" for f in found.findings)


def test_values_that_differ_by_next_to_nothing_are_told() -> None:
    found = sheetqc.assess((np.arange(40) * 1e-160).tolist(), upper=1.0)
    assert any(f.code == "absurd-values" for f in found.findings)
