"""sheetqc: answers capability studies sent as workbooks.

`assess` judges the values of one characteristic, `answer` a workbook, `watch` serves a folder of them.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from sheetqc.assessment import Assessment
    from sheetqc.outcome import Outcome

__all__ = ["__version__", "answer", "assess", "watch"]

__version__ = "0.1.0"


def assess(
    values: Sequence[float],
    *,
    lower: float | None = None,
    upper: float | None = None,
    nominal: float | None = None,
    natural_lower: float | None = None,
    natural_upper: float | None = None,
    kind: str | None = None,
    model: str | None = None,
    subgroups: Sequence[object] | int | None = None,
    streams: Sequence[object] | None = None,
    resolution: float | None = None,
    requirement: float = 1.33,
    confidence: float = 0.95,
    seed: int = 1,
) -> Assessment:
    """The assessment of one characteristic.

    Parameters
    ----------
    values : shape (n,), measured values in time order
    lower, upper, nominal : specification limits and nominal value, in the unit of the values
    natural_lower, natural_upper : bounds no value can pass, no specification (flatness >= 0)
    kind : kind of characteristic in words, such as "flatness" or "burst pressure"; narrows the candidate models
    model : name of a family to be used, such as "weibull"
    subgroups : a label per value, or the size of consecutive subgroups
    streams : a label per value: cavity, spindle, head
    resolution : step the values are rounded to
    requirement : smallest acceptable Ppk
    confidence : of each one-sided bound, between 0.5 and 1
    seed : of whatever is simulated; the same input and seed give the same result

    Raises
    ------
    UsageError : when the call itself is wrong; a doubt about the values is a finding of the assessment
    """
    from sheetqc.judgement.from_arrays import assess as assess_arrays

    return assess_arrays(
        values,
        lower=lower,
        upper=upper,
        nominal=nominal,
        natural_lower=natural_lower,
        natural_upper=natural_upper,
        kind=kind,
        model=model,
        subgroups=subgroups,
        streams=streams,
        resolution=resolution,
        requirement=requirement,
        confidence=confidence,
        seed=seed,
    )


def answer(path: str | Path, into: str | Path | None = None) -> Outcome:
    """Answers one workbook into a folder (beside the original when None); see `sheetqc.pipeline.answer`."""
    from sheetqc.pipeline import answer as answer_workbook

    source = Path(path)
    return answer_workbook(source, source.parent if into is None else Path(into))


def watch(folder: str | Path, *, once: bool = False, workers: int = 1) -> bool:
    """Serves a folder; True when something was returned unanswered."""
    from sheetqc.service import watch as watch_folder

    return watch_folder(Path(folder), once=once, workers=workers)
