"""The verdict as a formula of estimate, bounds and requirement, and whether it still is the one of the analysis."""

from __future__ import annotations

from sheetqc.assessment import State, Verdict
from sheetqc.sheets.cells import NONE, Placed, cut
from sheetqc.sheets.expressions import cut_off, first_true, literal
from sheetqc.sheets.job import Job
from sheetqc.sheets.words import Words
from sheetqc.sheets.workings.index import Limits
from sheetqc.sheets.workings.inputs import Inputs
from sheetqc.sheets.workings.quantities import Quantities

STATES: tuple[State, ...] = ("shown", "likely", "doubtful", "not met", "no verdict")


def add_verdict(job: Job, quantities: Quantities, inputs: Inputs) -> None:
    """Adds condition, verdict, sign and the line of the band."""
    verdict = job.assessment.verdict
    condition = quantities.constant("condition", " ".join(verdict.reasons) if verdict.state == "no verdict" else None)
    state = _add_state(job, quantities, inputs, condition)
    signs = tuple((f"{state.ref}={literal(job.say.state(s))}", literal(job.say.sign(s))) for s in STATES[:-1])
    value = _state_now(job, quantities, inputs, condition)
    formula = first_true(*signs, otherwise=literal(job.say.sign("no verdict")))
    quantities.add("sign", f'{formula}&"  "&{state.ref}', f"{job.say.sign(value)}  {state.value}")
    _add_line(job, quantities, inputs)


def _parts(quantities: Quantities, verdict: Verdict) -> tuple[Placed, Placed, Placed] | None:
    keys = (verdict.index, f"{verdict.index}_lower", f"{verdict.index}_upper")
    if any(key not in quantities for key in keys):
        return None
    return quantities[keys[0]], quantities[keys[1]], quantities[keys[2]]


def _add_state(job: Job, quantities: Quantities, inputs: Inputs, condition: Placed) -> Placed:
    words = {state: literal(job.say.state(state)) for state in STATES}
    parts = _parts(quantities, job.assessment.verdict)
    now = _state_now(job, quantities, inputs, condition)
    if parts is None:
        return quantities.constant("verdict", job.say.state(now), name="Verdict")
    estimate, lower, upper = parts
    required = inputs.requirement.ref
    formula = first_true(
        (f"OR(LEN({condition.ref})>0,NOT(ISNUMBER({estimate.ref})),NOT(ISNUMBER({required})))", words["no verdict"]),
        (f"AND(ISNUMBER({lower.ref}),{lower.ref}>={required})", words["shown"]),
        (f"AND(ISNUMBER({upper.ref}),{upper.ref}<{required})", words["not met"]),
        (f"{estimate.ref}>={required}", words["likely"]),
        otherwise=words["doubtful"],
    )
    analysed = job.say.state(job.assessment.verdict.state)
    return quantities.add("verdict", formula, job.say.state(now), name="Verdict", analysed=analysed)


def _state_now(job: Job, quantities: Quantities, inputs: Inputs, condition: Placed) -> State:
    """What the formula gives for what stands in the cells."""
    parts = _parts(quantities, job.assessment.verdict)
    if parts is None or condition.value or not parts[0].is_number or not inputs.requirement.is_number:
        return "no verdict"
    estimate, lower, upper = parts
    required = inputs.requirement.number
    if lower.is_number and lower.number >= required:
        return "shown"
    if upper.is_number and upper.number < required:
        return "not met"
    return "likely" if estimate.number >= required else "doubtful"


def _add_line(job: Job, quantities: Quantities, inputs: Inputs) -> None:
    """The line of the band: index, bounds, requirement."""
    say, verdict = job.say, job.assessment.verdict
    parts = _parts(quantities, verdict)
    if parts is None:
        quantities.constant("line", say("band.nothing"))
        return
    estimate, lower, upper = parts
    sure = say("band.sure", confidence=say.percent(job.assessment.confidence))
    pieces = (
        (literal(f"{verdict.index} "), verdict.index + " "),
        _two_decimals(estimate),
        (literal(say("band.least")), say("band.least")),
        _two_decimals(lower),
        (literal(say("band.most")), say("band.most")),
        _two_decimals(upper),
        (literal(sure), sure),
        (literal(say("band.required")), say("band.required")),
        _two_decimals(inputs.requirement),
    )
    nothing = say("band.nothing")
    formula = f"IF(ISNUMBER({estimate.ref}),{'&'.join(p[0] for p in pieces)},{literal(nothing)})"
    quantities.add("line", formula, "".join(p[1] for p in pieces) if estimate.is_number else nothing)


def _two_decimals(cell: Placed) -> tuple[str, str]:
    """A number cut off after two decimals: 1.329 is not 1.33."""
    formula = f"IF(ISNUMBER({cell.ref}),FIXED({cut_off(cell.ref)},2,TRUE),{literal(NONE)})"
    return formula, f"{cut(cell.number):.2f}" if cell.is_number else NONE


def add_settings(job: Job, quantities: Quantities, inputs: Inputs, limits: Limits) -> None:
    """Adds what values and settings were at the analysis, and whether they still are."""
    say: Words = job.say
    words = literal(say("yes")), literal(say("no"))
    values = quantities.add("same_values", f"IF({_same_values(quantities)},{words[0]},{words[1]})", say("yes"))
    told = {
        key: _same(cell, quantities.constant(f"analysed.{key}", cell.value, job.decimals.value))
        for key, cell in (("lower", limits.lower), ("upper", limits.upper), ("requirement", inputs.requirement))
    }
    if inputs.model is not None:
        title = quantities.constant("analysed.model", inputs.model.value)
        told["model"] = f"{inputs.model.ref}={title.ref}"
    same = ",".join(told.values())
    quantities.add("same_settings", f"IF(AND({same}),{words[0]},{words[1]})", say("yes"))
    shape = ",".join(told[key] for key in told if key != "requirement")
    quantities.add("unchanged", f"IF(AND({values.ref}={words[0]},{shape}),1,0)", 1)


def add_status(job: Job, quantities: Quantities) -> None:
    """Adds the line that says whether the sheet still shows the analysis."""
    say, yes = job.say, literal(job.say("yes"))
    formula = first_true(
        (f"{quantities['same_values'].ref}<>{yes}", literal(say("status.stale"))),
        (f"{quantities['same_settings'].ref}<>{yes}", literal(say("status.changed"))),
        otherwise=literal(say("status.analysed")),
    )
    quantities.add("status", formula, say("status.analysed"))


def _same_values(quantities: Quantities) -> str:
    n, total, squares = (quantities[key] for key in ("n", "sum", "sumsq"))
    n0, total0, squares0 = (quantities.analysed(key) for key in ("n", "sum", "sumsq"))
    return (
        f"AND({n.ref}={n0.ref},ABS({total.ref}-{total0.ref})<=1E-9*SQRT({n0.ref}*{squares0.ref}),"
        f"ABS({squares.ref}-{squares0.ref})<=1E-9*{squares0.ref})"
    )


def _same(cell: Placed, analysed: Placed) -> str:
    now, then = cell.ref, analysed.ref
    return f"ISNUMBER({now})=ISNUMBER({then}),ABS(N({now})-N({then}))<=1E-9*ABS(N({then}))"
