"""Control-chart constants against printed tables and against simulation."""

import numpy as np
import pytest

from sheetqc.stats.constants import control_chart_constants
from sheetqc.stats.errors import DataError

PRINTED = [
    # n, A2, c4, B3, B4, d2, d3, D3, D4: ASTM MNL 7, table of factors (from memory), printed to 3 or 4 decimals
    (2, 1.880, 0.7979, 0.0, 3.267, 1.128, 0.8525, 0.0, 3.267),
    (3, 1.023, 0.8862, 0.0, 2.568, 1.693, 0.8884, 0.0, 2.575),
    (4, 0.729, 0.9213, 0.0, 2.266, 2.059, 0.8798, 0.0, 2.282),
    (5, 0.577, 0.9400, 0.0, 2.089, 2.326, 0.8641, 0.0, 2.114),
    (7, 0.419, 0.9594, 0.118, 1.882, 2.704, 0.8332, 0.076, 1.924),
    (10, 0.308, 0.9727, 0.284, 1.716, 3.078, 0.7971, 0.223, 1.777),
    (25, 0.153, 0.9896, 0.565, 1.435, 3.931, 0.7084, 0.459, 1.541),
]


@pytest.mark.parametrize("row", PRINTED, ids=lambda row: f"n={row[0]}")
def test_printed_table(row: tuple[float, ...]) -> None:
    k = control_chart_constants(int(row[0]))
    for got, printed in zip((k.A2, k.c4, k.B3, k.B4, k.d2, k.d3, k.D3, k.D4), row[1:], strict=True):
        assert got == pytest.approx(printed, abs=6e-4)


def test_closed_forms() -> None:
    # for n = 2 the range is |x - y|: mean 2/sqrt(pi), variance 2 - 4/pi; for n = 3 the mean is 3/sqrt(pi)
    assert control_chart_constants(2).d2 == pytest.approx(2 / np.sqrt(np.pi), rel=1e-12)
    assert control_chart_constants(2).d3 == pytest.approx(np.sqrt(2 - 4 / np.pi), rel=1e-10)
    assert control_chart_constants(3).d2 == pytest.approx(3 / np.sqrt(np.pi), rel=1e-12)


def test_a_size_no_table_prints() -> None:
    x = np.random.default_rng(2).normal(size=(40_000, 60))
    k = control_chart_constants(60)
    ranges = np.ptp(x, axis=1)
    assert k.d2 == pytest.approx(ranges.mean(), abs=4 * ranges.std() / 200)
    assert k.d3 == pytest.approx(ranges.std(), rel=0.02)
    assert k.c4 == pytest.approx(x.std(axis=1, ddof=1).mean(), rel=1e-3)


@pytest.mark.parametrize("n", [0, 1, 2.5])
def test_bad_size(n: float) -> None:
    with pytest.raises(DataError):
        control_chart_constants(n)  # type: ignore[arg-type]
