"""Simulated tables of A-squared against published upper points."""

import pytest

from sheetqc.stats.null_distribution import critical_value
from tests.reference.families import MODIFIED

# upper points of the modified statistic; D'Agostino & Stephens (1986), tables 4.11 and 4.22, from memory
PUBLISHED = {
    "exponential": {0.25: 0.736, 0.15: 0.916, 0.10: 1.062, 0.05: 1.321, 0.025: 1.591, 0.01: 1.959},
    "logistic": {0.25: 0.426, 0.10: 0.563, 0.05: 0.660, 0.025: 0.769, 0.01: 0.906, 0.005: 1.010},
}


@pytest.mark.parametrize("name", PUBLISHED)
@pytest.mark.parametrize("n", [25, 100])
def test_tables_of_the_exponential_and_the_logistic(name: str, n: int) -> None:
    for p, expected in PUBLISHED[name].items():
        got = critical_value(name, p, (1.0, 1.0), n) * MODIFIED[name](n)
        assert got == pytest.approx(expected, rel=0.025), p
