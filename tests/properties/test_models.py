"""Evidence holds for any stick, on any springs, near buckling; floors turn with their plan, wherever it lies."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.model import Model, spatial_model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.rigidfloors import Floors, LineOfResistance
from calcsheet.core.springs import BaseSprings
from calcsheet.core.standing import critical_load, standing
from calcsheet.core.stick import Stick

profile = settings.get_profile("calcsheet")


def powers(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high).map(lambda x: 10.0**x)


STOREY = st.tuples(
    st.floats(2.5, 6.0), st.floats(50.0, 900.0), powers(6.0, 9.0), powers(5.0, 7.0), st.floats(500.0, 9000.0)
)
TOWERS = st.lists(STOREY, min_size=1, max_size=30)
SPRINGS = st.tuples(st.none() | powers(4.0, 9.0), st.none() | powers(6.0, 11.0))
ABOVE_ONE = st.none() | st.floats(1.01, 100.0)
"""Elastic critical load factor of loads in the stiffness; none where they are left out."""


def kept(model: Model) -> list[str]:
    """Evidence beyond its limit."""
    modes = modes_of(model)
    found = list(evidence_of_modes(model, modes, bounds(model)))
    for direction in model.direction:
        found += evidence_of_participation(participation(model, modes, direction), modes.omega.size, model.size)
    return [e.key for e in found if not e.within]


@profile
@given(TOWERS, SPRINGS, ABOVE_ONE, st.sampled_from(["wall", "no shear", "chain"]))
def test_evidence_of_planar_models(tower, springs, factor, kind):
    height, mass, bending, shear, weight = np.array(tower).T
    lateral = Chain(shear) if kind == "chain" else Stick(bending, shear if kind == "wall" else None, height)
    base, load = BaseSprings(*springs), np.cumsum(weight[::-1])[::-1]
    names = tuple(map(str, range(mass.size)))
    scaled = None if factor is None else load * critical_load(lateral, height, base, load).factor / factor
    held = standing(lateral, height, base, scaled, names)
    one = np.ones((1, mass.size))
    assert kept(Model(names, np.cumsum(height), mass, tuple(range(mass.size)), ("x",), one, held)) == []


@profile
@given(TOWERS, SPRINGS)
def test_springs_and_gravity_loads_only_lengthen_the_period(tower, springs):
    height, mass, bending, shear, weight = np.array(tower).T
    stick, base, load = Stick(bending, shear, height), BaseSprings(*springs), np.cumsum(weight[::-1])[::-1]
    names = tuple(map(str, range(mass.size)))
    factor = critical_load(stick, height, base, load).factor
    first = [
        lateral.modes(mass, 1)[0][0]
        for lateral in (
            stick,
            standing(stick, height, base, None, names),
            standing(stick, height, base, load * factor / 2.0, names),
        )
    ]
    assert first[0] >= first[1] * (1.0 - 1e-9)
    assert first[1] >= first[2] * (1.0 - 1e-9)


LINE = st.tuples(st.floats(-20.0, 20.0), st.floats(-20.0, 20.0), st.floats(-3.0, 3.0), powers(4.0, 6.0), st.booleans())
PLACE = st.tuples(st.floats(-3.0, 3.0), st.floats(-500.0, 500.0), st.floats(-500.0, 500.0))


def floors_of(lines, n: int) -> Floors:
    """n floors on lines drawn at random, and on three that leave no mechanism."""
    height = np.linspace(4.2, 3.0, n)
    made = [
        LineOfResistance(
            str(i), x, y, angle, Stick(np.full(n, 20.0 * k), np.full(n, k), height) if bends else Chain(np.full(n, k))
        )
        for i, (x, y, angle, k, bends) in enumerate(lines)
    ]
    for name, x, y, angle in (("a", -15.0, 0.0, 0.0), ("b", 0.0, 15.0, 1.5), ("c", 15.0, 15.0, 1.6)):
        made.append(LineOfResistance(name, x, y, angle, Chain(np.full(n, 2e4))))
    centre = np.column_stack([np.linspace(0.5, -0.7, n), np.linspace(-1.0, 1.0, n)])
    return Floors(tuple(map(str, range(n))), height, centre, np.linspace(7.0, 6.0, n), tuple(made))


@profile
@given(st.lists(LINE, min_size=1, max_size=4), st.integers(1, 6), PLACE)
def test_floors_turn_and_move_with_their_plan(lines, n, place):
    angle, x, y = place
    c, s = np.cos(angle), np.sin(angle)
    turn, mass = np.array([[c, -s], [s, c]]), np.linspace(400.0, 250.0, n)
    there = floors_of(lines, n)

    def moved(line: LineOfResistance) -> LineOfResistance:
        px, py = turn @ [line.x, line.y] + [x, y]
        return replace(line, x=px, y=py, angle=line.angle + angle)

    here = replace(there, centre=there.centre @ turn.T + [x, y], lines=tuple(moved(line) for line in there.lines))
    a, b = spatial_model(there, mass), spatial_model(here, mass)
    assert kept(a) == kept(b) == []
    np.testing.assert_allclose(modes_of(b).omega, modes_of(a).omega, rtol=1e-8)
