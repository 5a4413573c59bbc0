"""What holds for the modal peaks of every building."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.codes.common import up_to_static
from calcsheet.core.combine import RULES, combined, correlation
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import peaks

profile = settings.get_profile("calcsheet")
QUANTITIES = ("force", "shear", "moment", "displacement", "drift")


@st.composite
def buildings(draw, least: int = 1):
    """Masses [t], storey stiffnesses [kN/m], heights above the base [m], and an ordinate a mode [m/s²]."""
    n = draw(st.integers(least, 9))

    def several(low: float, high: float):
        return np.array(draw(st.lists(st.floats(low, high), min_size=n, max_size=n)))

    return several(20.0, 900.0), 10.0 ** several(4.0, 6.5), np.cumsum(several(2.5, 6.0)), several(0.1, 12.0)


def solved(planar, building, keep=None):
    mass, stiffness, height, _ = building
    model = planar(mass, stiffness, height)
    modes = modes_of(model, keep or mass.size)
    return model, modes, participation(model, modes, "x")


def near(values):
    """Equal to rounding of the largest."""
    return pytest.approx(values, rel=1e-8, abs=1e-9 * max(float(np.abs(values).max()), 1e-12))


@profile
@given(buildings())
def test_all_modes_together_move_every_mass(planar, building):
    model, modes, part = solved(planar, building)
    assert (part.gamma * modes.psi).sum(axis=1) == pytest.approx(np.ones(model.size), abs=1e-9)


@profile
@given(buildings())
def test_statics_of_each_mode(planar, building):
    model, modes, part = solved(planar, building)
    found = peaks(model, modes, part, building[3])
    lever = np.append(0.0, model.height[:-1])
    for i in range(model.size):
        assert found.shear[i] == near(found.force[i:].sum(axis=0))
        above = (model.height[i:] - lever[i])[:, None]
        assert found.moment[i] == near((found.force[i:] * above).sum(axis=0))
    assert found.drift.sum(axis=0) == near(found.displacement[-1])
    assert found.shear == near(model.lateral.storey[:, None] * found.drift)


@profile
@given(buildings())
def test_the_base_shear_of_a_mode_is_its_effective_mass_times_its_ordinate(planar, building):
    model, modes, part = solved(planar, building)
    found = peaks(model, modes, part, building[3])
    assert found.shear[0] == near(part.effective_mass * building[3])
    assert found.moment[0] == near(part.effective_mass * part.effective_height * building[3])


@profile
@given(buildings(), st.sampled_from(RULES), st.data())
def test_scale_and_sign_of_the_shapes_do_not_matter(planar, building, rule, data):
    model, modes, part = solved(planar, building)
    factor = st.floats(-50.0, 50.0).filter(lambda f: abs(f) > 0.02)
    by = np.array(data.draw(st.lists(factor, min_size=model.size, max_size=model.size)))
    # Γ of a shape scaled by c is Γ/c
    other = dataclasses.replace(modes, psi=modes.psi * by), dataclasses.replace(part, gamma=part.gamma / by)
    here, there = peaks(model, modes, part, building[3]), peaks(model, *other, building[3])
    related = correlation(modes.omega, 0.05, rule)
    for name in QUANTITIES:
        expected = combined(getattr(here, name), related, rule)
        assert combined(getattr(there, name), related, rule) == near(expected)


@profile
@given(buildings(), st.sampled_from(RULES), st.floats(0.1, 10.0))
def test_peaks_grow_with_the_spectrum(planar, building, rule, times):
    model, modes, part = solved(planar, building)
    related = correlation(modes.omega, 0.05, rule)
    here = peaks(model, modes, part, building[3])
    for factor in (2.0, times):
        there = peaks(model, modes, part, factor * building[3])
        for name in QUANTITIES:
            expected = factor * combined(getattr(here, name), related, rule)
            assert combined(getattr(there, name), related, rule) == near(expected)


@profile
@given(buildings(least=2), st.data())
def test_the_residual_completes_the_base_shear_in_a_flat_spectrum(planar, building, data):
    keep = data.draw(st.integers(1, building[0].size - 1))
    model, modes, part = solved(planar, building, keep)
    found = peaks(model, modes, part, np.full(keep, 3.0), 3.0)
    assert found.force.sum(axis=1) == near(3.0 * model.mass)
    assert found.shear[0].sum() == pytest.approx(3.0 * model.mass.sum(), rel=1e-10)
    # statically: storey stiffness × all drifts = 3 m/s² × the mass above
    above = np.cumsum(model.mass[::-1])[::-1]
    assert model.lateral.storey * found.drift.sum(axis=1) == near(3.0 * above)


@profile
@given(st.floats(1.0, 1e5), st.floats(1.0, 1e5))
def test_scaling_twice_is_scaling_once(static, modal):
    once = modal * up_to_static(static, modal)
    assert once >= modal
    assert up_to_static(static, once) == pytest.approx(1.0, rel=1e-14)
