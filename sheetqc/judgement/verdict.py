"""The verdict: an index with its bounds against the requirement, on conditions that must hold."""

from __future__ import annotations

from collections.abc import Sequence

from sheetqc.assessment import Estimate, State, Verdict
from sheetqc.judgement.condition import Condition
from sheetqc.judgement.terms import Terms
from sheetqc.judgement.wording import index as to_two_decimals
from sheetqc.judgement.wording import number, percent


def state_of(estimate: Estimate, requirement: float) -> State:
    """The state of an index against a requirement; a missing bound counts against the claim it would support."""
    if estimate.estimate is None:
        return "no verdict"
    if estimate.lower is not None and estimate.lower >= requirement:
        return "shown"
    if estimate.upper is not None and estimate.upper < requirement:
        return "not met"
    return "likely" if estimate.estimate >= requirement else "doubtful"


def verdict_of(
    estimate: Estimate | None, index: str, terms: Terms, conditions: Sequence[Condition], next_steps: Sequence[str]
) -> Verdict:
    """The verdict on one characteristic with its reasons and what to do next."""
    if conditions or estimate is None or estimate.estimate is None:
        return Verdict(
            state="no verdict",
            requirement=terms.requirement,
            index=index,
            reasons=tuple(c.reason for c in conditions) or ("The index could not be computed.",),
            next_steps=tuple(c.remedy for c in conditions),
        )
    state = state_of(estimate, terms.requirement)
    return Verdict(
        state=state,
        requirement=terms.requirement,
        index=index,
        reasons=(_reason(state, estimate, index, terms),),
        next_steps=tuple(next_steps),
    )


def _reason(state: State, estimate: Estimate, index: str, terms: Terms) -> str:
    required = f"the required {number(terms.requirement)} ({terms.requirement_from})"
    sure = f"at {percent(terms.confidence)} confidence"
    value = to_two_decimals(estimate.estimate or 0.0)
    lower = "unknown" if estimate.lower is None else to_two_decimals(estimate.lower)
    upper = "unknown" if estimate.upper is None else to_two_decimals(estimate.upper)
    if state == "shown":
        return f"{index} is at least {lower} {sure}, which reaches {required}; the estimate is {value}."
    if state == "likely":
        return (
            f"The estimate of {index}, {value}, reaches {required}, but {sure} it is only known to be at least {lower}."
        )
    if state == "doubtful":
        return f"The estimate of {index}, {value}, misses {required}, though {sure} it may be as high as {upper}."
    return f"{index} is at most {upper} {sure}, which misses {required}; the estimate is {value}."
