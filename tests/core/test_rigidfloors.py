"""Rigid floors on lines of resistance: symmetry, rotation and shift of the plan, and a matrix written out by hand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from calcsheet.core import rigidfloors
from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.model import spatial_model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.rigidfloors import DENSE_UP_TO, Floors, LineOfResistance, SparseFloors, floors_of
from calcsheet.core.springs import BaseSprings
from calcsheet.core.standing import standing
from calcsheet.core.stick import Stick

LEVELS = ("1", "2", "3")
HEIGHT = np.array([4.4, 3.3, 3.1])
MASS = np.array([420.0, 390.0, 275.0])
CENTRE = np.array([[11.2, 6.9], [11.0, 7.2], [12.1, 6.4]])
GYRATION = np.array([7.4, 7.3, 6.6])
GRAVITY = np.array([5200.0, 4900.0, 3100.0])
STOREY = np.array([3.1e5, 2.6e5, 1.9e5])
WALL = Stick(np.array([9.0e6, 9.0e6, 7.5e6]), np.array([1.1e6, 1.1e6, 0.9e6]), HEIGHT)
UP = np.pi / 2.0


def lines(kind: str = "chains") -> tuple[LineOfResistance, ...]:
    others = {
        "chains": Chain(0.7 * STOREY),
        "stick": WALL,
        "stiffness": StiffnessMatrix(WALL.force(np.eye(3))),
        "flexibility": FlexibilityMatrix(WALL.displacement(np.eye(3))),
        "lower": Chain(0.7 * STOREY[:2]),
    }
    return (
        LineOfResistance("A", 0.0, 0.5, UP, Chain(STOREY)),
        LineOfResistance("D", 24.0, 0.0, UP, Chain(0.8 * STOREY)),
        LineOfResistance("1", 0.0, 0.0, 0.0, Chain(1.1 * STOREY)),
        LineOfResistance("4", 3.0, 14.0, 0.05, others[kind]),
    )


def plan(**changes) -> Floors:
    kind = changes.pop("kind", "chains")
    given = {
        "level": LEVELS,
        "storey_height": HEIGHT,
        "centre": CENTRE,
        "gyration": GYRATION,
        "lines": lines(kind),
        "gravity": None,
    }
    return floors_of(**(given | changes))


def turned(floors: Floors, angle: float, to: tuple[float, float] = (0.0, 0.0)) -> Floors:
    """The plan turned about the origin, then moved."""
    c, s = np.cos(angle), np.sin(angle)
    turn = np.array([[c, -s], [s, c]])
    moved = []
    for line in floors.lines:
        x, y = turn @ [line.x, line.y] + to
        moved.append(replace(line, x=x, y=y, angle=line.angle + angle))
    return replace(floors, centre=floors.centre @ turn.T + to, lines=tuple(moved))


@pytest.mark.parametrize("kind", ["chains", "stick", "stiffness", "flexibility", "lower"])
@pytest.mark.parametrize("gravity", [None, GRAVITY], ids=["not loaded", "loaded"])
@pytest.mark.parametrize("keep", [None, 4])
def test_evidence_holds(kind, gravity, keep):
    model = spatial_model(plan(kind=kind, gravity=gravity), MASS)
    modes = modes_of(model, keep)
    found = list(evidence_of_modes(model, modes, bounds(model)))
    for direction in ("x", "y"):
        found += evidence_of_participation(participation(model, modes, direction), modes.omega.size, model.size)
    assert len(found) == (8 if keep is None else 6)
    assert [e.key for e in found if not e.within] == []
    np.testing.assert_allclose(modes.strain.sum(axis=0), 1.0, rtol=1e-9)
    np.testing.assert_allclose(modes.kinetic.sum(axis=0), 1.0, rtol=1e-9)


def by_hand(floors: Floors) -> np.ndarray:
    """K of chains from each storey's stiffness at the origin, storeys stacked, then taken to the centres of mass."""
    n = floors.levels
    k = np.zeros((3 * n, 3 * n))
    for line in floors.lines:
        c, s = np.cos(line.angle), np.sin(line.angle)
        way = np.array([c, s, s * line.x - c * line.y])
        for i, stiffness in enumerate(line.lateral.storey):
            block = stiffness * np.outer(way, way)
            k[3 * i : 3 * i + 3, 3 * i : 3 * i + 3] += block
            if i:
                k[3 * i - 3 : 3 * i, 3 * i - 3 : 3 * i] += block
                k[3 * i : 3 * i + 3, 3 * i - 3 : 3 * i] -= block
                k[3 * i - 3 : 3 * i, 3 * i : 3 * i + 3] -= block
    move = np.eye(3 * n)
    for i, (x, y) in enumerate(floors.centre):
        move[3 * i, 3 * i + 2], move[3 * i + 1, 3 * i + 2] = y, -x
    return move.T @ k @ move


def test_four_lines_against_the_matrix_written_out():
    floors = plan()
    wanted = by_hand(floors)
    np.testing.assert_allclose(floors.force(np.eye(9)), wanted, rtol=1e-11, atol=1e-9 * wanted.max())
    np.testing.assert_allclose(floors.root.T @ floors.root, wanted, rtol=1e-11, atol=1e-9 * wanted.max())
    np.testing.assert_allclose(floors.displacement(wanted), np.eye(9), atol=1e-9)


def test_four_lines_against_a_condensed_hand_matrix():
    # a level without mass in the middle, condensed: K₂₂ - K₂₁K₁₁⁻¹K₁₂ of the hand matrix on levels 1 and 3
    k, keep, out = by_hand(plan()), [0, 1, 2, 6, 7, 8], [3, 4, 5]
    wanted = k[np.ix_(keep, keep)] - k[np.ix_(keep, out)] @ np.linalg.solve(k[np.ix_(out, out)], k[np.ix_(out, keep)])
    joined = [
        replace(line, lateral=Chain(np.array([line.lateral.storey[0], 1.0 / (1.0 / line.lateral.storey[1:]).sum()])))
        for line in lines()
    ]
    # two storeys in series share one axis only where all lines keep their ratios: the plan is made so
    same = [replace(line, lateral=Chain(line.lateral.storey)) for line in lines()]
    assert all(np.allclose(a.lateral.storey / same[0].lateral.storey, a.lateral.storey[0] / STOREY[0]) for a in same)
    two = Floors(("1", "3"), np.array([4.4, 6.4]), CENTRE[[0, 2]], GYRATION[[0, 2]], tuple(joined))
    np.testing.assert_allclose(two.force(np.eye(6)), wanted, rtol=1e-9, atol=1e-9 * wanted.max())


@pytest.mark.parametrize("lateral", [Chain(STOREY), WALL], ids=["chain", "stick"])
@pytest.mark.parametrize("gravity", [None, GRAVITY], ids=["not loaded", "loaded"])
def test_a_symmetric_plan_is_the_planar_model(planar, lateral, gravity):
    # lines mirrored about the masses' common axis: x, y and rotation part; x is that of two lines in a plane
    sides = [
        LineOfResistance("south", 9.0, 0.0, 0.0, lateral),
        LineOfResistance("north", 9.0, 12.0, 0.0, lateral),
        LineOfResistance("west", 2.0, 6.0, UP, lateral.times(0.4)),
        LineOfResistance("east", 16.0, 6.0, UP, lateral.times(0.4)),
    ]
    floors = plan(centre=np.tile([9.0, 6.0], (3, 1)), lines=tuple(sides), gravity=gravity)
    model = spatial_model(floors, MASS)
    modes = modes_of(model)
    load = None if gravity is None else np.cumsum(gravity[::-1])[::-1]
    for direction, factor in (("x", 2.0), ("y", 0.8)):
        held = standing(lateral.times(factor), HEIGHT, BaseSprings(), load, LEVELS)
        alone = planar(MASS, held, np.cumsum(HEIGHT))
        wanted = modes_of(alone)
        part, alone_part = participation(model, modes, direction), participation(alone, wanted, "x")
        moved = np.flatnonzero(part.share > 1e-9)
        np.testing.assert_allclose(modes.omega[moved], wanted.omega, rtol=1e-11)
        np.testing.assert_allclose(part.effective_mass[moved], alone_part.effective_mass, rtol=1e-8)
        np.testing.assert_allclose(part.effective_height[moved], alone_part.effective_height, rtol=1e-7)
        shapes = model.along(direction, modes.psi)[:, moved]
        np.testing.assert_allclose(shapes, wanted.psi, rtol=1e-7, atol=1e-9)


@pytest.mark.parametrize("angle", [0.3, UP, 2.2])
@pytest.mark.parametrize("kind", ["chains", "stick"])
@pytest.mark.parametrize("gravity", [None, GRAVITY], ids=["not loaded", "loaded"])
def test_turning_the_plan_turns_the_results(angle, kind, gravity):
    there = plan(kind=kind, gravity=gravity)
    here = turned(there, angle, (-31.0, 250.0))
    a, b = (modes_of(spatial_model(floors, MASS)) for floors in (there, here))
    np.testing.assert_allclose(b.omega, a.omega, rtol=1e-11)
    turn = np.array([[np.cos(angle), -np.sin(angle), 0.0], [np.sin(angle), np.cos(angle), 0.0], [0.0, 0.0, 1.0]])
    wanted = np.einsum("ij,ljm->lim", turn, a.psi.reshape(3, 3, 9)).reshape(9, 9)
    signs = np.sign((wanted * b.psi).sum(axis=0))
    np.testing.assert_allclose(b.psi, wanted * signs, atol=1e-9)


def test_moving_the_origin_changes_nothing():
    there, far = plan(kind="stick", gravity=GRAVITY), (2.0e4, -7.0e4)
    here = turned(there, 0.0, far)
    a, b = (modes_of(spatial_model(floors, MASS)) for floors in (there, here))
    np.testing.assert_allclose(b.omega, a.omega, rtol=1e-9)
    np.testing.assert_allclose(b.psi, a.psi, atol=1e-8)
    np.testing.assert_allclose(b.strain, a.strain, atol=1e-5)


def test_two_equal_lines_are_one_of_twice_the_stiffness():
    first, *others = lines("stick")
    twice = plan(lines=(first, first, *others))
    once = plan(lines=(replace(first, lateral=first.lateral.times(2.0)), *others))
    np.testing.assert_allclose(twice.force(np.eye(9)), once.force(np.eye(9)), rtol=1e-13)
    np.testing.assert_allclose(twice.root.T @ twice.root, once.force(np.eye(9)), rtol=1e-10, atol=1e-3)


def test_walls_in_parallel_are_the_sum_of_their_condensed_stiffnesses():
    # three walls and a frame along x, mirrored: with rotation held, K in x is Σ K of each (statics)
    frame, small = Chain(STOREY), WALL.times(0.3)
    along = [LineOfResistance(str(y), 5.0, y, 0.0, lateral) for y, lateral in ((0.0, WALL), (7.0, frame), (14.0, WALL))]
    along.append(LineOfResistance("7 small", 5.0, 7.0, 0.0, small))
    across = [LineOfResistance(name, x, 7.0, UP, frame) for name, x in (("west", 0.0), ("east", 10.0))]
    floors = plan(centre=np.tile([5.0, 7.0], (3, 1)), lines=(*along, *across))
    wanted = 2.0 * WALL.force(np.eye(3)) + frame.force(np.eye(3)) + small.force(np.eye(3))
    np.testing.assert_allclose(floors.force(np.eye(9))[0::3, 0::3], wanted, rtol=1e-12)
    root = floors.root.T @ floors.root
    np.testing.assert_allclose(root[0::3, 0::3], wanted, rtol=1e-9, atol=1e-9 * wanted.max())
    np.testing.assert_allclose(root[0::3, 1::3], 0.0, atol=1e-9 * wanted.max())


def test_a_line_reversed_is_the_same_line():
    first, *others = lines()
    back = plan(lines=(replace(first, angle=first.angle + np.pi, y=first.y + 8.0), *others))
    np.testing.assert_allclose(back.force(np.eye(9)), plan().force(np.eye(9)), rtol=1e-9, atol=1e-6)


def test_drifts_are_taken_on_one_vertical():
    # a rotation of the lower floor moves the point below the upper centre of mass
    floors, u = plan(), np.zeros((9, 1))
    u[2] = 1e-3
    found = floors.drift(u).reshape(3, 3)
    arm = CENTRE[1] - CENTRE[0]
    np.testing.assert_allclose(found[0], [0.0, 0.0, 1e-3], atol=1e-18)
    np.testing.assert_allclose(found[1], [1e-3 * arm[1], -1e-3 * arm[0], -1e-3], rtol=1e-12)
    rigid = np.tile([0.3, -0.2, 0.0], 3)[:, None]
    np.testing.assert_allclose(floors.drift(rigid)[3:], 0.0, atol=1e-15)


def test_shears_of_the_lines_hold_the_forces():
    floors = plan(kind="stick")
    force = np.array([120.0, 40.0, 0.0, 250.0, -30.0, 100.0, 300.0, 10.0, -50.0])[:, None]
    u = floors.displacement(force)
    shear = [floors.line_shear(u, line)[0, 0] for line in floors.lines]
    x = sum(v * np.cos(line.angle) for v, line in zip(shear, floors.lines, strict=True))
    y = sum(v * np.sin(line.angle) for v, line in zip(shear, floors.lines, strict=True))
    assert x == pytest.approx(670.0, rel=1e-10)
    assert y == pytest.approx(20.0, rel=1e-9)


def test_the_weight_of_a_floor_pushes_it_round():
    # one storey under a load P spread with radius ρ: K_G = P/h diag(1, 1, ρ²) at its centroid (statics)
    one = Floors(("Roof",), np.array([4.0]), np.array([[3.0, 5.0]]), np.array([6.0]), ring(), np.array([900.0]))
    free = replace(one, gravity=None)
    push = free.force(np.eye(3)) - one.force(np.eye(3))
    np.testing.assert_allclose(push, np.diag([225.0, 225.0, 225.0 * 36.0]), atol=1e-8)


def ring(stiffness: float = 5.0e4) -> tuple[LineOfResistance, ...]:
    chain = Chain(np.array([stiffness]))
    return (
        LineOfResistance("south", 0.0, 0.0, 0.0, chain),
        LineOfResistance("north", 0.0, 10.0, 0.0, chain),
        LineOfResistance("west", 0.0, 0.0, UP, chain),
    )


@pytest.mark.parametrize("kind", [Floors, SparseFloors])
@pytest.mark.parametrize(
    ("taken", "said"),
    [
        ("parallel", 'level "Roof", in x: a mechanism'),
        ("askew", 'level "Roof", in y: a mechanism'),
        ("concurrent", 'level "Roof", rotation about the vertical: a mechanism'),
        ("one missing", 'level "Roof", rotation about the vertical: a mechanism'),
    ],
)
def test_a_mechanism_is_named(kind, taken, said):
    chain = Chain(np.array([5.0e4]))
    found = {
        "parallel": (LineOfResistance("a", 0.0, 0.0, UP, chain), LineOfResistance("b", 9.0, 0.0, UP, chain)),
        "askew": tuple(LineOfResistance(str(i), i, 0.0, 0.7, chain) for i in range(3)),
        "concurrent": tuple(LineOfResistance(str(i), 2.0, 3.0, 0.7 * i, chain) for i in range(3)),
        "one missing": ring()[1:],
    }[taken]
    floors = kind(("Roof",), np.array([4.0]), np.array([[3.0, 5.0]]), np.array([6.0]), found)
    with pytest.raises(ModelError) as error:
        floors.displacement(np.zeros((3, 1)))
    assert said in str(error.value)
    assert "lines of resistance must be neither all parallel nor all through one point" in str(error.value)


def test_no_lines_at_all():
    with pytest.raises(ModelError, match="lines of resistance: none; must be at least three"):
        plan(lines=())


@pytest.mark.parametrize("threshold", [DENSE_UP_TO, 3], ids=["dense", "sparse"])
def test_a_building_that_buckles_is_named(monkeypatch, threshold):
    monkeypatch.setattr(rigidfloors, "DENSE_UP_TO", threshold)
    with pytest.raises(ModelError) as error:
        plan(gravity=200.0 * GRAVITY).displacement(np.zeros((9, 1)))
    assert 'storey below level "1": gravity load 2.64e+06 kN with an elastic critical load factor of' in str(
        error.value
    )


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"gyration": np.array([7.4, 0.0, 6.6])}, 'radius of gyration [m], "2": 0; must be finite and above 0'),
        ({"centre": CENTRE[:2]}, "centre of mass: an array of shape (2, 2); must be of shape (3, 2), a row a level"),
        ({"storey_height": HEIGHT[:2]}, "storey height: an array of shape (2,); must be of shape (3,), a row a level"),
        (
            {"lines": (LineOfResistance("tall", 0.0, 0.0, 0.0, Chain(np.ones(4))),)},
            'line "tall": 4 levels; must be at most 3, that of the building',
        ),
    ],
)
def test_what_does_not_fit_is_named(changes, said):
    with pytest.raises(ModelError) as error:
        plan(**changes)
    assert str(error.value) == said


@pytest.mark.parametrize("gravity", [False, True], ids=["not loaded", "loaded"])
def test_sparse_floors_are_dense_ones(gravity):
    rng, n = np.random.default_rng(3), 18
    given = {
        "level": tuple(map(str, range(n))),
        "storey_height": rng.uniform(3.0, 4.0, n),
        "centre": rng.uniform(8.0, 12.0, (n, 2)),
        "gyration": rng.uniform(6.0, 8.0, n),
        "lines": tuple(replace(line, lateral=Chain(rng.uniform(4e5, 8e5, n))) for line in lines()),
        "gravity": rng.uniform(3e3, 4e3, n) if gravity else None,
    }
    dense, few = Floors(**given), SparseFloors(**given)
    mass = dense.inertia(rng.uniform(300.0, 400.0, n))
    a, b = dense.modes(mass, 9), few.modes(mass, 9)
    np.testing.assert_allclose(b[0], a[0], rtol=1e-10)
    np.testing.assert_allclose(np.abs(b[1]), np.abs(a[1]), atol=1e-8)
    force = rng.normal(size=(3 * n, 2))
    np.testing.assert_allclose(few.displacement(force), dense.displacement(force), rtol=1e-8, atol=1e-12)
    ends = np.concatenate([a[0] * (1.0 - 1e-8), a[0] * (1.0 + 1e-8)])
    np.testing.assert_array_equal(few.count_below(mass, ends), dense.count_below(mass, ends))
    if gravity:
        assert few.critical.factor == pytest.approx(dense.critical.factor, rel=1e-8)
        assert few.critical.storey == dense.critical.storey


def test_many_floors_are_sparse_and_few_are_dense():
    n = DENSE_UP_TO // 3
    given = [np.full(n + 1, 3.0), np.zeros((n + 1, 2)), np.ones(n + 1)]
    tall = [replace(line, lateral=Chain(np.full(n + 1, 1e6))) for line in lines()]
    names = tuple(map(str, range(n + 1)))
    assert type(floors_of(names, *given, tall)) is SparseFloors
    assert type(plan()) is Floors


def test_frames_hold_the_forces_and_what_gravity_pushes_with():
    # equilibrium of the lines' own shears with the forces and P/h times the drifts (statics)
    floors, force = plan(gravity=GRAVITY), np.array([120.0, 40.0, 0.0, 250.0, -30.0, 100.0, 300.0, 10.0, -50.0])
    u = floors.displacement(force[:, None])
    pushed = floors.gravity_shear(u).reshape(3, 3)
    shear = np.cumsum(force.reshape(3, 3)[::-1], axis=0)[::-1]
    for axis, way in enumerate((np.cos, np.sin)):
        held = sum(floors.line_shear(u, line)[:, 0] * way(line.angle) for line in floors.lines)
        np.testing.assert_allclose(held, shear[:, axis] + pushed[:, axis], rtol=1e-8)
    assert np.abs(pushed[:, :2]).max() > 0.1
