"""The assessment of one characteristic: the questions asked in their order, the answers put together."""

from __future__ import annotations

import numpy as np

from sheetqc.assessment import Assessment, Estimate, Normality, Summary, Test, Verdict
from sheetqc.finding import Finding
from sheetqc.judgement.capability import Capability, capability_of
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.data import DataView, data_view
from sheetqc.judgement.explain import answers, findings_of, next_steps
from sheetqc.judgement.shape import Shape, shape_of
from sheetqc.judgement.steadiness import Steadiness, steadiness_of, subgroup_labels
from sheetqc.judgement.streams import stream_conditions
from sheetqc.judgement.terms import Terms
from sheetqc.judgement.verdict import verdict_of
from sheetqc.stats.descriptive import describe
from sheetqc.stats.normality import ppcc, shapiro_wilk
from sheetqc.stats.goodness import anderson_darling
from sheetqc.study import Characteristic, Sample
