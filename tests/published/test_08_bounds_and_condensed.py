"""Bounds of the first frequency, and a frame whose joint rotations are condensed out.

Sources: closed forms of the Rayleigh quotient and of Dunkerley's bound; T = 2√d, EN 1998-1:2004, Eq. (4.9);
A. K. Chopra, Dynamics of Structures, Examples 1.1, 9.9 and 10.5, frames (from memory).
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.bounds import bounds, rayleigh_quotient
from calcsheet.core.condense import condensed
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


def frame(columns, beams) -> np.ndarray:
    """K of a frame of one bay, width 2h, in EI/h³: elements' strains, joint rotations condensed out.

    Degrees of freedom: translation of each floor, then rotations of its left and right joints.
    """
    n, rows = len(columns), []
    for i, inertia in enumerate(columns):
        for side in range(2):
            shear, bend = np.zeros(3 * n), np.zeros(3 * n)
            top = n + 2 * i + side
            shear[i], shear[top], bend[top] = 1.0, -0.5, 1.0
            if i:
                shear[i - 1], shear[top - 2], bend[top - 2] = -1.0, -0.5, -1.0
            rows += [np.sqrt(12.0 * inertia) * shear, np.sqrt(inertia) * bend]
    for i, inertia in enumerate(beams):
        left, right = n + 2 * i, n + 2 * i + 1
        mean, apart = np.zeros(3 * n), np.zeros(3 * n)
        mean[[left, right]] = 0.5
        apart[[left, right]] = -1.0, 1.0
        rows += [np.sqrt(12.0 * inertia / 2.0) * mean, np.sqrt(inertia / 2.0) * apart]
    root = condensed(np.array(rows), range(n))
    return root.T @ root


def test_frames_condensed_from_their_joints(case):
    published = case("08-static-condensation-frames")
    given = published.inputs
    published.meets("portal_k", frame([1.0], [1.0])[0, 0])
    published.meets(
        "A_K", frame(given["two_storey_A"]["I_column_from_below"], given["two_storey_A"]["I_beam_from_below"])
    )
    published.meets(
        "B_K", frame(given["two_storey_B"]["I_column_from_below"], given["two_storey_B"]["I_beam_from_below"])
    )
    assert frame([1.0], [1e12])[0, 0] == pytest.approx(published.expected["portal_rigid_beam_k"]["value"], rel=1e-9)
    assert frame([1.0], [1e-12])[0, 0] == pytest.approx(published.expected["portal_no_beam_k"]["value"], rel=1e-9)
