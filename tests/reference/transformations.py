"""Power transforms and Johnson's system."""

from __future__ import annotations

from typing import Any

from scipy import special

from sheetqc.stats import box_cox, johnson, johnson_by_moments, yeo_johnson
from tests.reference.checks import Check, values_of


def box_cox_transform(check: Check) -> dict[str, Any]:
    """Lambda with its profile interval."""
    found = box_cox(values_of(check), check["inputs"]["confidence"])
    return {
        "lambda_mle": found.lambda_,
        "loglik": found.log_likelihood,
        "lambda_ci_low": found.lower,
        "lambda_ci_high": found.upper,
    }


def yeo_johnson_transform(check: Check) -> dict[str, Any]:
    """Lambda and the log-likelihood there."""
    found = yeo_johnson(values_of(check))
    return {"lambda_mle": found.lambda_, "loglik": found.log_likelihood}


def johnson_system(check: Check) -> dict[str, Any]:
    """A member by four quantiles, or by four moments."""
    x = values_of(check)
    if "z" in check["inputs"]:
        found = johnson(x, check["inputs"]["z"])
        own = {"quantiles": list(found.quantiles), "ratio_mn_over_p2": found.ratio}
    else:
        found = johnson_by_moments(x)
        low, middle, high = found.back(special.ndtri([0.00135, 0.5, 0.99865]))
        own = {"q00135": low, "q50": middle, "q99865": high}
    return {
        "type": found.form,
        "gamma": found.gamma,
        "delta": found.delta,
        "xi": found.xi,
        "lam": found.scale,
        **own,
    }
