"""Repeated frequencies: only in given matrices, such as two like buildings read as one model."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from calcsheet.core.bounds import bounds
from calcsheet.core.evidence import evidence_of_modes
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation


@pytest.fixture(params=[StiffnessMatrix, FlexibilityMatrix])
def twins(planar, request):
    """Two equal two-storey frames that nothing ties together: levels 1, 2 and 3, 4."""
    frame = np.array([[3e5, -1e5], [-1e5, 1e5]])
    k = np.block([[frame, np.zeros((2, 2))], [np.zeros((2, 2)), frame]])
    lateral = request.param(k if request.param is StiffnessMatrix else np.linalg.inv(k))
    return planar([200.0, 150.0, 200.0, 150.0], lateral)


def turned(model, modes, angle):
    """The modes with another orthonormal basis of each pair, and all that follows from it."""
    turn = np.array([[np.cos(angle), -np.sin(angle)], [np.sin(angle), np.cos(angle)]])
    psi = modes.psi.copy()
    for pair in ([0, 1], [2, 3]):
        psi[:, pair] = psi[:, pair] @ turn
    kinetic = model.mass[:, None] * psi**2
    strain = model.lateral.storey_energy(psi) / modes.omega**2
    return dataclasses.replace(modes, psi=psi, kinetic=kinetic, strain=strain)


def test_they_are_flagged_and_their_basis_is_orthonormal(twins):
    modes = modes_of(twins)
    assert modes.repeated == ((1, 2), (3, 4))
    assert [e.key for e in evidence_of_modes(twins, modes, bounds(twins)) if not e.within] == []


@pytest.mark.parametrize("angle", [0.3, 0.8, 2.0])
def test_sums_over_a_group_do_not_depend_on_the_basis(twins, angle):
    modes = modes_of(twins)
    other = turned(twins, modes, angle)
    assert [e.key for e in evidence_of_modes(twins, other, bounds(twins)) if not e.within] == []
    here, there = (participation(twins, m, "x") for m in (modes, other))
    assert np.abs(here.effective_mass - there.effective_mass).max() > 1.0
    for pair in (slice(0, 2), slice(2, 4)):
        assert here.effective_mass[pair].sum() == pytest.approx(there.effective_mass[pair].sum(), rel=1e-12)
    assert (here.needed, here.significant) == (there.needed, there.significant)
    assert here.needed in (2, 4)
    assert (here.first_excitation, here.first_mass) == (there.first_excitation, there.first_mass) == (0.0, 0.0)


@pytest.mark.parametrize("keep", [1, 3])
def test_a_group_cut_by_the_number_kept_is_no_miscount(twins, keep):
    modes = modes_of(twins, keep)
    sturm = {e.key: e for e in evidence_of_modes(twins, modes, bounds(twins))}["sturm"]
    assert sturm.within


def test_a_lost_twin_is_a_miscount(twins):
    modes = modes_of(twins)
    without = {name: getattr(modes, name)[..., [0, 2, 3]] for name in ("omega", "psi")}
    sturm = {e.key: e for e in evidence_of_modes(twins, dataclasses.replace(modes, **without), bounds(twins))}["sturm"]
    assert not sturm.within
