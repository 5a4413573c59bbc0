"""A floor with one eccentric frame: coupled frequencies, shapes, effective masses.

Source: A. K. Chopra, Dynamics of Structures, Example 10.6, system of Fig. 9.5.1 (from memory).
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.evidence import evidence_of_modes
from calcsheet.core.model import spatial_model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.plan import centres, direction_shares, uncoupled
from calcsheet.core.rigidfloors import Floors, LineOfResistance


@pytest.fixture
def published(case):
    return case("09-torsion-one-way")


@pytest.fixture
def mass(published) -> np.ndarray:
    return np.array([published.inputs["weight_kip"] / published.inputs["g_ft_s2"]])


@pytest.fixture
def floors(published) -> Floors:
    """The slab about its centre of mass, in kip, ft, s."""
    b, d = published.inputs["slab_b_ft"], published.inputs["slab_d_ft"]
    frame, cross = published.inputs["frame_y"], published.inputs["frames_x"]
    lines = [LineOfResistance("A", frame["eccentricity_ft"], 0.0, np.pi / 2.0, Chain(np.array([frame["stiffness"]])))]
    for side in (-1.0, 1.0):
        y = side * cross["distance_from_centre_ft"]
        lines.append(LineOfResistance(f"{y}", 0.0, y, 0.0, Chain(np.array([cross["stiffness_each"]]))))
    gyration = np.sqrt((b**2 + d**2) / 12.0)
    return Floors(("Roof",), np.array([12.0]), np.zeros((1, 2)), np.array([gyration]), tuple(lines))


def test_coupled_and_uncoupled_frequencies(published, floors, mass):
    published.meets("polar_inertia", floors.inertia(mass)[2])
    model = spatial_model(floors, mass)
    modes = modes_of(model)
    shares = direction_shares(model, modes)
    along_x = int(np.argmax(shares[0]))
    coupled = [i for i in range(3) if i != along_x]
    published.meets("omega_x", modes.omega[along_x])
    published.meets("omega_coupled", modes.omega[coupled])
    published.meets("omega_coupled_printed", modes.omega[coupled])
    published.meets("rotation_per_unit_y", modes.psi[2, coupled] / modes.psi[1, coupled])
    published.meets("effective_mass_y_fraction", participation(model, modes, "y").share[coupled])
    alone = uncoupled(floors, mass)
    published.meets("uncoupled_omega_y_theta", 2.0 * np.pi / np.array([alone.y, alone.rotation]))
    assert 2.0 * np.pi / alone.x == pytest.approx(modes.omega[along_x], rel=1e-12)
    assert all(e.within for e in evidence_of_modes(model, modes, bounds(model)))


def test_eccentricity_and_torsional_radius(published, floors):
    found = centres(floors)
    e, k = published.inputs["frame_y"]["eccentricity_ft"], published.inputs["frame_y"]["stiffness"]
    np.testing.assert_allclose(found.eccentricity, [[-e, 0.0]], atol=1e-12)
    # k_θ about the frame in y: 2 × 40 × 10² (statics)
    assert found.torsion.item() == pytest.approx(8000.0, rel=1e-12)
    assert found.radius[0, 0] == pytest.approx(np.sqrt(8000.0 / k), rel=1e-12)
