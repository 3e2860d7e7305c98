"""An answer made from samples by simple means, and the workbook its values stand in."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import openpyxl
from numpy.typing import NDArray

from sheetqc.assessment import (
    Answer,
    Assessment,
    ChartTrack,
    Estimate,
    ExpectedRate,
    Indices,
    ModelFit,
    Nonconforming,
    Quantiles,
    Stability,
    State,
    Summary,
    Test,
    Verdict,
)
from sheetqc.finding import Cell, Finding
from sheetqc.stats.families import family
from sheetqc.stats.goodness import a_squared
from sheetqc.study import Characteristic, Header, Limits, Sample, Source, Study

RUN, LIST = "Run 1", "List of parts"
FIRST_ROW = 5
DROP = 1.92


@dataclass(frozen=True, kw_only=True)
class Asked:
    """One characteristic to be made."""

    id: str
    values: Sequence[float]
    name: str = "Bore diameter"
    unit: str = "mm"
    lower: float | None = None
    upper: float | None = None
    families: tuple[str, ...] = ("normal", "lognormal", "logistic")
    in_use: str | None = None
    size: int = 1
    requirement: float = 1.33
    condition: str = ""
    copied: tuple[int, ...] = ()


def made_answer(*asked: Asked) -> tuple[Answer, Study]:
    """Answer and study of some characteristics."""
    header = Header(
        part_number="PH-204", part_name="pump housing", supplier="Castings South", lot="L 0417", date="12 May",
        requirement=asked[0].requirement,
    )  # fmt: skip
    source = Source(name="made.xlsx", sha256="ab" * 32, bytes=12345)
    found = tuple(made_assessment(a, index) for index, a in enumerate(asked))
    findings = (
        Finding(code="text-number", level="caution", text="1 value was a text and was read as a number.",
                cells=(Cell(RUN, FIRST_ROW, 3),)),
    )  # fmt: skip
    answer = Answer(source=source, header=header, assessments=found, findings=findings)
    study = Study(
        source=source,
        header=header,
        characteristics=tuple(a.characteristic for a in found),
        samples=tuple(a.sample for a in found),
    )
    return answer, study


def made_assessment(asked: Asked, index: int) -> Assessment:
    """The assessment of one characteristic."""
    x = np.asarray(asked.values, dtype=float)
    characteristic, sample = _study_parts(asked, index)
    usable = len(x) >= 3 and np.ptp(x) > 0
    fits = _weighted([_fit(name, x, asked) for name in asked.families if not family(name).refusal(x)]) if usable else ()
    chosen = _chosen(fits, asked.in_use)
    estimate = _ppk_bounds(fits, chosen, asked)
    state = _state(estimate, asked)
    return Assessment(
        characteristic=characteristic,
        sample=sample,
        confidence=0.95,
        count=len(x),
        subgroup_count=len(x) // asked.size if asked.size > 1 else None,
        subgroup_size=asked.size if asked.size > 1 else None,
        summary=_summary(x) if usable else None,
        models=fits,
        model_in_use=None if chosen is None else chosen.family,
        model_reason="It fits best.",
        indices=Indices(Ppk=estimate),
        region=tuple(t for f in fits if f.admitted for t in f.region),
        nonconforming=Nonconforming(
            expected=None
            if chosen is None or chosen.expected_ppm is None
            else Estimate(estimate=chosen.expected_ppm.total, lower=0.0, upper=9 * chosen.expected_ppm.total + 3)
        ),
        stability=_stability(x, asked.size) if usable else Stability(stable=None),
        verdict=Verdict(
            state=state,
            requirement=asked.requirement,
            index="Ppk",
            reasons=(asked.condition or f"Ppk is {state} to reach the required {asked.requirement}.",),
            next_steps=("Roughly 210 values in all would show the requirement, best from further batches.",),
        ),
        findings=(Finding(code="few", level="note", text="A note about this one."),),
        answers=(
            ("data", f"Yes: {len(x)} values, read in steps of 0.001 {asked.unit}."),
            ("steady", "Yes: nothing in 25 subgroups speaks against one unchanging process."),
            ("shape", "Of 3 candidates, the model in use fits best (weight 55 %); the data do not object (p 0.34)."),
            (
                "capable",
                "The estimate of Ppk misses the requirement, though it may be as high as 1.45. The upper limit lies "
                "2.1 standard deviations beyond the largest value measured: what happens there is the model's word.",
            ),
            (
                "next",
                "Roughly 210 values in all would show the requirement (85 more values, best from further batches).",
            ),
        ),
    )


def _study_parts(asked: Asked, index: int) -> tuple[Characteristic, Sample]:
    row, column = 4 + index, 3 + index
    cells = [("id", Cell(LIST, row, 1))]
    cells += [("lower", Cell(LIST, row, 2))] if asked.lower is not None else []
    cells += [("upper", Cell(LIST, row, 3))] if asked.upper is not None else []
    characteristic = Characteristic(
        id=asked.id, name=asked.name, unit=asked.unit, limits=Limits(lower=asked.lower, upper=asked.upper),
        cells=tuple(cells),
    )  # fmt: skip
    values = tuple(float(v) for v in asked.values)
    sample = Sample(
        characteristic=asked.id,
        values=values,
        cells=tuple(Cell(RUN, FIRST_ROW + i, column) for i in range(len(values))),
        subgroups=tuple(str(i // asked.size + 1) for i in range(len(values))) if asked.size > 1 else None,
        copied=tuple(i in asked.copied for i in range(len(values))),
    )
    return characteristic, sample


def _summary(x: NDArray[np.float64]) -> Summary:
    n, s = len(x), float(x.std(ddof=1))
    z = (x - x.mean()) / s
    skewness = n / ((n - 1) * (n - 2)) * float((z**3).sum())
    kurtosis = None
    if n > 3:
        kurtosis = n * (n + 1) / ((n - 1) * (n - 2) * (n - 3)) * float((z**4).sum()) - 3 * (n - 1) ** 2 / (
            (n - 2) * (n - 3)
        )
    return Summary(
        mean=float(x.mean()), s=s, median=float(np.median(x)), minimum=float(x.min()), maximum=float(x.max()),
        skewness=skewness, kurtosis=kurtosis,
    )  # fmt: skip


def index_of(triple: tuple[float, float, float], asked: Asked) -> float | None:
    """Ppk of a quantile triple."""
    low, median, high = triple
    sides = []
    if asked.upper is not None:
        sides.append((asked.upper - median) / (high - median))
    if asked.lower is not None:
        sides.append((median - asked.lower) / (median - low))
    return min(sides) if sides else None


def _triple(name: str, theta: NDArray[np.float64]) -> tuple[float, float, float]:
    f = family(name)
    return float(f.quantile(0.00135, theta)), float(f.quantile(0.5, theta)), float(f.upper_quantile(0.00135, theta))


def _fit(name: str, x: NDArray[np.float64], asked: Asked) -> ModelFit:
    f = family(name)
    theta = f.fit(x)
    k, n = len(theta), len(x)
    value = float(f.log_likelihood(x, theta))
    triple = _triple(name, theta)
    region = tuple(_triple(name, t) for t in _border(name, x, theta))
    bounds = [i for t in region if (i := index_of(t, asked)) is not None]
    below = None if asked.lower is None else 1e6 * float(f.cdf(asked.lower, theta))
    above = None if asked.upper is None else 1e6 * float(f.survival(asked.upper, theta))
    two = asked.lower is not None and asked.upper is not None
    return ModelFit(
        family=name,
        parameters=tuple(zip(f.parameter_names, (float(t) for t in theta), strict=True)),
        log_likelihood=value,
        aicc=2 * k - 2 * value + 2 * k * (k + 1) / max(1, n - k - 1),
        weight=0.0,
        anderson_darling=Test(statistic=float(a_squared(x, name, theta)), p_value=0.34),
        quantiles=Quantiles(low=triple[0], median=triple[1], high=triple[2]),
        pp=((asked.upper or 0) - (asked.lower or 0)) / (triple[2] - triple[0]) if two else None,
        ppk=index_of(triple, asked),
        ppk_lower=min(bounds, default=None),
        ppk_upper=max(bounds, default=None),
        expected_ppm=None
        if below is None and above is None
        else ExpectedRate(below=below, above=above, total=(below or 0) + (above or 0)),
        region=region,
    )


def _border(name: str, x: NDArray[np.float64], theta: NDArray[np.float64]) -> list[NDArray[np.float64]]:
    """Points on the ellipse of the observed information, in unconstrained coordinates."""
    f = family(name)
    centre = f.internal(theta)
    k = len(centre)
    steps = 1e-4 * np.maximum(1.0, np.abs(centre))
    matrix = np.empty((k, k))
    for i in range(k):
        for j in range(k):
            a, b = np.eye(k)[i] * steps, np.eye(k)[j] * steps
            g = [float(f.log_likelihood(x, f.external(centre + u))) for u in (a + b, a - b, b - a, -a - b)]
            matrix[i, j] = -(g[0] - g[1] - g[2] + g[3]) / (4 * steps[i] * steps[j])
    size, turn = np.linalg.eigh(matrix)
    angles = np.linspace(0, 2 * np.pi, 16, endpoint=False)
    directions = np.array([[1.0], [-1.0]]) if k == 1 else np.stack([np.cos(angles), np.sin(angles)], axis=1)
    spread = turn / np.sqrt(np.maximum(size, 1e-3 * size.max()))
    return [f.external(centre + np.sqrt(2 * DROP) * spread @ d) for d in directions]


def _weighted(fits: list[ModelFit]) -> tuple[ModelFit, ...]:
    from dataclasses import replace

    best = min((f.aicc for f in fits), default=0.0)
    raw = [float(np.exp(-(f.aicc - best) / 2)) for f in fits]
    return tuple(replace(f, weight=w / sum(raw), admitted=w > 0.1) for f, w in zip(fits, raw, strict=True))


def _chosen(fits: tuple[ModelFit, ...], wanted: str | None) -> ModelFit | None:
    if wanted is not None:
        return next(f for f in fits if f.family == wanted)
    return max(fits, key=lambda f: f.weight, default=None)


def _ppk_bounds(fits: tuple[ModelFit, ...], chosen: ModelFit | None, asked: Asked) -> Estimate | None:
    if chosen is None or chosen.ppk is None:
        return None
    several = [i for f in fits if f.admitted for t in f.region if (i := index_of(t, asked)) is not None]
    return Estimate(estimate=chosen.ppk, lower=min(*several, chosen.ppk), upper=max(*several, chosen.ppk))


def _state(estimate: Estimate | None, asked: Asked) -> State:
    if asked.condition or estimate is None or estimate.estimate is None:
        return "no verdict"
    if (estimate.lower or 0) >= asked.requirement:
        return "shown"
    if (estimate.upper or 9e9) < asked.requirement:
        return "not met"
    return "likely" if estimate.estimate >= asked.requirement else "doubtful"


def _stability(x: NDArray[np.float64], size: int) -> Stability:
    if size > 1:
        groups = x[: len(x) // size * size].reshape(-1, size)
        points, ranges = groups.mean(axis=1), np.ptp(groups, axis=1)
        within = float(ranges.mean()) / 2.326
        half = 3 * within / np.sqrt(size)
        chart, titles = "X-bar and R", ("Subgroup means", "Subgroup ranges")
        upper_range = 2.114 * float(ranges.mean())
    else:
        points, ranges = x, np.abs(np.diff(x))
        within = float(ranges.mean()) / 1.128
        half, upper_range = 3 * within, 3.267 * float(ranges.mean())
        chart, titles = "individuals and moving range", ("Single values", "Moving ranges")
    centre, count = float(points.mean()), len(points)
    return Stability(
        stable=True,
        chart=chart,
        text="Nothing speaks against it.",
        within_s=within,
        within_method="mean range",
        labels=tuple(str(i + 1) for i in range(count)),
        sizes=(size,) * count,
        location=ChartTrack(
            title=titles[0], points=tuple(float(p) for p in points), centre=(centre,) * count,
            lower=(centre - half,) * count, upper=(centre + half,) * count,
        ),
        spread=ChartTrack(
            title=titles[1], points=tuple(float(r) for r in ranges), centre=(float(ranges.mean()),) * len(ranges),
            lower=(0.0,) * len(ranges), upper=(upper_range,) * len(ranges),
        ),
    )  # fmt: skip


def sender_workbook(path: Path, answer: Answer) -> None:
    """The workbook that the values and limits of an answer stand in."""
    book = openpyxl.Workbook()
    listed, run = book.active, book.create_sheet(RUN)
    assert listed is not None
    listed.title = LIST
    for found in answer.assessments:
        asked = found.characteristic
        for name, value in (("id", asked.id), ("lower", asked.limits.lower), ("upper", asked.limits.upper)):
            cell = asked.cell(name)
            if cell is not None:
                listed.cell(cell.row, cell.column, value).data_type = "s" if name == "id" else "n"
        for cell, value, copied in zip(found.sample.cells, found.sample.values, found.sample.copied, strict=True):
            run.cell(cell.row, cell.column, f"{value} mm" if copied else value)
    book.save(path)
