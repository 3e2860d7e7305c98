"""What the writing of one characteristic's sheet needs to know."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sheetqc.assessment import Answer, Assessment, ModelFit
from sheetqc.finding import Cell
from sheetqc.sheets.cells import Pen
from sheetqc.sheets.decimals import Decimals
from sheetqc.sheets.words import Words

SELECTABLE = 11
"""Candidates that can be put in use on the sheet: every one lengthens the formulas of the curve."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Job:
    """One characteristic, the pen that writes its sheet, and the words to be used.

    `alone` is True when the answer is a workbook of its own, so that formulas cannot refer to the sender's cells.
    """

    answer: Answer
    assessment: Assessment
    pen: Pen
    say: Words
    decimals: Decimals
    alone: bool = False

    @property
    def models(self) -> tuple[ModelFit, ...]:
        """The candidates in the order in which they are shown: the one in use, then the best weight first.

        The normal model is among the selectable ones wherever it is a candidate: many readers ask for it.
        """
        in_use = self.assessment.model_in_use
        fits = sorted(self.assessment.models, key=lambda fit: (fit.family != in_use, -fit.weight))
        normal = next((i for i, fit in enumerate(fits) if fit.family == "normal"), 0)
        if normal >= SELECTABLE:
            fits.insert(SELECTABLE - 1, fits.pop(normal))
        return tuple(fits)

    @property
    def values(self) -> NDArray[np.float64]:
        """The values used, in time order; shape (n,)."""
        return np.asarray(self.assessment.sample.values, dtype=float)

    @property
    def has_spread(self) -> bool:
        """Whether there is anything to compute from."""
        return len(self.assessment.sample.values) >= 3 and bool(np.ptp(self.values) > 0)

    def linked(self, cell: Cell | None) -> Cell | None:
        """A cell of the sender's workbook that a formula may refer to, or None."""
        return None if self.alone else cell
