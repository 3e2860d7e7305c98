"""Candidates narrowed beforehand, and the one in use with its reason."""

import numpy as np
import pytest

import sheetqc
from sheetqc.judgement.shape import CONSIDERED, candidate_names, evened_out
from sheetqc.kinds import KINDS
from sheetqc.stats import anderson_darling
from sheetqc.stats.families import names
from sheetqc.study import Characteristic


def test_every_considered_family_exists() -> None:
    assert set(CONSIDERED) <= set(names())
    for kind in KINDS:
        assert set(kind.families) <= set(names()), kind.name


def test_prior_knowledge_narrows() -> None:
    assert candidate_names(Characteristic(id="D")) == ("open", CONSIDERED)
    assert candidate_names(Characteristic(id="D", model="weibull", kind="flatness")) == ("model", ("weibull",))
    prior, families = candidate_names(Characteristic(id="D", kind="Flatness "))
    assert prior == "kind"
    assert "lognormal" in families
    assert "normal" not in families


def test_a_normal_sample_keeps_the_normal_model() -> None:
    x = np.random.default_rng(1).normal(10, 0.1, 100)
    found = sheetqc.assess(x.tolist(), lower=9.0, upper=11.0)
    assert found.model_in_use == "normal"
    assert "do not object" in found.model_reason


def test_a_skewed_sample_gives_it_up() -> None:
    x = np.exp(np.random.default_rng(1).normal(0, 0.6, 125))
    found = sheetqc.assess(x.tolist(), upper=20.0)
    assert found.model_in_use not in ("normal", "logistic")
    normal = found.model("normal")
    assert normal is not None
    assert "Anderson-Darling objects" in normal.objection


def test_a_named_model_is_obeyed_tested_and_objected_to() -> None:
    x = np.exp(np.random.default_rng(1).normal(0, 0.6, 125)).tolist()
    obeyed = sheetqc.assess(x, upper=20.0, model="lognormal")
    assert [m.family for m in obeyed.models] == ["lognormal"]
    assert obeyed.verdict.state != "no verdict"
    contradicted = sheetqc.assess(x, upper=20.0, model="normal")
    assert contradicted.model_in_use == "normal"
    assert contradicted.verdict.state == "no verdict"
    assert any("contradict" in reason for reason in contradicted.verdict.reasons)


def test_values_a_named_model_cannot_take() -> None:
    x = np.random.default_rng(1).normal(0, 1, 60).tolist()
    found = sheetqc.assess(x, upper=8.0, model="lognormal")
    assert found.verdict.state == "no verdict"
    assert any(f.code == "model-refuses-values" for f in found.findings)
    assert found.models


def test_two_streams_far_apart_fit_no_model() -> None:
    rng = np.random.default_rng(3)
    x = np.concatenate([rng.normal(10, 0.1, 100), rng.normal(12, 0.1, 100)])
    rng.shuffle(x)
    found = sheetqc.assess(x.tolist(), lower=5.0, upper=17.0)
    assert found.verdict.state == "no verdict"
    assert any(f.code == "no-model-fits" for f in found.findings)


def test_rounding_is_not_taken_for_shape() -> None:
    rng = np.random.default_rng(4)
    plain = even = 0
    for _ in range(200):
        x = np.round(rng.normal(10, 0.1, 125) / 0.05) * 0.05
        plain += anderson_darling(x).p_value < 0.05
        even += anderson_darling(evened_out(x, 0.05)).p_value < 0.05
    assert plain > 150
    assert even <= 22


def test_evening_out_keeps_what_is_not_coarse_and_stays_above_zero() -> None:
    fine = np.random.default_rng(5).normal(10, 0.1, 50).round(3)
    assert evened_out(fine, 0.001) is fine
    coarse = np.array([0.0, 0.0, 1.0, 1.0, 1.0, 2.0])
    spread = evened_out(coarse, 1.0)
    assert spread.min() > 0
    assert np.all(np.abs(spread - coarse) <= 0.5)
    assert len(np.unique(spread)) == len(spread)


@pytest.mark.parametrize("kind", [k.name for k in KINDS])
def test_every_kind_can_be_judged(kind: str) -> None:
    x = np.random.default_rng(6).gamma(8.0, 0.5, 60).round(3).tolist()
    found = sheetqc.assess(x, upper=20.0, natural_lower=0.0, kind=kind)
    assert found.models
    assert found.indices.Ppk is not None


def test_tests_that_object_to_rounding_alone_are_explained() -> None:
    x = np.random.default_rng(4).normal(10, 0.1, 125)
    coarse, fine = (sheetqc.assess(np.round(x / s) * s, lower=9.0, upper=11.0, resolution=s) for s in (0.04, 0.001))
    finding = next(f for f in coarse.findings if f.code == "coarse-readings")
    assert "step by 0.04" in finding.text
    assert not any(f.code == "coarse-readings" for f in fine.findings)
    assert coarse.model_in_use == "normal"
    assert coarse.normality.anderson_darling is not None
    assert coarse.normality.anderson_darling.statistic == pytest.approx(
        anderson_darling(np.round(x / 0.04) * 0.04).statistic
    )
