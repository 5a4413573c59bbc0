"""Participation: what needs no published case."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.matrix import StiffnessMatrix
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.storeys import LevelBelow, StiffnessSet, Storeys
from calcsheet.core.totals import totals

MASS, STOREY = [320.0, 280.0, 260.0, 150.0], [4.1e5, 5.2e5, 3.9e5, 2.2e5]


@pytest.fixture
def model(planar):
    return planar(MASS, STOREY, [4.2, 7.7, 11.2, 14.5])


@pytest.mark.parametrize(("target", "needed"), [(0.5, 1), (0.9, 2), (1.0, 4)])
def test_modes_needed(model, target, needed):
    part = participation(model, modes_of(model), "x", target)
    assert part.needed == needed
    assert part.cumulative[needed - 1] >= target * (1.0 - 1e-12)
    assert needed == 1 or part.cumulative[needed - 2] < target


def test_a_target_that_the_modes_kept_do_not_reach(model):
    assert participation(model, modes_of(model, 1), "x", 0.99).needed is None


def test_significant_modes_are_those_above_five_per_cent(model):
    part = participation(model, modes_of(model), "x")
    assert part.significant == tuple(i + 1 for i, share in enumerate(part.share) if share > 0.05)
    assert 1 < len(part.significant) < 4


def test_the_first_shape_by_hand(model):
    modes = modes_of(model)
    part = participation(model, modes, "x")
    phi = modes.psi[:, 0] / modes.psi[-1, 0]
    assert part.first_excitation == pytest.approx(MASS @ phi)
    assert part.first_mass == pytest.approx(MASS @ phi**2)
    assert part.gamma_roof[0] == pytest.approx(part.first_excitation / part.first_mass)


def test_a_first_shape_whose_top_stands_still_has_no_roof_factor(planar):
    """Levels that nothing ties together: the soft one below sways, the top does not."""
    part_of = planar([100.0, 100.0], StiffnessMatrix(np.diag([1e4, 1e6])))
    part = participation(part_of, modes_of(part_of), "x")
    assert (part.first_excitation, part.first_mass, part.gamma_roof[0]) == (0.0, 0.0, 0.0)


def test_a_direction_sees_only_what_it_moves():
    """Two translations at one level, x and y, in one model."""
    lateral = StiffnessMatrix(np.array([[4e4, 1e4], [1e4, 9e4]]))
    model = Model(("1",), np.array([3.0]), np.array([100.0, 100.0]), (0, 0), ("x", "y"), np.eye(2), lateral)
    modes = modes_of(model)
    for direction in ("x", "y"):
        part = participation(model, modes, direction)
        assert part.total_mass == 100.0
        assert part.effective_mass.sum() == pytest.approx(100.0)
        assert part.effective_height == pytest.approx([3.0, 3.0])


@pytest.fixture
def storeys():
    """Two levels on a basement, two stiffness sets, y given in one of them only."""
    x, y = Chain(np.array([3e5, 2e5])), Chain(np.array([2e5, 1e5]))
    return Storeys(
        base="Ground",
        base_elevation=1.0,
        level=("1", "Roof"),
        elevation=np.array([5.0, 8.5]),
        storey_height=np.array([4.0, 3.5]),
        mass=np.array([200.0, 150.0]),
        below=(LevelBelow("Ground", 1.0, 400.0),),
        stiffness=(StiffnessSet("gross", "g", {"y": y, "x": x}), StiffnessSet("cracked", "c", {"x": x})),
        forces="gross",
        drifts="cracked",
    )


def test_a_building_has_a_model_for_each_direction_of_the_set(storeys):
    x, y = models_of(storeys, "gross")
    assert (x.direction, y.direction) == (("x",), ("y",))
    assert x.height.tolist() == [4.0, 7.5]
    assert y.lateral.storey.tolist() == [2e5, 1e5]
    assert [m.direction for m in models_of(storeys, "cracked")] == [("x",)]


def test_sums_of_a_building(storeys):
    found = totals(storeys)
    assert (found.mass, found.mass_below, found.height) == (350.0, 400.0, 7.5)
    assert found.weight == pytest.approx(350.0 * 9.80665)
    assert found.mass_above.tolist() == [350.0, 150.0]
