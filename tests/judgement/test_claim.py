"""A claimed index is explained or questioned."""

from dataclasses import replace

import numpy as np
import pytest

from sheetqc.assessment import Assessment
from sheetqc.finding import Cell
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.claim import half_of_the_last_digit
from sheetqc.judgement.terms import Terms
from sheetqc.study import Characteristic, LeftOut, Limits, Sample

VALUES = np.random.default_rng(5).normal(10, 0.1, 100)
ASKED = Characteristic(
    id="D1",
    limits=Limits(lower=9.5, upper=10.6),
    kind="two-sided dimension",
    subgroup_size=5,
    claimed_index="Cpk",
    cells=(("claimed_value", Cell("C", 5, 16)),),
)
SAMPLE = Sample(
    characteristic="D1",
    values=tuple(VALUES.tolist()),
    left_out=(LeftOut(value=11.0, cell=Cell("M", 9, 2), reason="dropped"),),
)


def claim(value: float, asked: Characteristic = ASKED) -> tuple[str, str]:
    found: Assessment = assessment_of(replace(asked, claimed_value=value), SAMPLE, Terms())
    finding = next(f for f in found.findings if f.code.startswith("claim"))
    assert [str(c) for c in finding.cells] == ["'C'!P5"]
    return finding.code, finding.text


def ranges() -> float:
    # R-bar / d2 with d2 of 5 printed as 2.326 (ASTM MNL 7, from memory)
    return float(np.ptp(VALUES.reshape(20, 5), axis=1).mean() / 2.326)


@pytest.mark.parametrize(
    ("sigma", "words"),
    [
        (float(VALUES.std(ddof=1)), "s of all values"),
        (ranges(), "R-bar / d2"),
        (float(np.append(VALUES, 11.0).std(ddof=1)), "left-out values put back"),
    ],
)
def test_the_convention_behind_a_claim_is_found(sigma: float, words: str) -> None:
    mean = float(np.append(VALUES, 11.0).mean()) if "back" in words else float(VALUES.mean())
    value = round(min(10.6 - mean, mean - 9.5) / (3 * sigma), 3)
    code, text = claim(value)
    assert code == "claim-reproduced"
    assert words in text


def test_the_better_side_is_found_out() -> None:
    value = round(max(10.6 - VALUES.mean(), VALUES.mean() - 9.5) / (3 * VALUES.std(ddof=1)), 3)
    assert "the better side" in claim(value)[1]


def test_a_claim_out_of_the_air_is_questioned() -> None:
    code, text = claim(3.217)
    assert code == "claim-not-reproduced"
    assert "Ask how it was computed" in text


def test_the_natural_bound_taken_for_a_limit() -> None:
    asked = replace(ASKED, limits=Limits(upper=10.6, natural_lower=0.0))
    value = round((10.6 - 0) / (6 * VALUES.std(ddof=1)), 3)
    assert "natural bound" in claim(value, asked)[1]


@pytest.mark.parametrize(
    ("value", "half"), [(1.9, 0.05), (1.67, 0.005), (2.0, 0.05), (1.333, 0.0005), (1.33333, 0.0005)]
)
def test_a_claim_is_as_fine_as_it_is_written(value: float, half: float) -> None:
    assert half_of_the_last_digit(value) == pytest.approx(half)


def test_no_claim_no_finding() -> None:
    found = assessment_of(ASKED, SAMPLE, Terms())
    assert not any(f.code.startswith("claim") for f in found.findings)
