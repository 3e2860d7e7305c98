"""Records of what was found: estimates with bounds, models, findings, a verdict. Frozen.

All bounds named `lower` and `upper` are one-sided bounds at the confidence of the assessment, unless said otherwise.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from sheetqc.finding import Cell, Finding
from sheetqc.study import Characteristic, Header, Sample, Source

SCHEMA = 1
"""Version of the meaning of the JSON answer."""

State = Literal["shown", "likely", "doubtful", "not met", "no verdict"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Estimate:
    """A number that is an estimate, with its one-sided bounds; None where a part is not available."""

    estimate: float | None = None
    lower: float | None = None
    upper: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Test:
    """A test statistic with its probability under the hypothesis."""

    __test__ = False  # not a test case, whatever its name

    statistic: float
    p_value: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Summary:
    """Moments and extremes; `s` has divisor n - 1, skewness G1 and excess kurtosis G2 are the adjusted ones."""

    mean: float
    s: float
    median: float
    minimum: float
    maximum: float
    skewness: float | None = None
    kurtosis: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Normality:
    """Tests of the normal model on the values."""

    anderson_darling: Test | None = None
    shapiro_wilk: Test | None = None
    ppcc: Test | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantiles:
    """The three quantiles of ISO 22514-2: 0.135 %, 50 % and 99.865 %."""

    low: float
    median: float
    high: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ExpectedRate:
    """Expected nonconforming parts per million under one model; None on a side without a limit."""

    below: float | None
    above: float | None
    total: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ModelFit:
    """One candidate model fitted to the values.

    `parameters` are (name, value) in the order of the family. `weight` is its Akaike weight among the candidates.
    `objection` says in words why it cannot be used, "" when the data do not object.
    `admitted` tells whether it takes part in the bound. `region` holds quantile triples (X0.135, X50, X99.865) on the
    border of its own likelihood region: `ppk_lower` and `ppk_upper` are the extreme indices over them.
    """

    family: str
    parameters: tuple[tuple[str, float], ...]
    log_likelihood: float
    aicc: float
    weight: float
    anderson_darling: Test
    quantiles: Quantiles
    pp: float | None
    ppk: float | None
    ppk_lower: float | None
    ppk_upper: float | None
    expected_ppm: ExpectedRate | None
    objection: str = ""
    admitted: bool = True
    region: tuple[tuple[float, float, float], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Indices:
    """The indices. P: total spread, quantile method of the model in use; C: spread within subgroups, normal."""

    Pp: Estimate | None = None
    Ppk: Estimate | None = None
    Cp: Estimate | None = None
    Cpk: Estimate | None = None
    Cpm: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Observed:
    """Values outside the limits, counted; `lower` and `upper` bound the rate in ppm (Clopper-Pearson)."""

    count: int
    of: int
    ppm: float
    lower: float
    upper: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Nonconforming:
    """Observed and expected nonconforming; `expected` in ppm under the model in use."""

    observed: Observed | None = None
    expected: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Signal:
    """A broken rule of a control chart: `points` count from 1 in the order of the chart."""

    rule: str
    points: tuple[int, ...]
    cells: tuple[Cell, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class ChartTrack:
    """One of the two tracks of a control chart (place or spread); limits run in step with the points."""

    title: str
    points: tuple[float, ...]
    centre: tuple[float, ...]
    lower: tuple[float, ...]
    upper: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Stability:
    """Whether the process was steady while the values were made; `stable` None where it cannot be told.

    `chart` is "individuals and moving range", "X-bar and R" or "X-bar and s"; `within_s` the spread within subgroups
    and `within_method` how it was estimated. `sizes` are the subgroup sizes behind each point of the chart.
    `text` says it in a sentence.
    """

    stable: bool | None
    chart: str = ""
    text: str = ""
    signals: tuple[Signal, ...] = ()
    process_model: str = ""
    within_s: float | None = None
    within_method: str = ""
    labels: tuple[str, ...] = ()
    sizes: tuple[int, ...] = ()
    location: ChartTrack | None = None
    spread: ChartTrack | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class GaugeResult:
    """What a gauge study says; standard deviations in the unit of the values, shares as fractions."""

    repeatability: float
    reproducibility: float
    total: float
    share_of_tolerance: float | None = None
    share_of_spread: float | None = None
    distinct_categories: int | None = None
    text: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """The verdict with its reasons, each a full sentence; `index` names the index it is about."""

    state: State
    requirement: float | None
    index: str
    reasons: tuple[str, ...] = ()
    next_steps: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Assessment:
    """What was found for one characteristic."""

    characteristic: Characteristic
    sample: Sample
    confidence: float
    count: int
    left_out: int = 0
    censored: int = 0
    subgroup_count: int | None = None
    subgroup_size: int | None = None
    summary: Summary | None = None
    normality: Normality = Normality()
    models: tuple[ModelFit, ...] = ()
    model_in_use: str | None = None
    model_reason: str = ""
    indices: Indices = Indices()
    nonconforming: Nonconforming = Nonconforming()
    stability: Stability = Stability(stable=None)
    gauge: GaugeResult | None = None
    verdict: Verdict
    findings: tuple[Finding, ...] = ()
    region: tuple[tuple[float, float, float], ...] = ()
    """Quantile triples (X0.135, X50, X99.865) of everything the values leave possible, over all admitted candidates and
    guard shapes: the bounds of Ppk and Pp are the extreme indices over them, so that a spreadsheet can follow a moved
    limit."""
    answers: tuple[tuple[str, str], ...] = ()
    """The chain of questions answered in words: (question key, sentence); keys: data, steady, shape, capable, next."""

    def model(self, family: str | None = None) -> ModelFit | None:
        """The fit of a family; of the model in use when none is named."""
        wanted = family or self.model_in_use
        return next((m for m in self.models if m.family == wanted), None)

    def to_dict(self) -> dict[str, object]:
        """The object of one characteristic in the JSON answer; plain types only."""
        from sheetqc.answer_json import characteristic_object

        return characteristic_object(self)


@dataclass(frozen=True, slots=True, kw_only=True)
class CountedCategory:
    """One category of defects; shares from 0 to 1, `lower` and `upper` hold for all categories together."""

    category: str
    count: int
    share: float
    lower: float
    upper: float
    cumulative: float


@dataclass(frozen=True, slots=True, kw_only=True)
class CountResult:
    """Counts of defects, the most frequent category first."""

    categories: tuple[CountedCategory, ...]
    total: int
    text: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """The whole answer to one workbook."""

    source: Source
    header: Header
    assessments: tuple[Assessment, ...]
    counts: tuple[CountResult, ...] = ()
    findings: tuple[Finding, ...] = ()

    def to_dict(self) -> dict[str, object]:
        """The JSON answer; plain types only."""
        from sheetqc.answer_json import answer_object

        return answer_object(self)
