"""Count, moments and the test of the normal model, as quantities."""

from __future__ import annotations

import numpy as np

from sheetqc.sheets.decimals import COUNT, PROBABILITY
from sheetqc.sheets.expressions import filled, first_true
from sheetqc.sheets.job import Job
from sheetqc.sheets.workings.quantities import Quantities
from sheetqc.sheets.workings.values import Values
from sheetqc.stats.goodness import anderson_darling


def add_summary(job: Job, quantities: Quantities, values: Values) -> None:
    """Adds count, sums and, where the values have a spread, their moments and A-squared."""
    data, look, x = job.values, job.decimals, values.value.ref
    quantities.add("n", f"COUNT({x})", len(data), COUNT, analysed=len(data), name="n")
    quantities.add("sum", f"SUM({x})", float(data.sum()), analysed=float(data.sum()))
    quantities.add("sumsq", f"SUMSQ({x})", float(data @ data), analysed=float(data @ data))
    quantities.add("minimum", f"MIN({x})", float(data.min()), look.value, name="Minimum")
    quantities.add("maximum", f"MAX({x})", float(data.max()), look.value, name="Maximum")
    told = job.assessment.summary
    if told is None or not job.has_spread:
        return
    for key, formula, value, number_format, name in (
        ("mean", f"AVERAGE({x})", told.mean, look.mean, "Mean"),
        ("s", filled("STDEV.S({x})", x=x), told.s, look.spread, "s"),
        ("median", f"MEDIAN({x})", told.median, look.mean, "Median"),
    ):
        quantities.add(key, formula, value, number_format, analysed=value, name=name)
    # near 0 their last digits hang on the last digit of the mean, in which programs may differ
    if told.skewness is not None:
        quantities.add("skewness", f"ROUND(SKEW({x}),8)", round(told.skewness, 8), "0.00", name="Skewness")
    if told.kurtosis is not None:
        quantities.add("kurtosis", f"ROUND(KURT({x}),8)", round(told.kurtosis, 8), "0.00", name="Kurtosis")
    _add_a_squared(job, quantities, values)


def _add_a_squared(job: Job, quantities: Quantities, values: Values) -> None:
    """A-squared of the normal model and its probability (D'Agostino & Stephens 1986)."""
    test = anderson_darling(np.sort(job.values), "normal")
    n, mean, s = (quantities[key].ref for key in ("n", "mean", "s"))
    z = f"({values.sorted.ref}-{mean})/{s}"
    i = values.number.ref
    formula = filled(
        "-{n}-SUMPRODUCT((2*{i}-1)*LN(NORM.S.DIST({z},TRUE))+(2*({n}-{i})+1)*LN(NORM.S.DIST(-{z},TRUE)))/{n}",
        n=n,
        i=i,
        z=z,
    )
    placed = quantities.add("a2", formula, test.statistic, "0.000", name="Anderson_Darling")
    a = f"({placed.ref}*(1+0.75/{n}+2.25/{n}^2))"
    p = first_true(
        (f"{a}>=10", "3.7E-24"),
        (f"{a}>=0.6", f"EXP(1.2937-5.709*{a}+0.0186*{a}^2)"),
        (f"{a}>=0.34", f"EXP(0.9177-4.279*{a}-1.38*{a}^2)"),
        (f"{a}>=0.2", f"1-EXP(-8.318+42.796*{a}-59.938*{a}^2)"),
        otherwise=f"1-EXP(-13.436+101.14*{a}-223.73*{a}^2)",
    )
    quantities.add("a2_p", p, test.p_value, PROBABILITY, name="Anderson_Darling_p")
