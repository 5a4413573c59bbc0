"""The whole model multiplied: solved anew, and held against closed forms."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.basis import Basis
from calcsheet.core.chain import Chain
from calcsheet.core.codes.points import GivenPoints
from calcsheet.core.errors import ModelError
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.core.whatif import answered, multiplied

STOREY = np.array([4.1e5, 5.2e5, 3.9e5, 3.1e5, 2.2e5])
FACTORS = [(1.0, 1.0), (1.1, 0.9), (0.25, 4.0), (4.0, 0.25), (1.37, 1.0)]


def matrix_of(storey):
    """BᵀkB of a storey chain."""
    drift = np.eye(storey.size) - np.eye(storey.size, k=-1)
    return drift.T @ np.diag(storey) @ drift


def building(lateral_x, lateral_y=None, mass=(310.0, 290.0, 280.0, 265.0, 140.0), height=3.4):
    n = len(mass)
    lateral = {"x": lateral_x} | ({} if lateral_y is None else {"y": lateral_y})
    return Storeys(
        base="base",
        base_elevation=0.0,
        level=tuple(f"L{i}" for i in range(1, n + 1)),
        elevation=height * np.arange(1.0, n + 1.0),
        storey_height=np.full(n, height),
        mass=np.array(mass),
        below=(),
        stiffness=(StiffnessSet("cracked", "beams", lateral), StiffnessSet("gross", "sections", lateral)),
        forces="cracked",
        drifts="gross",
        gravity=np.full(n, 3000.0),
    )


@pytest.mark.parametrize("lateral", [Chain(STOREY), StiffnessMatrix(matrix_of(STOREY))], ids=lambda m: m.kind)
@pytest.mark.parametrize(("m", "k"), FACTORS)
def test_periods_follow_the_root_of_mass_over_stiffness_and_shares_stay(lateral, m, k):
    """Kφ = ω²Mφ holds for mM and kK with ω²k/m: the exact law, by algebra."""
    before = building(lateral, lateral)
    x, y = answered(multiplied(before, m, "cracked", {"x": k}), "cracked", None, None)
    saved, _ = answered(before, "cracked", None, None)
    assert x.period == pytest.approx(saved.period * np.sqrt(m / k), rel=1e-12)
    assert y.period == pytest.approx(saved.period * np.sqrt(m), rel=1e-12)
    assert x.share == pytest.approx(saved.share, abs=1e-12)
    assert x.base_shear is None


def test_a_flexibility_grows_less_where_the_stiffness_grows():
    flexible = building(FlexibilityMatrix(np.linalg.inv(matrix_of(STOREY))))
    (x,) = answered(multiplied(flexible, 1.2, "cracked", {"x": 0.8}), "cracked", 3, None)
    (chain,) = answered(multiplied(building(Chain(STOREY)), 1.2, "cracked", {"x": 0.8}), "cracked", 3, None)
    assert x.period == pytest.approx(chain.period, rel=1e-9)


def test_two_storeys_by_their_closed_form():
    """Masses 2m, m on 2k, k: ω₁² = k/2m, ω₂² = 2k/m (Chopra, Dynamics of Structures, example 10.4, from memory)."""
    m, k = 120.0, 9.0e4
    before = building(Chain(np.array([2.0, 1.0]) * k), mass=(2.0 * m, m))
    (x,) = answered(multiplied(before, 1.5, "cracked", {"x": 0.6}), "cracked", None, None)
    m, k = 1.5 * m, 0.6 * k
    assert x.period == pytest.approx(2.0 * np.pi / np.sqrt([k / (2.0 * m), 2.0 * k / m]), rel=1e-12)


def test_the_base_shear_of_one_storey_is_its_mass_times_the_ordinate_at_its_new_period():
    """Hand calculation: T = 2π√(100·2/(5·10⁴·0.5)) = 0.562 s, between the points 0.5 g at 0.5 s and 0.2 g at 1 s."""
    points = GivenPoints(((0.0, 0.5), (0.5, 0.5), (1.0, 0.2), (4.0, 0.05)))
    basis = Basis(points, "SRSS", "none", (), ())
    (x,) = answered(
        multiplied(building(Chain(np.array([5.0e4])), mass=(100.0,)), 2.0, "cracked", {"x": 0.5}),
        "cracked",
        None,
        basis,
    )
    period = 2.0 * np.pi * np.sqrt(200.0 / 2.5e4)
    ordinate = 9.80665 * (0.5 - 0.3 * (period - 0.5) / 0.5)
    assert x.base_shear == pytest.approx(200.0 * ordinate, rel=1e-9)


def test_the_other_stiffness_sets_and_the_gravity_loads_stay():
    before = building(Chain(STOREY))
    after = multiplied(before, 1.3, "cracked", {"x": 0.7})
    cracked, gross = after.stiffness
    assert cracked.lateral["x"].storey == pytest.approx(0.7 * STOREY)
    assert gross is before.stiffness[1]
    assert after.gravity is before.gravity
    assert before.stiffness[0].lateral["x"].storey == pytest.approx(STOREY)


def test_a_factor_that_leaves_no_stiffness_is_refused():
    with pytest.raises(ModelError, match="must be finite and above 0"):
        multiplied(building(Chain(STOREY)), 1.0, "cracked", {"x": 0.0})
