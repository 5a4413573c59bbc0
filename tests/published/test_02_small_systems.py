"""Textbook systems of two and three degrees of freedom.

Sources, all from memory: K.-J. Bathe, Finite Element Procedures (1996), Examples 9.1, 9.4 and 9.6 (the eigenproblem);
R. W. Clough, J. Penzien, Dynamics of Structures, three-storey frame of Example E11-1; A. K. Chopra, Dynamics of
Structures, Examples 10.1, 10.4 and 13.2, two-storey frame.
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of, scaled
from calcsheet.core.participation import participation


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
def test_bathe(case, planar, kind):
    bathe = case("02-bathe-2dof")
    given = np.array(bathe.inputs["K"], dtype=float)
    lateral = kind(given if kind is StiffnessMatrix else np.linalg.inv(given))
    modes = modes_of(planar(np.diag(bathe.inputs["M"]).tolist(), lateral))
    bathe.meets("omega2", modes.omega**2)
    bathe.meets("T_printed", modes.period)
    bathe.meets("modes_abs_mass_normalised", np.abs(modes.psi.T))


def test_clough_and_penzien(case, planar):
    frame = case("02-clough-penzien-3storey")
    mass, stiffness = frame.inputs["storey_mass_from_below"], frame.inputs["storey_stiffness_from_below"]
    model = planar(mass, stiffness)
    modes = modes_of(model)
    shapes = scaled(modes.psi, "roof")
    for key in ("omega_printed", "omega"):
        frame.meets(key, modes.omega)
    frame.meets("omega_squared", modes.omega**2)
    for key in ("shapes_printed_storey1_2_roof", "shapes_roof_1"):
        frame.meets(key, shapes.T)
    for key in ("M_gen_printed", "M_gen_roof_1"):
        frame.meets(key, 1.0 / modes.psi[-1] ** 2)
    part = participation(model, modes, "x")
    frame.meets("L_roof_1", part.gamma / modes.psi[-1])
    assert part.first_mass == pytest.approx(frame.expected["M_gen_roof_1"]["value"][0], rel=1e-9)
    assert part.first_excitation == pytest.approx(frame.expected["L_roof_1"]["value"][0], rel=1e-9)


def test_two_storeys(case, planar):
    frame = case("02-two-storey-2m-m")
    mass, stiffness = frame.inputs["storey_mass_from_below"], frame.inputs["storey_stiffness_from_below"]
    model = planar(mass, stiffness, np.cumsum(frame.inputs["storey_height"]))
    modes = modes_of(model)
    part = participation(model, modes, "x")
    frame.meets("omega", modes.omega)
    frame.meets("shapes_roof_1", scaled(modes.psi, "roof").T)
    frame.meets("gamma_roof_1", part.gamma_roof)
    frame.meets("M_eff", part.effective_mass)
    frame.meets("h_eff", part.effective_height)
