"""Indices and their bounds: coverage, exactness, the quantile method."""

import numpy as np
import pytest
from scipy import stats

from sheetqc.stats.errors import DataError
from sheetqc.stats.indices import (
    bissell,
    capability,
    grouped,
    one_sided_index_bound,
    quantile_capability,
    quantile_indices,
)
from sheetqc.stats.within import mean_range_spread


def test_the_quantile_method_reduces_to_the_normal_one() -> None:
    low, high = stats.norm.ppf([0.00135, 0.99865], 10, 0.1)
    found = quantile_capability(low, 10.0, high, 9.5, 10.6)
    assert found.Ppl == pytest.approx(0.5 / 0.3, rel=1e-4)
    assert found.Ppu == pytest.approx(0.6 / 0.3, rel=1e-4)
    assert found.Pp == pytest.approx(1.1 / 0.6, rel=1e-4)
    assert found.Ppk == found.Ppl


def test_one_sided_limits_give_one_side() -> None:
    found = quantile_capability(1.0, 2.0, 4.0, None, 6.0)
    assert (found.Pp, found.Ppl, found.Ppu, found.Ppk) == (None, None, 2.0, 2.0)
    assert quantile_capability(1.0, 2.0, 4.0, None, None).Ppk is None


def test_the_exact_one_sided_bound_covers() -> None:
    rng = np.random.default_rng(11)
    x = rng.normal(0, 1, size=(4000, 30))
    estimates = (4.0 - x.mean(axis=1)) / (3 * x.std(axis=1, ddof=1))
    below = np.mean([one_sided_index_bound(e, 29, 30, 0.95) <= 4 / 3 for e in estimates])
    assert below == pytest.approx(0.95, abs=0.012)


def test_bissell_covers_about_as_it_says() -> None:
    rng = np.random.default_rng(12)
    x = rng.normal(0.2, 1, size=(4000, 50))
    mean, s = x.mean(axis=1), x.std(axis=1, ddof=1)
    estimates = np.minimum(4 - mean, 4 + mean) / (3 * s)
    below = np.mean([(bissell(e, 49, 50, 0.95, sides=1).lower or 0) <= 3.8 / 3 for e in estimates])
    assert 0.93 < below < 0.97


def test_within_and_total_part_when_the_mean_moves() -> None:
    rng = np.random.default_rng(13)
    x = rng.normal(10, 0.1, 100) + np.repeat(rng.normal(0, 0.2, 20), 5)
    found = capability(x, 9.0, 11.0, subgroups=np.repeat(np.arange(20), 5).tolist())
    assert found.Cpk is not None
    assert found.Ppk is not None
    assert found.Cpk.estimate > 1.5 * found.Ppk.estimate


def test_no_limit_is_refused() -> None:
    with pytest.raises(DataError, match="limit"):
        capability([1.0, 2.0, 3.0])


def test_labels_must_run_in_step() -> None:
    with pytest.raises(DataError, match="labels"):
        capability([1.0, 2.0, 3.0], upper=5.0, subgroups=[1, 1])


def test_arrays_of_quantiles() -> None:
    low, median, high = np.array([1.0, 2.0, 3.0]), np.array([2.0, 2.0, 4.0]), np.array([4.0, 5.0, 4.0])
    found = quantile_indices(low, median, high, 0.5, 6.0)
    assert found.Pp == pytest.approx([5.5 / 3, 5.5 / 3, 5.5])
    # no room between the quantiles of a side: no index of that side
    assert found.Ppl == pytest.approx([1.5, np.nan, 3.5], nan_ok=True)
    assert found.Ppu == pytest.approx([2.0, 4 / 3, np.nan], nan_ok=True)
    assert found.Ppk == pytest.approx([1.5, 4 / 3, 3.5])
    for i in range(3):
        alone = quantile_capability(low[i], median[i], high[i], 0.5, 6.0)
        assert alone.Ppk == pytest.approx(found.Ppk[i])  # type: ignore[index]
        assert (alone.Ppl is None) == bool(np.isnan(found.Ppl[i]))  # type: ignore[index]
    assert quantile_indices(low, median, high, None, 6.0).Pp is None
    assert quantile_indices(low[:, None], 6.0, high + 5, 0.5, None).Ppk.shape == (3, 1)  # type: ignore[union-attr]
    assert quantile_capability(1.0, 2.0, float("inf"), 0.5, 6.0).Ppu is None


def test_another_spread_within() -> None:
    rng = np.random.default_rng(14)
    x, labels = rng.normal(10, 0.1, 60), np.repeat(np.arange(20), 3).tolist()
    spread = mean_range_spread(grouped(x, labels))
    found, usual = capability(x, 9.5, 10.5, within=spread), capability(x, 9.5, 10.5, subgroups=labels)
    assert found.within is spread
    assert found.Cp is not None
    assert found.Cp.estimate == pytest.approx(1 / (6 * spread.sigma))
    assert found.Pp == usual.Pp
    with pytest.raises(DataError, match="either"):
        capability(x, 9.5, 10.5, subgroups=labels, within=spread)
