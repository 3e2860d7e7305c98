"""The reference values: where they come from, how a result is compared with them."""

from __future__ import annotations

import json
import shutil
import subprocess
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import pytest

Check = dict[str, Any]

CHECKS: list[Check] = json.loads(Path(__file__).with_name("checks.json").read_text(encoding="utf-8"))["checks"]

LOADED_FROM_R = {
    "mle-weibull-groundbeef": ("fitdistrplus", "data(groundbeef, package = 'fitdistrplus'); groundbeef$serving")
}
BUILT = {"strd-numacc4": [10000000.2] + [10000000.1, 10000000.3] * 500}


def values_of(check: Check) -> list[float]:
    """The values of a check: given, built by the rule it states, or asked from R (skipped where that is not there)."""
    if check["id"] in BUILT:
        return BUILT[check["id"]]
    if check["id"] in LOADED_FROM_R:
        package, expression = LOADED_FROM_R[check["id"]]
        return from_r(expression, package)
    data: list[float] = check["data"]
    return data


def from_r(expression: str, *packages: str) -> list[float]:
    """Numbers that an R expression gives; the test is skipped, with the reason, without R or a package it needs."""
    rscript = shutil.which("Rscript")
    if rscript is None:
        pytest.skip("R is not installed")
    for package in packages:
        asked = f"quit(status = as.integer(!requireNamespace('{package}', quietly = TRUE)))"
        if subprocess.run([rscript, "--vanilla", "-e", asked], capture_output=True, check=False).returncode:
            pytest.skip(f"the R package {package} is not installed")
    program = f"x <- local({{{expression}}}); cat(format(as.numeric(x), digits = 17), sep = '\\n')"
    done = subprocess.run([rscript, "--vanilla", "-e", program], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    return [float(line) for line in done.stdout.split()]


def differences(check: Check, got: Mapping[str, Any]) -> list[str]:
    """What does not agree, in words; a name that was not given counts as not agreeing."""
    wrong = []
    for name, expected in check["expected"].items():
        tolerance = check["tolerance"].get(name, check["tolerance"]["default"])
        if name not in got:
            wrong.append(f"{name}: nothing given, {expected} expected")
        elif not _agrees(got[name], expected, tolerance):
            wrong.append(f"{name}: {got[name]} for {expected}")
    return wrong


def _agrees(got: Any, expected: Any, tolerance: Mapping[str, float]) -> bool:
    if isinstance(expected, list):
        return len(got) == len(expected) and all(_agrees(g, e, tolerance) for g, e in zip(got, expected, strict=True))
    if expected is None or isinstance(expected, str):
        return bool(got == expected)
    return bool(abs(float(got) - expected) <= tolerance["abs"] + tolerance["rel"] * abs(expected))
