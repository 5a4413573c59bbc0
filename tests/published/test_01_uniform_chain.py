"""The uniform five-storey chain.

Sources: R. D. Blevins, Formulas for Natural Frequency and Mode Shape (1979), spring-mass chains (closed form, from
memory); A. K. Chopra, Dynamics of Structures, section 13.2, uniform five-storey frame (printed values from memory).
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.modes import modes_of, scaled
from calcsheet.core.participation import participation


@pytest.fixture(scope="module")
def unit(planar):
    return planar([1.0] * 5, [1.0] * 5)


def test_frequencies_and_shapes(case, unit):
    uniform, modes = case("01-uniform-chain-5"), modes_of(unit)
    uniform.meets("omega_over_sqrt_k_m", modes.omega)
    uniform.meets("mode_shapes_roof_1", scaled(modes.psi, "roof").T)


def test_a_mode_has_one_sign_change_more_than_the_one_before(unit):
    signs = np.sign(modes_of(unit).psi)
    assert (np.diff(signs, axis=0) != 0).sum(axis=0).tolist() == [0, 1, 2, 3, 4]


def test_periods_in_seconds(case, planar):
    uniform = case("01-uniform-chain-5")
    given = uniform.inputs["B"]
    mass, stiffness = given["storey_mass_kg"] / 1000.0, given["storey_stiffness_N_per_m"] / 1000.0
    uniform.meets("B_period_s", modes_of(planar([mass] * 5, [stiffness] * 5)).period)


def test_effective_masses_and_heights(case, unit):
    effective, part = case("01-effective-mass-5"), participation(unit, modes_of(unit), "x")
    for key in ("M_eff_printed", "M_eff"):
        effective.meets(key, part.effective_mass)
    effective.meets("h_eff_printed_abs", np.abs(part.effective_height))
    effective.meets("h_eff_signed", part.effective_height)
    effective.meets("gamma_roof_1", part.gamma_roof)
    effective.meets("cumulative_mass_fraction", part.cumulative)
