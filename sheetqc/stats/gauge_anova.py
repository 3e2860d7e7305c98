"""Analysis of variance of a crossed gauge study: every appraiser measures every part equally often."""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import special

from sheetqc.stats.door import measured_values
from sheetqc.stats.errors import DataError


@dataclass(frozen=True, slots=True, kw_only=True)
class Source:
    """A row of the table; `F` and `p_value` are None where nothing tests it."""

    name: str
    sum_of_squares: float
    degrees: int
    F: float | None = None
    p_value: float | None = None

    @property
    def mean_square(self) -> float:
        """Sum of squares over degrees of freedom."""
        return self.sum_of_squares / self.degrees


@dataclass(frozen=True, slots=True, kw_only=True)
class GaugeTable:
    """Rows parts, appraisers, interaction and repeatability as far as the study has them.

    When the interaction is pooled, its squares and degrees are in the row of repeatability; `interaction` keeps the
    row it had before, None where it could not be told from repeatability.
    """

    parts: Source
    appraisers: Source | None
    interaction: Source | None
    repeatability: Source
    pooled: bool


def crossed(
    values: ArrayLike, parts: Sequence[Hashable], appraisers: Sequence[Hashable]
) -> tuple[NDArray[np.float64], list[Hashable], list[Hashable]]:
    """The readings as an array of shape (parts, appraisers, trials), and the names along its first two axes.

    Raises
    ------
    DataError : labels not in step with the values, one part only, or cells that do not all hold the same number of
        readings; the message names the first one that differs
    """
    x = measured_values(values, at_least=4)
    if not len(x) == len(parts) == len(appraisers):
        raise DataError(
            f"there are {len(x)} values, {len(parts)} parts and {len(appraisers)} appraisers: one each is due"
        )
    cells: dict[tuple[Hashable, Hashable], list[float]] = {}
    for value, part, appraiser in zip(x, parts, appraisers, strict=True):
        cells.setdefault((part, appraiser), []).append(float(value))
    rows, columns = list(dict.fromkeys(parts)), list(dict.fromkeys(appraisers))
    if len(rows) < 2:
        raise DataError("a crossed study needs at least two parts")
    counts = [len(cells.get((row, column), ())) for row in rows for column in columns]
    trials = max(set(counts), key=counts.count)
    for row in rows:
        for column in columns:
            found = len(cells.get((row, column), ()))
            if found != trials:
                raise DataError(f"part {row}, appraiser {column}: {found} readings where the others have {trials}")
    return np.array([[cells[row, column] for column in columns] for row in rows]), rows, columns


def gauge_table(readings: NDArray[np.float64], alpha: float) -> GaugeTable:
    """The analysis of variance.

    Parameters
    ----------
    readings : shape (parts, appraisers, trials)
    alpha : the interaction is pooled with repeatability when its p-value is above this

    Raises
    ------
    DataError : one appraiser with one trial each

    Reference: Montgomery & Runger (1993), Quality Engineering 6, 115-135 and 289-305.
    """
    p, o, n = readings.shape
    if o == 1 and n == 1:
        raise DataError("one appraiser and one trial: repeatability cannot be told from the parts")
    # differences from the first trial and the first appraiser: what is equal leaves exact zeros
    within = readings - readings[:, :, :1]
    of_cells = readings[:, :, 0] - readings.mean() + within.mean(axis=2)
    between = of_cells - of_cells[:, :1]
    of_appraisers = between.mean(axis=0) - between.mean()
    rest = between - between.mean(axis=1)[:, None] - of_appraisers
    ss_parts = float(o * n * np.sum((of_cells.mean(axis=1) - of_cells.mean()) ** 2))
    ss_appraisers, ss_both = float(p * n * np.sum(of_appraisers**2)), float(n * np.sum(rest**2))
    ss_error = float(np.sum((within - within.mean(axis=2, keepdims=True)) ** 2))
    df_both, df_error = (p - 1) * (o - 1), p * o * (n - 1)
    both = None
    if o > 1 and n > 1:
        both = _tested("interaction", ss_both, df_both, ss_error, df_error)
    pooled = o > 1 and (both is None or (both.p_value or 0.0) > alpha)
    if o == 1:
        ss_appraisers, against, df_against = 0.0, ss_error, df_error
    elif pooled:
        ss_error, df_error = ss_error + ss_both, df_error + df_both
        against, df_against = ss_error, df_error
    else:
        against, df_against = ss_both, df_both
    return GaugeTable(
        parts=_tested("parts", ss_parts, p - 1, against, df_against),
        appraisers=None if o == 1 else _tested("appraisers", ss_appraisers, o - 1, against, df_against),
        interaction=both,
        repeatability=Source(name="repeatability", sum_of_squares=ss_error, degrees=df_error),
        pooled=pooled,
    )


def _tested(name: str, squares: float, degrees: int, against: float, df_against: int) -> Source:
    if against > 0:
        f = squares / degrees / (against / df_against)
        p = float(special.fdtrc(degrees, df_against, f))
    else:
        f, p = (float("inf"), 0.0) if squares > 0 else (0.0, 1.0)
    return Source(name=name, sum_of_squares=squares, degrees=degrees, F=f, p_value=p)
