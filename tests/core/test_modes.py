"""Scale, sign, energies and groups of modes; models of more than one degree of freedom a level."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.model import Model
from calcsheet.core.modes import groups, modes_of, scaled

MASS, STOREY = [320.0, 280.0, 260.0, 150.0], [4.1e5, 5.2e5, 3.9e5, 2.2e5]


def test_results_are_read_only(planar):
    modes = modes_of(planar(MASS, STOREY))
    with pytest.raises(ValueError, match="read-only"):
        modes.omega[0] = 1.0


def test_period_frequency_and_energy_follow_from_omega(planar):
    modes = modes_of(planar(MASS, STOREY))
    assert modes.period * modes.frequency == pytest.approx(np.ones(4))
    assert modes.omega == pytest.approx(2 * np.pi * modes.frequency)
    assert modes.strain_energy == pytest.approx(modes.omega**2 / 2)
    assert modes.kinetic.sum(axis=0) == pytest.approx(np.ones(4))
    assert modes.strain.sum(axis=0) == pytest.approx(np.ones(4))
    assert (modes.strain >= 0.0).all()


def test_the_largest_translation_is_positive(planar):
    psi = modes_of(planar(MASS, STOREY)).psi
    assert (psi[np.abs(psi).argmax(axis=0), np.arange(4)] > 0.0).all()


def test_of_equal_translations_the_top_one_is_positive(planar):
    """Masses 2m and m, stiffnesses 2k and k: the second shape is (-1, 1)."""
    psi = modes_of(planar([2.0, 1.0], [2.0, 1.0])).psi
    assert psi[0, 1] == pytest.approx(-psi[1, 1])
    assert psi[1, 1] > 0.0


def test_rotations_count_by_the_radius_of_gyration_for_the_sign():
    """One level that moves and turns: mass 100 t, radius of gyration 5 m, coupled stiffness."""
    lateral = StiffnessMatrix(np.array([[4e4, 6e4], [6e4, 2e6]]))
    model = Model(("1",), np.array([3.0]), np.array([100.0, 2500.0]), (0, 0), ("x",), np.array([[1.0, 0.0]]), lateral)
    assert model.level_mass.tolist() == [100.0]
    modes = modes_of(model)
    assert modes.kinetic.shape == (1, 2)
    assert modes.kinetic == pytest.approx(np.ones((1, 2)))
    size = np.abs(modes.psi) * np.array([[1.0], [5.0]])
    assert size.argmax(axis=0).tolist() == [0, 1]
    assert modes.psi[0, 0] > 0.0
    assert modes.psi[1, 1] > 0.0
    assert modes.local == ()


@pytest.mark.parametrize(
    ("omega", "expected"),
    [
        ([1.0], ()),
        ([1.0, 2.0, 3.0], ()),
        ([1.0, 1.05, 2.0], ((1, 2),)),
        ([1.0, 1.05, 1.1, 2.0, 2.1], ((1, 2, 3), (4, 5))),
        ([1.0, 1.0 / 0.9 + 1e-9], ()),
        ([1.0, 1.0 / 0.9 - 1e-9], ((1, 2),)),
    ],
)
def test_close_groups(omega, expected):
    assert groups(np.array(omega), 1.0 / 0.9 - 1.0) == expected


def test_scales(planar):
    psi = modes_of(planar(MASS, STOREY)).psi
    assert scaled(psi, "mass") is psi
    assert np.abs(scaled(psi, "largest")).max(axis=0) == pytest.approx(np.ones(4))
    assert scaled(psi, "roof")[-1] == pytest.approx(np.ones(4))


def test_a_shape_whose_roof_stands_still_has_no_roof_scale():
    shapes = scaled(np.array([[1.0, 0.5], [0.0, 2.0]]), "roof")
    assert np.isnan(shapes[:, 0]).all()
    assert shapes[:, 1].tolist() == [0.25, 1.0]


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
def test_few_modes_of_a_large_matrix_are_those_of_the_chain(planar, kind):
    n, rng = 410, np.random.default_rng(7)
    mass = rng.uniform(300.0, 500.0, n)
    chain = planar(mass, rng.uniform(5e5, 9e5, n))
    unit = np.eye(n)
    lateral = kind(chain.lateral.force(unit) if kind is StiffnessMatrix else chain.lateral.displacement(unit))
    here, there = modes_of(chain, 4), modes_of(planar(mass, lateral), 4)
    assert there.omega == pytest.approx(here.omega, rel=1e-8)
    assert np.abs(there.psi - here.psi).max() < 1e-6 * np.abs(here.psi).max()


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
def test_the_storey_energies_of_a_matrix_add_up(planar, kind):
    """A cantilever that bends: some storey's share is negative, the sum is 1."""
    x = np.arange(1.0, 9.0)
    low, high = np.minimum.outer(x, x), np.maximum.outer(x, x)
    flexibility = low**2 * (3.0 * high - low) / 6.0 * 1e-6
    lateral = kind(flexibility if kind is FlexibilityMatrix else np.linalg.inv(flexibility))
    modes = modes_of(planar([100.0] * 8, lateral))
    assert modes.strain.sum(axis=0) == pytest.approx(np.ones(8), rel=1e-9)
    assert -0.1 < modes.strain.min() < -1e-4


@pytest.mark.parametrize(("apart", "repeated"), [(5e-7, ((1, 2),)), (2e-6, ()), (1e-3, ())])
def test_frequencies_count_as_repeated_within_a_millionth(planar, apart, repeated):
    lateral = StiffnessMatrix(np.diag([1e5, 1e5 * (1.0 + apart) ** 2]))
    modes = modes_of(planar([100.0, 100.0], lateral))
    assert (modes.repeated, modes.close) == (repeated, ((1, 2),))
