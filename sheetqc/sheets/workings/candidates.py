"""The candidate models, a row each: parameters as fitted, and what follows from them by formulas."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from sheetqc.assessment import ModelFit
from sheetqc.sheets import decimals
from sheetqc.sheets.cells import NONE, Column, Placed, Value
from sheetqc.sheets.expressions import TAIL, constant, literal, of_family
from sheetqc.sheets.job import SELECTABLE, Job
from sheetqc.sheets.workings.ground import FIRST, Ground
from sheetqc.sheets.workings.index import Limits, Region, greatest_ppk, least_ppk, pp, ppk
from sheetqc.sheets.workings.reach import beyond_reach, drawn_as, drawn_references
from sheetqc.stats.families import Family, family

Quantile = Callable[[Family, tuple[str, ...], ModelFit, float, float], tuple[str, Value]]

HEADS = (
    "model", "p1", "p2", "p3", "x_low", "x_median", "x_high", "Pp", "Ppk", "Ppk_lower", "Ppk_upper",
    "below", "above", "total", "aicc", "weight", "a2", "p", "admitted", "objection",
)  # fmt: skip
WIDTHS = (130,)


@dataclass(frozen=True, slots=True, kw_only=True)
class Candidates:
    """Columns of the candidates, and the references of their parameters by row."""

    fits: tuple[ModelFit, ...]
    parameters: tuple[tuple[str, ...], ...]
    title: Column
    low: Column
    median: Column
    high: Column
    pp: Column
    ppk: Column
    ppk_lower: Column
    ppk_upper: Column
    below: Column
    above: Column
    total: Column
    weight: Column
    a_squared: Column
    p_value: Column

    @property
    def count(self) -> int:
        """How many there are."""
        return len(self.fits)

    @property
    def selectable(self) -> Column:
        """The titles to choose the model in use from."""
        return self.title.part(0, min(SELECTABLE, self.count))

    def expressions(self, kind: str, **arguments: str) -> tuple[str, ...]:
        """An expression of every selectable candidate, such as its density at {x}."""
        told = []
        for i, (fit, parameters) in enumerate(zip(self.fits[:SELECTABLE], self.parameters, strict=False)):
            references = drawn_references(fit, parameters, self.low.at(i), self.median.at(i), self.high.at(i))
            told.append(of_family(drawn_as(fit)[0], kind, references, **arguments))
        return tuple(told)


def write_candidates(
    job: Job, ground: Ground, limits: Limits, regions: Sequence[Region | None], unchanged: Placed
) -> Candidates | None:
    """Writes the candidates as they are shown; `regions` runs in step with them.

    `unchanged` tells whether what cannot follow still holds.
    """
    fits = job.models
    if not fits:
        return None
    first = ground.block(job.say("work.candidates"), tuple(job.say(f"work.candidates.{k}") for k in HEADS), WIDTHS)
    column = {key: first + index for index, key in enumerate(HEADS)}
    pen, look = job.pen, job.decimals
    for index, fit in enumerate(fits):
        _write_fitted(job, FIRST + index, column, fit)
    members = tuple(family(fit.family) for fit in fits)
    parameters = tuple(_parameter_references(FIRST + i, column["p1"], fit) for i, fit in enumerate(fits))

    def below_one_another(key: str, cells: Sequence[tuple[str, Value]], number_format: str) -> Column:
        return pen.formulas(FIRST, column[key], [c[0] for c in cells], [c[1] for c in cells], number_format)

    def quantiles(key: str, of: Quantile, p: float, values: Sequence[float]) -> Column:
        told = [of(m, r, f, p, v) for m, r, f, v in zip(members, parameters, fits, values, strict=True)]
        return below_one_another(key, told, look.mean)

    low = quantiles("x_low", _quantile, TAIL, [f.quantiles.low for f in fits])
    median = quantiles("x_median", _quantile, 0.5, [f.quantiles.median for f in fits])
    high = quantiles("x_high", _upper_quantile, TAIL, [f.quantiles.high for f in fits])
    rows = range(len(fits))
    triple = [(low.at(i), median.at(i), high.at(i)) for i in rows]
    rates = [_rates(m, p, f, limits, unchanged) for m, p, f in zip(members, parameters, fits, strict=True)]
    below = below_one_another("below", [r[0] for r in rates], decimals.RATE)
    above = below_one_another("above", [r[1] for r in rates], decimals.RATE)
    return Candidates(
        fits=fits,
        parameters=parameters,
        title=Column(FIRST, column["model"], tuple(m.title for m in members)),
        low=low,
        median=median,
        high=high,
        pp=below_one_another("Pp", [pp(limits, t[0], t[2]) for t in triple], decimals.INDEX),
        ppk=below_one_another("Ppk", [ppk(limits, *t) for t in triple], decimals.INDEX),
        ppk_lower=below_one_another(
            "Ppk_lower",
            [_own_bound(least_ppk, limits, r, f.ppk_lower) for r, f in zip(regions, fits, strict=True)],
            "0.00",
        ),
        ppk_upper=below_one_another(
            "Ppk_upper",
            [_own_bound(greatest_ppk, limits, r, f.ppk_upper) for r, f in zip(regions, fits, strict=True)],
            "0.00",
        ),
        below=below,
        above=above,
        total=below_one_another("total", [_total(limits, below.at(i), above.at(i)) for i in rows], decimals.RATE),
        weight=Column(FIRST, column["weight"], tuple(f.weight for f in fits)),
        a_squared=Column(FIRST, column["a2"], tuple(f.anderson_darling.statistic for f in fits)),
        p_value=Column(FIRST, column["p"], tuple(_or_none(f.anderson_darling.p_value) for f in fits)),
    )


def _or_none(value: float | None) -> Value:
    return NONE if value is None else value


def _write_fitted(job: Job, row: int, column: dict[str, int], fit: ModelFit) -> None:
    """What only the fitting gives: numbers as of the analysis."""
    pen = job.pen
    pen.text(row, column["model"], family(fit.family).title, "small")
    for index, (_, value) in enumerate(fit.parameters):
        pen.number(row, column["p1"] + index, value, "small")
    pen.number(row, column["aicc"], fit.aicc, "small", "0.00")
    pen.number(row, column["weight"], fit.weight, "small", decimals.SHARE)
    pen.number(row, column["a2"], fit.anderson_darling.statistic, "small", "0.000")
    if fit.anderson_darling.p_value is not None:
        pen.number(row, column["p"], fit.anderson_darling.p_value, "small", decimals.PROBABILITY)
    else:
        pen.text(row, column["p"], NONE, "small")
    pen.text(row, column["admitted"], job.say("yes" if fit.admitted else "no"), "small")
    pen.text(row, column["objection"], fit.objection, "small")


def _parameter_references(row: int, column: int, fit: ModelFit) -> tuple[str, ...]:
    return tuple(Placed(row, column + index, value).ref for index, (_, value) in enumerate(fit.parameters))


def _quantile(member: Family, parameters: tuple[str, ...], fit: ModelFit, p: float, value: float) -> tuple[str, Value]:
    """The quantile; where it has no closed form, one Newton step from the value of the analysis."""
    if beyond_reach(fit):
        return constant(value), value
    if member.worksheet.quantile:
        return of_family(member, "quantile", parameters, p=constant(p)), value
    theta = [number for _, number in fit.parameters]
    step = (p - float(member.cdf(value, theta))) / float(member.density(value, theta))
    return of_family(member, "correction", parameters, p=constant(p), start=constant(value)), value + step


def _upper_quantile(
    member: Family, parameters: tuple[str, ...], fit: ModelFit, q: float, value: float
) -> tuple[str, Value]:
    if beyond_reach(fit):
        return constant(value), value
    if member.worksheet.upper_quantile:
        return of_family(member, "upper_quantile", parameters, q=constant(q)), value
    theta = [number for _, number in fit.parameters]
    step = (float(member.survival(value, theta)) - q) / float(member.density(value, theta))
    return of_family(member, "upper_correction", parameters, q=constant(q), start=constant(value)), value + step


def _rates(
    member: Family, parameters: tuple[str, ...], fit: ModelFit, limits: Limits, unchanged: Placed
) -> tuple[tuple[str, Value], tuple[str, Value]]:
    """Expected parts per million below and above."""
    theta = [value for _, value in fit.parameters]
    lower, upper = limits.lower, limits.upper
    values: list[Value] = [
        1e6 * float(member.cdf(lower.number, theta)) if lower.is_number else NONE,
        1e6 * float(member.survival(upper.number, theta)) if upper.is_number else NONE,
    ]
    if beyond_reach(fit):
        below, above = (
            literal(NONE) if isinstance(v, str) else f"IF({unchanged.ref}=1,{constant(v)},{literal(NONE)})"
            for v in values
        )
    else:
        cdf, survival = (
            of_family(member, kind, parameters, x=cell.ref) for kind, cell in (("cdf", lower), ("survival", upper))
        )
        below = f"IF(ISNUMBER({lower.ref}),1E6*({cdf}),{literal(NONE)})"
        above = f"IF(ISNUMBER({upper.ref}),1E6*({survival}),{literal(NONE)})"
    return (below, values[0]), (above, values[1])


def _total(limits: Limits, below: Placed, above: Placed) -> tuple[str, Value]:
    numbers = [p.number for p in (below, above) if p.is_number]
    formula = f"IF({limits.count}=0,{literal(NONE)},SUM({below.ref},{above.ref}))"
    return formula, sum(numbers) if numbers else NONE


def _own_bound(
    of: Callable[[Limits, Region], tuple[str, Value]], limits: Limits, region: Region | None, analysed: float | None
) -> tuple[str, Value]:
    """The bound over the model's own region; without one, the number of the analysis."""
    if region is not None:
        return of(limits, region)
    return (literal(NONE), NONE) if analysed is None else (constant(analysed), analysed)
