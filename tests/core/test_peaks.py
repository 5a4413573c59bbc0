"""Modal peaks of a two-storey frame, each step by hand, and of truncated modes."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.combine import combined, correlation
from calcsheet.core.errors import ModelError
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import peaks


@pytest.fixture
def frame(planar):
    """Masses 2m, m and stiffnesses 2k, k with m = 100 t, k = 20 000 kN/m; storeys of 4 and 3 m."""
    model = planar([200.0, 100.0], [40000.0, 20000.0], [4.0, 7.0])
    modes = modes_of(model)
    return model, modes, participation(model, modes, "x")


@pytest.fixture
def found(frame):
    """At 3 and 6 m/s²."""
    return peaks(*frame, np.array([3.0, 6.0]))


def test_modes(frame):
    """(3k - 2mω²)(k - mω²) = k²: with λ = mω²/k, 2λ² - 5λ + 2 = 0, λ = 0.5 and 2."""
    _, modes, part = frame
    k_over_m = 20000.0 / 100.0
    assert modes.omega**2 == pytest.approx([0.5 * k_over_m, 2.0 * k_over_m], rel=1e-12)  # 100 and 400
    # second row of (K - ω²M)φ = 0 with roof 1: φ₁ = 1 - λ
    shapes = modes.psi / modes.psi[-1]
    assert shapes == pytest.approx(np.array([[0.5, -1.0], [1.0, 1.0]]), rel=1e-12)
    # L = 200 × 0.5 + 100 = 200, M = 200 × 0.25 + 100 = 150; L = -200 + 100 = -100, M = 200 + 100 = 300
    assert part.gamma * modes.psi[-1] == pytest.approx([200 / 150, -100 / 300], rel=1e-12)
    assert part.effective_mass == pytest.approx([200**2 / 150, 100**2 / 300], rel=1e-12)


def test_forces(found):
    """Γ m φ Sa: 4/3 × (200 × 0.5, 100 × 1) × 3; -1/3 × (200 × -1, 100 × 1) × 6."""
    assert found.force == pytest.approx(np.array([[400.0, 400.0], [400.0, -200.0]]), rel=1e-12)


def test_shears_and_moments(found):
    """Shears from the top: 400 + 400, -200 + 400. Moments: 400 × 3, 1200 + 800 × 4; -200 × 3, -600 + 200 × 4."""
    assert found.shear == pytest.approx(np.array([[800.0, 200.0], [400.0, -200.0]]), rel=1e-12)
    assert found.moment == pytest.approx(np.array([[4400.0, 200.0], [1200.0, -600.0]]), rel=1e-11)


def test_displacements_and_drifts(found):
    """Γ φ Sa/ω²: 4/3 × (0.5, 1) × 3/100; -1/3 × (-1, 1) × 6/400. Drifts are shear over stiffness: 800/40000, 400/20000 …"""
    assert found.displacement == pytest.approx(np.array([[0.02, 0.005], [0.04, -0.005]]), rel=1e-12)
    assert found.drift == pytest.approx(np.array([[0.02, 0.005], [0.02, -0.01]]), rel=1e-11)
    assert found.drift == pytest.approx(found.shear / np.array([[40000.0], [20000.0]]), rel=1e-11)


def test_srss(frame, found):
    related = correlation(frame[1].omega, 0.05, "SRSS")
    # √(800² + 200²), √(400² + 200²); √(4400² + 200²), √(1200² + 600²); √(0.02² + 0.005²), √(0.02² + 0.01²)
    assert combined(found.shear, related, "SRSS") == pytest.approx([680000**0.5, 200000**0.5], rel=1e-12)
    assert combined(found.moment, related, "SRSS") == pytest.approx([19400000**0.5, 1800000**0.5], rel=1e-12)
    assert combined(found.drift, related, "SRSS") == pytest.approx([0.000425**0.5, 0.0005**0.5], rel=1e-12)


def test_cqc(frame, found):
    """r = 20/10, ξ = 0.05: ρ = 8 × 0.0025 × 3 × 2^1.5/(9 + 0.18) = 0.01849."""
    rho = 0.06 * 2**1.5 / 9.18
    related = correlation(frame[1].omega, 0.05, "CQC")
    by_hand = [(680000 + 2 * rho * 800 * 200) ** 0.5, (200000 - 2 * rho * 400 * 200) ** 0.5]
    assert combined(found.shear, related, "CQC") == pytest.approx(by_hand, rel=1e-11)
    by_hand = [(0.000425 + 2 * rho * 0.02 * 0.005) ** 0.5, (0.0005 - 2 * rho * 0.02 * 0.01) ** 0.5]
    assert combined(found.drift, related, "CQC") == pytest.approx(by_hand, rel=1e-11)


def test_combined_forces_do_not_add_up_to_the_combined_shear(frame, found):
    related = correlation(frame[1].omega, 0.05, "SRSS")
    # √(400² + 400²) + √(400² + 200²) = 1012.9 against 824.6
    force = combined(found.force, related, "SRSS")
    assert force.sum() == pytest.approx(320000**0.5 + 200000**0.5, rel=1e-12)
    assert force.sum() > 1.2 * combined(found.shear, related, "SRSS")[0]


def test_the_residual_of_the_mode_left_out(frame):
    """ι - Γ₁φ₁ = 1 - 4/3 × (0.5, 1) = (1/3, -1/3): forces 200/3 × 6 = 400 and -100/3 × 6 = -200, as of mode 2 at 6 m/s²."""
    model = frame[0]
    modes = modes_of(model, 1)
    found = peaks(model, modes, participation(model, modes, "x"), np.array([3.0]), 6.0)
    assert found.residual
    assert found.ordinate.tolist() == [3.0, 6.0]
    assert found.force == pytest.approx(np.array([[400.0, 400.0], [400.0, -200.0]]), rel=1e-11)
    assert found.moment[:, 1] == pytest.approx([200.0, -600.0], rel=1e-10)
    # applied statically: drifts 200/40000 and -200/20000
    assert found.drift[:, 1] == pytest.approx([0.005, -0.01], rel=1e-10)


@pytest.mark.parametrize(
    ("ordinate", "message"),
    [
        ([3.0], "ordinates: 1 given; must be 2, one a mode"),
        ([3.0, -0.1], "ordinate: got -0.1 m/s²; must be finite and at or above 0"),
        ([np.nan, 3.0], "ordinate: got nan m/s²; must be finite and at or above 0"),
        ([3.0, np.inf], "ordinate: got inf m/s²; must be finite and at or above 0"),
    ],
)
def test_ordinates_that_are_refused(frame, ordinate, message):
    with pytest.raises(ModelError) as caught:
        peaks(*frame, np.array(ordinate))
    assert str(caught.value) == message


def test_a_residual_ordinate_that_is_refused(frame):
    with pytest.raises(ModelError, match=r"^ordinate: got -1 m/s²"):
        peaks(*frame, np.array([3.0, 6.0]), -1.0)
