"""Judgement: what was asked in, what is found out. Decides and explains; the numbers come from `sheetqc.stats`."""

from __future__ import annotations

from sheetqc.assessment import Answer
from sheetqc.judgement.assemble import assessment_of
from sheetqc.judgement.counts_view import count_result
from sheetqc.judgement.terms import terms_of
from sheetqc.study import Sample, Study

__all__ = ["judge"]


def judge(study: Study) -> Answer:
    """The answer to a study: an assessment for each of its characteristics, in their order."""
    counted = tuple(count_result(block, study.header.confidence) for block in study.counts)
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
        counts=tuple(result for result, _ in counted if result is not None),
        findings=(*study.findings, *(finding for _, finding in counted)),
    )
