"""The five states, by the rule of the public contract."""

import pytest

from sheetqc.assessment import Estimate
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.terms import Terms, terms_of
from sheetqc.judgement.verdict import state_of, verdict_of
from sheetqc.study import Characteristic, Header


@pytest.mark.parametrize(
    ("lower", "value", "upper", "state"),
    [
        (1.33, 1.5, 1.7, "shown"),
        (1.32, 1.5, 1.7, "likely"),
        (1.2, 1.33, 1.5, "likely"),
        (1.1, 1.32, 1.33, "doubtful"),
        (0.9, 1.1, 1.32, "not met"),
        (None, 1.5, None, "likely"),
        (None, 1.1, None, "doubtful"),
        (None, None, None, "no verdict"),
    ],
)
def test_states(lower: float | None, value: float | None, upper: float | None, state: str) -> None:
    assert state_of(Estimate(estimate=value, lower=lower, upper=upper), 1.33) == state


def test_a_condition_forbids_a_verdict() -> None:
    condition = Condition(code="too-few", reason="12 values are too few.", remedy="Measure 18 more.")
    verdict = verdict_of(Estimate(estimate=2.0, lower=1.9, upper=2.1), "Ppk", Terms(), [condition], [])
    assert verdict.state == "no verdict"
    assert verdict.reasons == ("12 values are too few.",)
    assert verdict.next_steps == ("Measure 18 more.",)


@pytest.mark.parametrize("value", [1.9, 1.5, 1.2, 1.0])
def test_every_reason_names_requirement_and_confidence(value: float) -> None:
    estimate = Estimate(estimate=value, lower=value - 0.2, upper=value + 0.2)
    verdict = verdict_of(estimate, "Ppk", Terms(), [], [])
    assert "1.33" in verdict.reasons[0]
    assert "95 % confidence" in verdict.reasons[0]


def test_the_own_requirement_comes_before_the_study_and_that_before_the_stage() -> None:
    own = Characteristic(id="D1", requirement=2.0)
    plain = Characteristic(id="D1")
    assert terms_of(own, Header(requirement=1.5)).requirement == 2.0
    assert terms_of(plain, Header(requirement=1.5, stage="preliminary")).requirement == 1.5
    assert terms_of(plain, Header(stage="preliminary")).requirement == 1.67
    assert terms_of(plain, Header(stage="ongoing")).requirement == 1.33
    assert terms_of(plain, Header()).requirement == 1.33
