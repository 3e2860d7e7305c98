"""Slopes of log Gamma against exact arithmetic."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from sheetqc.stats.families.digamma import log_minus_digamma, trigamma


@pytest.mark.parametrize("a", [1e-6, 0.01, 0.3, 1.0, 2.5, 12.0, 29.9, 30.1, 500.0, 1e6, 1e12])
def test_slopes_of_log_gamma(a: float) -> None:
    with mp.workdps(50):
        difference = float(mp.log(mp.mpf(a)) - mp.digamma(mp.mpf(a)))
        second = float(mp.polygamma(1, mp.mpf(a)))
    assert float(log_minus_digamma(np.array([a]))[0]) == pytest.approx(difference, rel=2e-14)
    assert float(trigamma(np.array([a]))[0]) == pytest.approx(second, rel=2e-15)
