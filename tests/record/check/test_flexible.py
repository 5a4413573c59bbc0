"""Lateral flexibilities of the second route, held against closed forms of statics."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.record.check.flexible import flexibility, standing_flexibility


def test_flexibility_of_a_uniform_chain_is_the_smaller_number_of_storeys_over_k():
    """Statics: a unit force at level j shears storeys 1 to j; F_ij = min(i, j)/k."""
    found = flexibility({"kind": "storey chain", "storey": [250.0] * 4})
    assert found == pytest.approx(np.minimum.outer([1, 2, 3, 4], [1, 2, 3, 4]) / 250.0, rel=1e-15)
    k = np.array([[3.0, -1.0], [-1.0, 2.0]])
    assert flexibility({"kind": "stiffness matrix", "matrix": k.tolist()}) @ k == pytest.approx(np.eye(2), abs=1e-15)
    assert flexibility({"kind": "flexibility matrix", "matrix": k.tolist()}) == pytest.approx(k)


def test_flexibility_of_a_uniform_stick_is_that_of_a_cantilever():
    """A force at a deflects b ≥ a by a²(3b - a)/6EI + a/GA_s (beam tables, from memory)."""
    h, ei, ga = 3.5, 4.2e6, 8.1e5
    stick = {"kind": "cantilever stick", "bending": [ei] * 4, "shear": [ga] * 4, "storey_height": [h] * 4}
    z = h * np.arange(1, 5)
    a, b = np.minimum.outer(z, z), np.maximum.outer(z, z)
    bent = a**2 * (3.0 * b - a) / (6.0 * ei)
    assert flexibility(stick) == pytest.approx(bent + a / ga, rel=1e-13)
    assert flexibility(stick | {"shear": None}) == pytest.approx(bent, rel=1e-13)


def test_springs_and_gravity_load_of_one_storey_by_hand():
    """Equilibrium of one storey under a unit force: u = 1/k + 1/k_t + h²/k_r without gravity load.

    With P the level's drift d over the base adds Pd/h to the storey's force, and takes it from the base:
    d = (1 + Pd/h)(1/k + h²/k_r), u = d + 1/k_t.
    """
    k, k_t, k_r, h, p = 3.0e4, 9.0e4, 2.0e6, 4.0, 2500.0
    given = {
        "elevation": [h],
        "base_elevation": 0.0,
        "springs": {"x": {"translation": k_t, "rocking": k_r, "damping": None}},
        "gravity": [p],
    }
    chain, own = {"kind": "storey chain", "storey": [k]}, 1.0 / k + h**2 / k_r
    assert standing_flexibility(given, chain, "x") == pytest.approx(own + 1.0 / k_t, rel=1e-14)
    assert standing_flexibility(given, chain, "y") == pytest.approx(1.0 / k, rel=1e-14)
    found = standing_flexibility(given | {"second_order": True}, chain, "x")
    assert found == pytest.approx(own / (1.0 - p / h * own) + 1.0 / k_t, rel=1e-13)
