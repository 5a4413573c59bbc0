"""Base springs and gravity loads in the stiffness, against closed forms of one storey, columns and rigid bars."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.evidence import evidence_of_modes
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of
from calcsheet.core.springs import BaseSprings
from calcsheet.core.standing import Standing, critical_load, standing
from calcsheet.core.stick import Stick

HEIGHT = np.array([4.2, 3.1, 3.3, 3.0])
MASS = [310.0, 280.0, 285.0, 190.0]
LOAD = np.array([11500.0, 8300.0, 5200.0, 2100.0])
NAMES = ("1", "2", "3", "Roof")
FIXED = BaseSprings()
SPRINGS = BaseSprings(translation=9.0e5, rocking=4.0e7)
CHAIN = Chain(np.array([2.6e5, 2.2e5, 1.9e5, 1.3e5]))
STICK = Stick(np.array([9.1e6, 8.4e6, 6.2e6, 5.0e6]), np.array([8.0e5, 8.0e5, 6.0e5, 6.0e5]), HEIGHT)
LATERALS = {
    "chain": CHAIN,
    "stick": STICK,
    "stiffness": StiffnessMatrix(STICK.force(np.eye(4))),
    "flexibility": FlexibilityMatrix(STICK.displacement(np.eye(4))),
}


def formed(lateral, springs, load) -> np.ndarray:
    """K from blocks written out: levels, base translation, base rotation; the base condensed by a solution."""
    k, one, h = lateral.force(np.eye(4)), np.ones(4), np.cumsum(HEIGHT)
    rigid = np.hstack([np.eye(4), -one[:, None], -h[:, None]])
    whole = rigid.T @ k @ rigid
    whole[4, 4] += 1e20 if springs.translation is None else springs.translation
    whole[5, 5] += 1e20 if springs.rocking is None else springs.rocking
    drift = np.zeros((4, 6))
    drift[:, :4] = np.eye(4) - np.eye(4, k=-1)
    drift[0, 4] = -1.0
    whole -= drift.T @ ((load / HEIGHT)[:, None] * drift)
    return whole[:4, :4] - whole[:4, 4:] @ np.linalg.solve(whole[4:, 4:], whole[4:, :4])


@pytest.mark.parametrize("lateral", LATERALS.values(), ids=LATERALS.keys())
@pytest.mark.parametrize("load", [LOAD, np.zeros(4)], ids=["loaded", "not loaded"])
@pytest.mark.parametrize(
    "springs", [FIXED, SPRINGS, BaseSprings(translation=9.0e5), BaseSprings(rocking=4.0e7)], ids=str
)
def test_it_is_the_stiffness_written_out(lateral, load, springs):
    held = Standing(lateral, HEIGHT, springs, load)
    wanted = formed(lateral, springs, load)
    np.testing.assert_allclose(held.force(np.eye(4)), wanted, rtol=1e-7, atol=1e-7 * np.abs(wanted).max())
    np.testing.assert_allclose(held.displacement(wanted), np.eye(4), atol=1e-7)


@pytest.mark.parametrize("lateral", LATERALS.values(), ids=LATERALS.keys())
@pytest.mark.parametrize("load", [LOAD, None], ids=["loaded", "not loaded"])
@pytest.mark.parametrize("springs", [FIXED, SPRINGS], ids=["fixed", "springs"])
def test_evidence_holds(planar, lateral, load, springs):
    model = planar(MASS, standing(lateral, HEIGHT, springs, load, NAMES), np.cumsum(HEIGHT))
    modes = modes_of(model)
    assert [e.key for e in evidence_of_modes(model, modes, bounds(model)) if not e.within] == []
    np.testing.assert_allclose(modes.strain.sum(axis=0), 1.0, rtol=1e-9)


def test_the_longer_period_of_one_storey(planar):
    # T/T_fixed = √(1 + k/k_x + k h²/k_θ) (Veletsos and Meek, Earthq. Eng. Struct. Dyn. 3, 1974, from memory)
    k, h = 4.0e4, 5.5
    springs = BaseSprings(translation=9.0e4, rocking=2.0e6)
    held = standing(Chain(np.array([k])), np.array([h]), springs, None, ("Roof",))
    fixed = modes_of(planar([120.0], [k])).period[0]
    longer = modes_of(planar([120.0], held)).period[0]
    assert longer / fixed == pytest.approx(np.sqrt(1.0 + k / 9.0e4 + k * h**2 / 2.0e6), rel=1e-13)


def test_a_base_that_moves_is_no_drift():
    held = Standing(CHAIN, HEIGHT, SPRINGS, np.zeros(4))
    force = np.array([[120.0], [180.0], [250.0], [300.0]])
    u = held.displacement(force)
    moved, turned = 850.0 / 9.0e5, float(force[:, 0] @ np.cumsum(HEIGHT)) / 4.0e7
    shear = np.cumsum(force[::-1])[::-1]
    np.testing.assert_allclose(held.drift(u)[:, 0], shear / CHAIN.storey + turned * HEIGHT, rtol=1e-11)
    assert u[0, 0] == pytest.approx(moved + turned * HEIGHT[0] + shear[0] / CHAIN.storey[0], rel=1e-12)


def test_a_chain_stays_one_under_its_load():
    # k - P/h (closed form)
    held = standing(CHAIN, HEIGHT, FIXED, LOAD, NAMES)
    assert isinstance(held, Chain)
    np.testing.assert_allclose(held.storey, CHAIN.storey - LOAD / HEIGHT, rtol=1e-15)
    general = Standing(CHAIN, HEIGHT, FIXED, LOAD)
    np.testing.assert_allclose(general.modes(np.array(MASS), 4)[0], held.modes(np.array(MASS), 4)[0], rtol=1e-12)


def test_nothing_to_stand_on_changes_nothing():
    assert standing(STICK, HEIGHT, FIXED, None, NAMES) is STICK
    assert standing(STICK, HEIGHT, FIXED, np.zeros(4), NAMES) is STICK


def test_the_critical_load_of_a_chain_is_that_of_its_weakest_storey():
    # K - λK_G = Bᵀ(k - λP/h)B is singular where λ = k h/P (closed form)
    ratio = CHAIN.storey * HEIGHT / LOAD
    found = critical_load(CHAIN, HEIGHT, FIXED, LOAD)
    assert found.factor == pytest.approx(ratio.min(), rel=1e-12)
    assert found.storey == int(np.argmin(ratio))
    assert found.load == LOAD[found.storey]
    assert critical_load(CHAIN, HEIGHT, FIXED, np.zeros(4)) is None


@pytest.mark.parametrize("shear", [None, 7.0e3])
def test_the_critical_load_of_a_column(shear):
    # Euler P_E = π²EI/4L²; with shear 1/P = 1/P_E + 1/GA_s (Timoshenko and Gere, Theory of Elastic Stability, from
    # memory); loads act on storey drifts, straight within each, so the error falls with the square of the storeys
    euler, error = np.pi**2 * 6.0e5 / (4.0 * 18.0**2), []
    wanted = euler if shear is None else 1.0 / (1.0 / euler + 1.0 / shear)
    for n in (20, 40):
        h = np.full(n, 18.0 / n)
        stick = Stick(np.full(n, 6.0e5), None if shear is None else np.full(n, shear), h)
        error.append(critical_load(stick, h, FIXED, np.ones(n)).factor / wanted - 1.0)
    assert abs(error[1]) < 2e-3
    assert error[0] / error[1] == pytest.approx(4.0, rel=0.05)


def test_the_critical_weight_of_a_column():
    # own weight spread along it: q L = 7.837 EI/L² (Timoshenko and Gere, Theory of Elastic Stability, from memory)
    n, length = 80, 24.0
    h = np.full(n, length / n)
    at_levels = np.full(n, 1.0 / n)
    at_levels[-1] /= 2.0
    load = np.cumsum(at_levels[::-1])[::-1]
    found = critical_load(Stick(np.full(n, 5.0e6), None, h), h, FIXED, load)
    assert found.factor * length**2 / 5.0e6 == pytest.approx(7.837, rel=5e-4)


def test_the_critical_load_of_a_rigid_bar_on_a_rocking_spring():
    # P h = k_θ (statics)
    found = critical_load(Chain(np.array([1e12])), np.array([6.0]), BaseSprings(rocking=3.0e4), np.array([1000.0]))
    assert found.factor == pytest.approx(3.0e4 / (1000.0 * 6.0), rel=1e-6)


def test_a_base_that_only_moves_does_not_bring_the_critical_load_down():
    free = critical_load(STICK, HEIGHT, BaseSprings(translation=1.0e3), LOAD)
    assert free.factor == pytest.approx(critical_load(STICK, HEIGHT, FIXED, LOAD).factor, rel=1e-9)


@pytest.mark.parametrize("lateral", LATERALS.values(), ids=LATERALS.keys())
def test_the_critical_load_makes_the_stiffness_singular(lateral):
    found = critical_load(lateral, HEIGHT, SPRINGS, LOAD)
    just = Standing(lateral, HEIGHT, SPRINGS, LOAD * found.factor * (1.0 - 1e-6))
    first = just.modes(np.ones(4), 1)[0][0] / Standing(lateral, HEIGHT, SPRINGS, 0.0 * LOAD).modes(np.ones(4), 1)[0][0]
    assert 0.0 < first < 3e-3


def test_second_order_displacement_of_one_storey(planar):
    # published case 10-p-delta: d = d₀/(1 - θ), θ = P d₀/(V h)
    held = standing(Chain(np.array([4.0e4])), np.array([3.5]), FIXED, np.array([12000.0]), ("Roof",))
    assert held.displacement(np.array([[900.0]])).item() == pytest.approx(0.024609375, rel=1e-12)


@pytest.mark.parametrize("lateral", LATERALS.values(), ids=LATERALS.keys())
def test_a_building_that_buckles_is_refused_by_its_storey(lateral):
    found = critical_load(lateral, HEIGHT, FIXED, LOAD)
    with pytest.raises(ModelError) as error:
        standing(lateral, HEIGHT, FIXED, LOAD * found.factor * 1.25, NAMES)
    assert f'storey below level "{NAMES[found.storey]}": gravity load' in str(error.value)
    assert "elastic critical load factor of 0.8; must be above 1" in str(error.value)


@pytest.mark.parametrize("name", ["translation", "rocking", "damping"])
@pytest.mark.parametrize("value", [0.0, -1.0, np.inf])
def test_a_spring_that_cannot_be(name, value):
    with pytest.raises(ModelError, match=rf"base, {name}: got .*; must be finite and above 0"):
        BaseSprings(**{name: value})
