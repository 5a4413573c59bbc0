"""What holds for the modes of every building."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.bounds import bounds, rayleigh_quotient
from calcsheet.core.evidence import evidence_of_modes
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of, scaled
from calcsheet.core.participation import participation

profile = settings.get_profile("calcsheet")


@st.composite
def chains(draw, spread: float = 6.0, fewest: int = 1):
    """Masses [t] and storey stiffnesses [kN/m] of a building, the latter over `spread` powers of ten."""
    n = draw(st.integers(fewest, 12))
    mass = draw(st.lists(st.floats(1.0, 2000.0), min_size=n, max_size=n))
    power = draw(st.lists(st.floats(3.0, 3.0 + spread), min_size=n, max_size=n))
    return np.array(mass), 10.0 ** np.array(power)


@profile
@given(chains())
def test_shapes_are_orthogonal_through_mass_and_stiffness(planar, chain):
    model = planar(*chain)
    modes = modes_of(model)
    unit = np.eye(model.size)
    assert np.abs(modes.psi.T @ (model.mass[:, None] * modes.psi) - unit).max() < 1e-12
    through_stiffness = model.lateral.energy(modes.psi) / np.outer(modes.omega, modes.omega)
    assert np.abs(through_stiffness - unit).max() < 1e-9
    assert (np.diff(modes.omega) > 0.0).all()


@profile
@given(chains(), st.data())
def test_effective_masses_and_their_moments_add_up(planar, chain, data):
    mass, stiffness = chain
    storey = data.draw(st.lists(st.floats(2.0, 8.0), min_size=mass.size, max_size=mass.size))
    height = np.cumsum(storey)
    model = planar(mass, stiffness, height)
    part = participation(model, modes_of(model), "x")
    assert part.effective_mass.sum() == pytest.approx(mass.sum(), rel=1e-11)
    assert part.effective_mass @ part.effective_height == pytest.approx(mass @ height, rel=1e-10)
    assert part.gamma_roof.sum() == pytest.approx(1.0, abs=1e-9)
    assert part.cumulative[-1] == pytest.approx(1.0, rel=1e-11)


@profile
@given(chains())
def test_four_times_the_stiffness_halves_the_periods(planar, chain):
    mass, stiffness = chain
    here, there = modes_of(planar(mass, stiffness)), modes_of(planar(mass, 4.0 * stiffness))
    assert there.period == pytest.approx(here.period / 2.0, rel=1e-12)
    assert np.abs(there.psi - here.psi).max() < 1e-8 * np.abs(here.psi).max()


@profile
@given(chains(), st.floats(-10.0, 10.0).filter(lambda f: abs(f) > 1e-3))
def test_effective_mass_and_height_ignore_scale_and_sign(planar, chain, factor):
    model = planar(*chain)
    modes = modes_of(model)
    part = participation(model, modes, "x")
    for to in ("mass", "largest"):
        shapes = factor * scaled(modes.psi, to)
        excitation, own = model.mass @ shapes, model.mass @ shapes**2
        assert excitation**2 / own == pytest.approx(part.effective_mass, rel=1e-10, abs=1e-12 * part.total_mass)
        moment = (model.mass * model.height) @ shapes * excitation / own
        assert moment == pytest.approx(
            part.effective_mass * part.effective_height, rel=1e-8, abs=1e-9 * part.total_mass
        )


@profile
@given(chains(), st.integers(0, 11), st.floats(1.0, 1e4))
def test_frequencies_interlace_when_a_mass_is_added(planar, chain, place, added):
    mass, stiffness = chain
    heavier = mass.copy()
    heavier[place % mass.size] += added
    before, after = modes_of(planar(mass, stiffness)).omega, modes_of(planar(heavier, stiffness)).omega
    assert (after <= before * (1.0 + 1e-12)).all()
    assert (after[1:] >= before[:-1] * (1.0 - 1e-12)).all()
    assert after[0] < before[0] or added < 1e-6 * mass.sum() or np.isclose(after[0], before[0], rtol=1e-6)


@profile
@given(chains())
def test_the_sturm_count_is_the_number_found(planar, chain):
    model = planar(*chain)
    omega = modes_of(model).omega
    between = np.concatenate([[omega[0] / 2.0], np.sqrt(omega[1:] * omega[:-1]), [2.0 * omega[-1]]])
    assert model.lateral.count_below(model.mass, between).tolist() == list(range(model.size + 1))


@profile
@given(chains(spread=2.0))
def test_chain_stiffness_and_flexibility_of_one_building_agree(planar, chain):
    mass, stiffness = chain
    model, unit = planar(mass, stiffness), np.eye(mass.size)
    here = modes_of(model)
    for lateral in (
        StiffnessMatrix(model.lateral.force(unit)),
        FlexibilityMatrix(model.lateral.displacement(unit)),
    ):
        other = planar(mass, lateral)
        there = modes_of(other)
        assert there.omega == pytest.approx(here.omega, rel=1e-8)
        between = np.sqrt(here.omega[1:] * here.omega[:-1])
        assert other.lateral.count_below(mass, between).tolist() == list(range(1, mass.size))
        assert participation(other, there, "x").cumulative == pytest.approx(
            participation(model, here, "x").cumulative, abs=1e-4
        )
        assert bounds(other).rayleigh == pytest.approx(bounds(model).rayleigh, rel=1e-9)


@profile
@given(chains(), st.data())
def test_the_first_frequency_lies_between_its_bounds(planar, chain, data):
    model = planar(*chain)
    omega, bound = modes_of(model).omega[0], bounds(model)
    assert bound.dunkerley * (1.0 - 1e-12) <= omega <= bound.rayleigh * (1.0 + 1e-12)
    ordinate = st.floats(-1.0, 1.0).filter(lambda v: abs(v) > 1e-3)
    shape = np.array(data.draw(st.lists(ordinate, min_size=model.size, max_size=model.size)))
    assert rayleigh_quotient(model, shape) >= omega**2 * (1.0 - 1e-12)


@profile
@given(chains(spread=8.0), st.integers(1, 12))
def test_evidence_holds_for_every_building_and_number_of_modes(planar, chain, keep):
    model = planar(*chain)
    modes = modes_of(model, min(keep, model.size))
    assert [dataclasses.astuple(e) for e in evidence_of_modes(model, modes, bounds(model)) if not e.within] == []
