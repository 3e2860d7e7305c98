"""The few kept triples give the same bounds as all of them."""

import numpy as np
import pytest

from sheetqc.stats.bounds import model_union, ppk_of_triples
from sheetqc.stats.bounds.essential import essential_triples
from sheetqc.stats.families import names


@pytest.fixture(scope="module")
def triples() -> np.ndarray:
    x = np.exp(np.random.default_rng(4).normal(0.0, 0.3, 60))
    return model_union(x, names()).triples


def test_few_are_kept(triples: np.ndarray) -> None:
    kept = essential_triples(triples, None, 3.0)
    assert 3 <= len(kept) < 150


@pytest.mark.parametrize("limits", [(None, 1.7), (None, 3.0), (None, 30.0), (0.2, None), (-3.0, None)])
def test_one_sided_bounds_are_exact_for_any_limit(
    triples: np.ndarray, limits: tuple[float | None, float | None]
) -> None:
    kept = ppk_of_triples(essential_triples(triples, None, 2.5), *limits)
    full = ppk_of_triples(triples, *limits)
    assert kept.min() == full.min()
    assert kept.max() == full.max()


@pytest.mark.parametrize("limits", [(0.1, 3.0), (-1.0, 2.0), (0.4, 6.0), (-2.0, 4.5)])
def test_two_sided_bounds(triples: np.ndarray, limits: tuple[float, float]) -> None:
    kept = ppk_of_triples(essential_triples(triples, 0.1, 3.0), *limits)
    full = ppk_of_triples(triples, *limits)
    assert kept.min() == full.min()
    assert kept.max() == pytest.approx(full.max(), rel=0.02)


def test_the_bounds_at_hand_are_exact(triples: np.ndarray) -> None:
    kept = ppk_of_triples(essential_triples(triples, 0.35, 2.2), 0.35, 2.2)
    full = ppk_of_triples(triples, 0.35, 2.2)
    assert (kept.min(), kept.max()) == (full.min(), full.max())


def test_nothing_is_kept_of_nothing() -> None:
    assert len(essential_triples(np.empty((0, 3)), None, 1.0)) == 0
