"""Torsion of rigid floors, against plans worked by hand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.model import spatial_model
from calcsheet.core.modes import modes_of
from calcsheet.core.plan import (
    amplification,
    centres,
    direction_shares,
    displaced,
    point_drifts,
    shifted,
    static,
    uncoupled,
)
from calcsheet.core.rigidfloors import Floors, LineOfResistance
from calcsheet.core.stick import Stick

UP = np.pi / 2.0


def chain(*storeys: float) -> Chain:
    return Chain(np.array(storeys))


@pytest.fixture
def floors() -> Floors:
    lines = (
        LineOfResistance("west", 0.0, 4.0, UP, chain(6.0e4, 4.0e4)),
        LineOfResistance("east", 20.0, 4.0, UP, chain(2.0e4, 2.0e4)),
        LineOfResistance("south", 5.0, 0.0, 0.0, chain(5.0e4, 5.0e4)),
        LineOfResistance("north", 5.0, 8.0, 0.0, chain(5.0e4, 3.0e4)),
    )
    return Floors(("1", "Roof"), np.array([4.0, 3.5]), np.array([[9.0, 4.0], [9.5, 4.2]]), np.array([6.0, 5.8]), lines)


def test_centres_of_stiffness(floors):
    # x_s = Σ k_y x/Σ k_y, y_s = Σ k_x y/Σ k_x, k_θ = Σ k_y (x - x_s)² + Σ k_x (y - y_s)² (statics)
    found = centres(floors)
    np.testing.assert_allclose(found.centre, [[5.0, 4.0], [20.0 / 3.0, 3.0]], rtol=1e-12)
    np.testing.assert_allclose(found.eccentricity, [[4.0, 0.0], [9.5 - 20.0 / 3.0, 1.2]], rtol=1e-12, atol=1e-12)
    np.testing.assert_allclose(found.stiffness, [[1.0e5, 8.0e4], [8.0e4, 6.0e4]], rtol=1e-12)
    below = 6.0e4 * 25.0 + 2.0e4 * 225.0 + 1.0e5 * 16.0
    upper = 4.0e4 * (20.0 / 3.0) ** 2 + 2.0e4 * (40.0 / 3.0) ** 2 + 5.0e4 * 9.0 + 3.0e4 * 25.0
    np.testing.assert_allclose(found.torsion, [below, upper], rtol=1e-12)
    wanted = np.sqrt([[below / 8.0e4, below / 1.0e5], [upper / 6.0e4, upper / 8.0e4]])
    np.testing.assert_allclose(found.radius, wanted, rtol=1e-12)
    np.testing.assert_allclose(found.coupling, 0.0, atol=1e-8)


def test_centres_of_a_plan_askew(floors):
    # turned by 30° about the origin and moved: the same torsional stiffness and, along the turned axes, eccentricity
    c, s = np.cos(np.pi / 6.0), np.sin(np.pi / 6.0)
    turn = np.array([[c, -s], [s, c]])

    def moved(line: LineOfResistance) -> LineOfResistance:
        x, y = turn @ [line.x, line.y] + [300.0, -40.0]
        return replace(line, x=x, y=y, angle=line.angle + np.pi / 6.0)

    there = replace(
        floors, centre=floors.centre @ turn.T + [300.0, -40.0], lines=tuple(moved(line) for line in floors.lines)
    )
    a, b = centres(floors), centres(there)
    np.testing.assert_allclose(b.torsion, a.torsion, rtol=1e-10)
    np.testing.assert_allclose(b.eccentricity, a.eccentricity @ turn.T, rtol=1e-9, atol=1e-10)
    # k_xy = (k_x - k_y) sin cos of the angle
    np.testing.assert_allclose(b.coupling, (a.stiffness[:, 0] - a.stiffness[:, 1]) * c * s, rtol=1e-10)


def test_lines_that_bend_have_no_centres(floors):
    wall = Stick(np.array([1e6, 1e6]), None, floors.storey_height)
    first, *others = floors.lines
    assert centres(replace(floors, lines=(replace(first, lateral=wall), *others))) is None


def test_a_storey_with_lines_of_one_direction_is_named(floors):
    # its upper storey is held in y by a line that stops below it, and by two others askew to nothing
    west, east, south, north = floors.lines
    lines = (west, east, replace(south, lateral=chain(5.0e4)), replace(north, lateral=chain(5.0e4)))
    with pytest.raises(ModelError, match='level "Roof", in x: a mechanism'):
        replace(floors, lines=lines).displacement(np.zeros((6, 1)))


def test_uncoupled_periods_are_those_of_each_block(floors):
    mass = np.array([150.0, 110.0])
    found, k = uncoupled(floors, mass), floors.force(np.eye(6))
    inertia = floors.inertia(mass)
    for i, name in enumerate(("x", "y", "rotation")):
        square = np.linalg.eigvals(k[i::3, i::3] / inertia[i::3, None]).min()
        assert getattr(found, name) == pytest.approx(2.0 * np.pi / np.sqrt(square), rel=1e-10)


def test_shares_of_a_mode_add_up(floors):
    model = spatial_model(floors, np.array([150.0, 110.0]))
    shares = direction_shares(model, modes_of(model))
    assert shares.shape == (3, 6)
    np.testing.assert_allclose(shares.sum(axis=0), 1.0, rtol=1e-12)
    # with one centre of mass and of stiffness a mode is of one movement alone
    same = replace(floors, centre=np.tile([5.0, 4.0], (2, 1)), lines=tuple(
        replace(line, lateral=chain(line.lateral.storey[0], 0.5 * line.lateral.storey[0])) for line in floors.lines
    ))  # fmt: skip
    alone = spatial_model(same, np.array([150.0, 110.0]))
    np.testing.assert_allclose(np.sort(direction_shares(alone, modes_of(alone)), axis=0)[-1], 1.0, rtol=1e-9)


def test_one_storey_under_a_static_force_and_torque():
    # F in y at e_a beside the centre of mass: u_s = F/k_y at the centre of stiffness, θ = F (e + e_a)/k_θ (statics)
    line = [LineOfResistance(str(x), x, 5.0, UP, chain(k)) for x, k in ((0.0, 3.0e4), (18.0, 1.0e4))]
    line += [LineOfResistance(str(y), 9.0, y, 0.0, chain(2.5e4)) for y in (0.0, 10.0)]
    floors = Floors(("Roof",), np.array([4.0]), np.array([[8.0, 5.0]]), np.array([5.9]), tuple(line))
    u = static(floors, np.array([200.0]), "y", np.array([0.9]))
    k_theta = 3.0e4 * 4.5**2 + 1.0e4 * 13.5**2 + 2.0 * 2.5e4 * 25.0
    theta = 200.0 * (8.0 - 4.5 + 0.9) / k_theta
    for x in (0.0, 4.5, 18.0):
        moved = displaced(floors, u, np.array([x]), np.array([2.0]))
        assert moved[1].item() == pytest.approx(200.0 / 4.0e4 + theta * (x - 4.5), rel=1e-10)
        assert moved[0].item() == pytest.approx(-theta * (2.0 - 5.0), rel=1e-10)
    along_x = static(floors, np.array([200.0]), "x", np.array([0.5]))
    assert along_x[2, 0] == pytest.approx(-200.0 * 0.5 / k_theta, rel=1e-10)


def test_drifts_at_a_point_follow_the_vertical(floors):
    u = np.array([1e-3, 2e-3, 1e-4, 2e-3, 5e-3, 3e-4])[:, None]
    x, y = np.array([20.0, 18.0]), np.array([8.0, 7.0])
    in_x, in_y = point_drifts(floors, u, x, y)
    (x1, y1), (x2, y2) = floors.centre
    assert in_x[0, 0] == pytest.approx(1e-3 - 1e-4 * (8.0 - y1), rel=1e-12)
    assert in_y[1, 0] == pytest.approx((5e-3 + 3e-4 * (18.0 - x2)) - (2e-3 + 1e-4 * (18.0 - x1)), rel=1e-12)
    assert in_x[1, 0] == pytest.approx((2e-3 - 3e-4 * (7.0 - y2)) - (1e-3 - 1e-4 * (7.0 - y1)), rel=1e-12)


def test_masses_shifted_change_the_eccentricity_alone(floors):
    along = np.array([[1.0, 0.0], [0.9, 0.0]])
    moved = shifted(floors, along)
    np.testing.assert_allclose(centres(moved).eccentricity - centres(floors).eccentricity, along, atol=1e-10)
    np.testing.assert_allclose(centres(moved).torsion, centres(floors).torsion, rtol=1e-10)


@pytest.mark.parametrize(
    ("edges", "wanted"),
    [((1.0, 1.0), 1.0), ((1.4, 0.6), (1.4 / 1.2) ** 2), ((2.4, -0.4), 3.0), ((-1.5, -0.5), (1.5 / 1.2) ** 2)],
)
def test_amplification_of_accidental_torsion(edges, wanted):
    # A_x = (δ_max/1.2 δ_avg)² within 1 and 3 (ASCE/SEI 7-16, 12.8.4.3, from memory)
    assert amplification(edges) == pytest.approx(wanted, rel=1e-12)
