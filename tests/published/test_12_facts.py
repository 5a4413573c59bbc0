"""What every engineer holds to be true of modes, on the three-storey frame (common practice)."""

from __future__ import annotations

import inspect

import numpy as np
import pytest

from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.steps.modes import RULE_OF_THUMB


@pytest.fixture(scope="module")
def facts(case):
    return case("12-facts")


@pytest.fixture(scope="module")
def model(facts, planar):
    return planar(facts.inputs["storey_mass_from_below"], facts.inputs["storey_stiffness_from_below"])


def test_modes_are_orthogonal_through_both_matrices_and_not_among_themselves(facts, model):
    psi = modes_of(model).psi
    first, second = psi[:, 0], psi[:, 1]
    facts.meets("phi1_M_phi2", first @ (model.mass * second))
    facts.meets("phi1_K_phi2", model.lateral.energy(psi)[0, 1])
    cosine = first @ second / np.linalg.norm(first) / np.linalg.norm(second)
    facts.meets("cosine_between_phi1_and_phi2", abs(cosine))


def test_mass_normalised_shapes_hold_half_the_squared_frequency(facts, model):
    modes = modes_of(model)
    stiffness = np.diag(model.lateral.energy(modes.psi))
    facts.meets("psi_K_psi_over_omega2", stiffness / modes.omega**2)
    facts.meets("strain_energy_over_half_omega2", modes.strain_energy / (0.5 * modes.omega**2))


def test_twice_the_frequency_takes_four_times_the_energy(facts, model, planar):
    twice = planar(model.mass, 4.0 * model.lateral.storey)
    ratio = modes_of(twice).strain_energy / modes_of(model).strain_energy
    assert modes_of(twice).omega == pytest.approx(2.0 * modes_of(model).omega, rel=1e-12)
    for value in ratio:
        facts.meets("energy_ratio_for_twice_the_frequency", value)


def test_effective_mass_ignores_scale_and_sign(facts, model):
    modes = modes_of(model)
    shapes = -7.0 * modes.psi
    by_definition = (model.mass @ shapes) ** 2 / (model.mass @ shapes**2)
    key = "effective_mass_after_scaling_mode_by_minus_7"
    facts.meets(key, by_definition)
    facts.meets(key, participation(model, modes, "x").effective_mass)


def test_target_and_modes_needed(facts, model):
    default = inspect.signature(participation).parameters["target"].default
    facts.meets("mass_participation_target", default)
    facts.meets("modes_needed_for_target", participation(model, modes_of(model), "x").needed)


def test_rule_of_thumb(facts):
    facts.meets("rule_of_thumb_T_per_storey_s", RULE_OF_THUMB)
