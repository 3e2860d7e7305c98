"""Judgement: what was asked in, what is found out. Decides and explains; the numbers come from `sheetqc.stats`."""

from __future__ import annotations

from sheetqc.assessment import Answer
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.terms import terms_of
from sheetqc.study import Sample, Study

__all__ = ["judge"]


def judge(study: Study) -> Answer:
    """The answer to a study: an assessment for each of its characteristics, in their order."""
    return Answer(
        source=study.source,
        header=study.header,
        assessments=tuple(
            assessment_of(
                asked,
                study.sample(asked.id) or Sample(characteristic=asked.id, values=()),
                terms_of(asked, study.header),
                tuple(finding for name, finding in study.findings_of if name == asked.id),
                next((g for g in study.gauge_studies if g.characteristic == asked.id), None),
            )
            for asked in study.characteristics
        ),
        findings=study.findings,
    )
