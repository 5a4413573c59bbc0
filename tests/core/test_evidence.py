"""Evidence holds for right modes and names what is wrong with others."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from calcsheet.core.bounds import bounds
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.springs import BaseSprings
from calcsheet.core.standing import standing
from calcsheet.core.stick import Stick

HEIGHT = np.array([4.1, 3.2, 3.2, 3.4, 3.0])
MASS, STOREY = [320.0, 280.0, 280.0, 260.0, 150.0], [4.1e5, 5.2e5, 4.4e5, 3.9e5, 2.2e5]


@pytest.fixture(params=["chain", "stiffness", "flexibility", "stick", "on springs under gravity"])
def model(planar, request):
    chain = planar(MASS, STOREY)
    unit = np.eye(5)
    if request.param == "stiffness":
        return planar(MASS, StiffnessMatrix(chain.lateral.force(unit)))
    if request.param == "flexibility":
        return planar(MASS, FlexibilityMatrix(chain.lateral.displacement(unit)))
    if request.param == "stick":
        return planar(MASS, Stick(np.array([9e6, 9e6, 8e6, 8e6, 5e6]), np.array(STOREY) * 3.0, HEIGHT))
    if request.param == "on springs under gravity":
        load = np.array([15000.0, 12000.0, 9000.0, 6000.0, 2000.0])
        springs = BaseSprings(translation=8e5, rocking=9e7)
        return planar(MASS, standing(chain.lateral, HEIGHT, springs, load, chain.level), np.cumsum(HEIGHT))
    return chain


def exceeded(model, modes, **changes) -> set[str]:
    changed = dataclasses.replace(modes, **changes)
    part = participation(model, changed, "x")
    found = evidence_of_modes(model, changed, bounds(model))
    found += evidence_of_participation(part, changed.omega.size, model.size)
    return {e.key for e in found if not e.within}


@pytest.mark.parametrize("keep", [1, 2, 5])
def test_right_modes_keep_every_limit(model, keep):
    assert exceeded(model, modes_of(model, keep)) == set()


@pytest.mark.parametrize("mode", [0, 2, 4])
@pytest.mark.parametrize("factor", [1.0 + 1e-6, 1.0 - 1e-6])
def test_a_frequency_off_by_a_millionth(model, mode, factor):
    modes = modes_of(model)
    omega = modes.omega.copy()
    omega[mode] *= factor
    assert exceeded(model, modes, omega=omega) == {"stiffness", "residual", "sturm", "second-route"}


@pytest.mark.parametrize("lost", [0, 1, 3])
def test_a_mode_that_is_missing(model, lost):
    modes = modes_of(model)
    kept = [i for i in range(5) if i != lost]
    found = exceeded(model, modes, omega=modes.omega[kept], psi=modes.psi[:, kept])
    assert {"sturm", "second-route"} <= found
    assert ("bounds" in found) == (lost == 0)


def test_two_shapes_that_are_swapped(model):
    modes = modes_of(model)
    assert exceeded(model, modes, psi=modes.psi[:, [1, 0, 2, 3, 4]]) == {"stiffness", "residual"}


def test_a_shape_that_is_given_twice(model):
    modes = modes_of(model)
    psi = modes.psi[:, [0, 0, 2, 3, 4]]
    assert {"mass", "stiffness", "residual", "total-mass-x"} <= exceeded(model, modes, psi=psi)


@pytest.mark.parametrize("mode", [0, 4])
def test_one_ordinate_off_by_a_millionth(model, mode):
    modes = modes_of(model)
    psi = modes.psi.copy()
    psi[2, mode] += 1e-6 * np.abs(psi[:, mode]).max()
    assert {"mass", "residual"} <= exceeded(model, modes, psi=psi)


def test_a_shape_off_its_scale(model):
    modes = modes_of(model)
    psi = modes.psi * np.array([1.0 + 1e-7, 1.0, 1.0, 1.0, 1.0])
    assert {"mass", "stiffness", "total-mass-x"} <= exceeded(model, modes, psi=psi)


@pytest.mark.parametrize("factor", [2.0, 0.5])
def test_a_first_frequency_outside_its_bounds(model, factor):
    modes = modes_of(model)
    assert "bounds" in exceeded(model, modes, omega=modes.omega * factor)


def test_figures_are_named_once_and_say_their_measure(model):
    found = evidence_of_modes(model, modes_of(model), bounds(model))
    assert [e.key for e in found] == ["mass", "stiffness", "residual", "bounds", "sturm", "second-route"]
    assert all(e.what and e.relation and e.value <= e.limit for e in found)


def test_effective_masses_are_not_added_up_where_modes_are_left_out(model):
    part = participation(model, modes_of(model, 4), "x")
    assert evidence_of_participation(part, 4, 5) == ()
