"""Bounds of the first frequency, and a frame whose joint rotations are condensed out.

Sources: closed forms of the Rayleigh quotient and of Dunkerley's bound; T = 2√d, EN 1998-1:2004, Eq. (4.9);
A. K. Chopra, Dynamics of Structures, Example 10.5, two-storey frame (from memory).
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.bounds import bounds, rayleigh_quotient
from calcsheet.core.matrix import StiffnessMatrix
from calcsheet.core.modes import modes_of


def test_bounds_of_the_uniform_frame(case, planar):
    frame = case("08-frequency-bounds")
    model = planar([1.0] * 5, [1.0] * 5)
    found = bounds(model)
    frame.meets("omega1", modes_of(model).omega[0])
    frame.meets("rayleigh_linear_shape", np.sqrt(rayleigh_quotient(model, np.arange(1.0, 6.0))))
    frame.meets("rayleigh_gravity_shape", found.rayleigh)
    frame.meets("dunkerley", found.dunkerley)


def test_period_from_the_top_displacement(case, planar):
    frame = case("08-frequency-bounds")
    given = frame.inputs["B"]
    model = planar([given["storey_mass_kg"] / 1000.0] * 5, [given["storey_stiffness_N_per_m"] / 1000.0] * 5)
    top = bounds(model, gravity=given["g"]).displacement[-1]
    frame.meets("B_top_displacement_m", top)
    frame.meets("B_T_2_sqrt_d_s", 2.0 * np.sqrt(top))
    frame.meets("B_T1_s", modes_of(model).period[0])


def test_frequencies_of_a_condensed_frame(case, planar):
    frame = case("08-static-condensation-frames")
    lateral = StiffnessMatrix(np.array(frame.expected["B_K"]["value"]))
    model = planar(frame.inputs["two_storey_B"]["mass_from_below"], lateral)
    frame.meets("B_omega_printed", modes_of(model).omega)


def test_a_wrong_number_fails(case):
    with pytest.raises(AssertionError, match="dunkerley"):
        case("08-frequency-bounds").meets("dunkerley", 1.0 / np.sqrt(15.0) * (1.0 + 2e-9))
