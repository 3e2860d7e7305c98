"""A gauge study in the workbook is weighed."""

import numpy as np
import pytest

from sheetqc.assessment import Assessment
from sheetqc.finding import Cell
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.gauge_view import tolerance_of
from sheetqc.judgement.terms import Terms
from sheetqc.study import Characteristic, GaugeStudy, Limits, Sample

ASKED = Characteristic(id="D1", unit="mm", limits=Limits(lower=9.0, upper=11.0), kind="two-sided dimension")
SAMPLE = Sample(characteristic="D1", values=tuple(np.random.default_rng(1).normal(10, 0.1, 100).tolist()))


def study(gauge_sigma: float, trials: int = 3) -> GaugeStudy:
    rng = np.random.default_rng(2)
    rows = [(p, a, t) for p in range(10) for a in "ABC" for t in range(trials)]
    size = rng.normal(10, 0.1, 10)
    return GaugeStudy(
        characteristic="D1",
        values=tuple(float(size[p] + rng.normal(0, gauge_sigma)) for p, _, _ in rows),
        parts=tuple(str(p) for p, _, _ in rows),
        appraisers=tuple(a for _, a, _ in rows),
        cells=tuple(Cell("Gauge", 5 + i, 4) for i in range(len(rows))),
    )


def judged(gauge: GaugeStudy | None) -> Assessment:
    return assessment_of(ASKED, SAMPLE, Terms(), (), gauge)


@pytest.mark.parametrize(("sigma", "level"), [(0.01, "note"), (0.06, "caution")])
def test_a_fit_gauge_lets_the_verdict_stand(sigma: float, level: str) -> None:
    found = judged(study(sigma))
    assert found.gauge is not None
    # six of the gauge's sigma over a tolerance of 2
    assert found.gauge.share_of_tolerance == pytest.approx(3 * sigma, rel=0.25)
    finding = next(f for f in found.findings if f.code == "gauge-study")
    assert finding.level == level
    assert "of the tolerance" in finding.text
    assert found.verdict.state != "no verdict"


def test_a_gauge_that_takes_too_much_forbids_a_verdict() -> None:
    found = judged(study(0.15))
    assert found.verdict.state == "no verdict"
    stop = next(f for f in found.findings if f.code == "gauge-takes-too-much")
    assert [str(c) for c in stop.cells] == ["'Gauge'!D5"]


def test_no_study_is_noted() -> None:
    assert any(f.code == "no-gauge-study" for f in judged(None).findings)
    assert judged(None).gauge is None


def test_an_incomplete_study_is_told_with_its_cells() -> None:
    whole = study(0.02)
    broken = GaugeStudy(
        characteristic="D1",
        values=whole.values[:-1],
        parts=whole.parts[:-1],
        appraisers=whole.appraisers[:-1],
        cells=whole.cells[:-1],
    )
    found = judged(broken)
    assert any(f.code == "gauge-study-unusable" and f.cells for f in found.findings)
    assert found.verdict.state != "no verdict"


@pytest.mark.parametrize(
    ("limits", "width"),
    [
        (Limits(lower=1.0, upper=3.0), 2.0),
        (Limits(upper=3.0, natural_lower=0.0), 3.0),
        (Limits(upper=3.0), None),
        (Limits(lower=3.0, upper=1.0), None),
    ],
)
def test_the_tolerance(limits: Limits, width: float | None) -> None:
    assert tolerance_of(limits) == width
