"""Massless degrees of freedom condensed exactly: held against K₂₂ - K₂₁K₁₁⁻¹K₁₂ and against springs in series."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.condense import condensed
from calcsheet.core.errors import ModelError


@pytest.fixture
def root() -> np.ndarray:
    return np.random.default_rng(7).normal(size=(9, 6))


@pytest.mark.parametrize("keep", [(0, 2, 3), (5, 1), (0, 1, 2, 3, 4, 5)])
def test_it_is_the_schur_complement(root, keep):
    k, kept = root.T @ root, list(keep)
    left = [i for i in range(6) if i not in keep]
    wanted = k[np.ix_(kept, kept)]
    if left:
        wanted = wanted - k[np.ix_(kept, left)] @ np.linalg.solve(k[np.ix_(left, left)], k[np.ix_(left, kept)])
    found = condensed(root, keep)
    np.testing.assert_allclose(found.T @ found, wanted, rtol=1e-12, atol=1e-12)
    assert (np.tril(found, -1) == 0.0).all()


def test_springs_in_series():
    # a level without mass between springs of 2 and 6 kN/m leaves one of 1/(1/2 + 1/6) = 1.5 kN/m
    found = condensed(np.array([[np.sqrt(2.0), 0.0], [-np.sqrt(6.0), np.sqrt(6.0)]]), (1,))
    assert found.item() ** 2 == pytest.approx(1.5, rel=1e-14)


def test_a_movement_without_resistance_is_named():
    # the second degree of freedom hangs on nothing
    root = np.array([[1.0, 0.0, -1.0], [0.0, 0.0, 1.0], [1.0, 0.0, 0.0]])
    with pytest.raises(ModelError, match="degree of freedom 2: a mechanism; every displacement must meet resistance"):
        condensed(root, (0, 2))
    with pytest.raises(ModelError, match="rotation of the roof: a mechanism"):
        condensed(root, (0, 2), ("u of level 1", "rotation of the roof", "u of the roof"))
    with pytest.raises(ModelError, match="a mechanism"):
        condensed(root[:2], (0, 2))
