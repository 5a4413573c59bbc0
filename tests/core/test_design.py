"""Design drifts and actions from combined values in round numbers, whatever the model behind them."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from calcsheet.core.codes.edition import Facts, Scaling, SecondOrder
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.codes.is1893_2016 import IS1893
from calcsheet.core.design import actions, drifts
from calcsheet.core.errors import ModelError
from calcsheet.core.response import Combined

EN = EN1998(0.2, 1, "B", "II", 3.0, 3.0, "concrete moment frame", "other", "ductile")
IS = IS1893("IV", "medium", 1.2, 5.0, 4.0, "concrete moment frame", "other", base_y=16.0)
FACTS = Facts("x", 0.6, np.array([4.0, 7.0, 10.0]), np.array([4.0, 3.0, 3.0]), np.array([2000.0, 2000.0, 1000.0]))
FOUND = Combined(
    force=np.array([240.0, 260.0, 200.0]),
    shear=np.array([600.0, 400.0, 200.0]),
    moment=np.array([4200.0, 1800.0, 600.0]),
    displacement=np.array([0.006, 0.010, 0.012]),
    drift=np.array([0.006, 0.005, 0.003]),
)
ONE = Scaling(1.0, 1.0, "", "")
GRAVITY = np.array([5000.0, 3000.0, 1000.0])


def test_plain_drifts():
    found = drifts(EN, FACTS, FOUND, ONE, GRAVITY, None)
    assert found.design == pytest.approx([0.018, 0.015, 0.009])
    assert found.limit == pytest.approx([0.060, 0.045, 0.045])
    assert found.share == pytest.approx([0.3, 1 / 3, 0.2])
    assert found.worst == 1
    assert found.second_order.theta == pytest.approx([5000 * 0.018 / 2400, 3000 * 0.015 / 1200, 1000 * 0.009 / 600])
    assert found.stiffness == pytest.approx([1e5, 8e4, 200 / 0.003])
    assert found.separation == pytest.approx(0.036)
    assert found.capped is False


def test_a_cap_holds_storey_by_storey():
    cap = dataclasses.replace(FOUND, drift=np.array([0.020, 0.012, 0.010]), displacement=np.array([0.02, 0.03, 0.04]))
    found = drifts(EN, FACTS, FOUND, ONE, GRAVITY, cap)
    assert found.design == pytest.approx([0.018, 0.012, 0.009])
    assert found.displacement == pytest.approx([0.018, 0.03, 0.036])
    assert found.share == pytest.approx([0.3, 12 / 45, 0.2])
    assert (found.worst, found.capped) == (0, False)
    assert found.second_order.drift == pytest.approx(found.design)


def test_a_cap_that_differs_by_rounding_does_not_govern():
    cap = dataclasses.replace(FOUND, drift=3.0 * FOUND.drift * (1.0 - 1e-14))
    assert drifts(EN, FACTS, FOUND, ONE, GRAVITY, cap).capped is False
    lower = dataclasses.replace(FOUND, drift=3.0 * FOUND.drift * 0.99)
    assert drifts(EN, FACTS, FOUND, ONE, GRAVITY, lower).capped is True


def test_amplified_in_the_middle_storey():
    # θ = 20 000 × 0.015/(400 × 3) = 0.25 there, 20 000 × 0.018/2400 = 0.15 below, 0.015 above
    found = drifts(EN, FACTS, FOUND, ONE, np.array([20000.0, 20000.0, 1000.0]), None)
    assert found.second_order.theta == pytest.approx([0.15, 0.25, 0.015])
    assert found.design == pytest.approx([0.018 / 0.85, 0.015 / 0.75, 0.009])
    assert found.displacement == pytest.approx([0.018 / 0.85, 0.030 / 0.75, 0.036 / 0.75])
    acting = actions(EN, FACTS, FOUND, ONE, EN.static(FACTS), found.second_order)
    assert acting.shear == pytest.approx([600 / 0.85, 400 / 0.75, 200.0])
    assert acting.moment == pytest.approx([4200 / 0.75, 1800 / 0.75, 600.0])  # the largest factor at and above
    assert acting.overturning == pytest.approx(4200 / 0.75 / 5000)


def test_scales_go_to_their_own():
    found = drifts(IS, FACTS, FOUND, Scaling(1.5, 1.2, "", ""), None, None)
    assert found.design == pytest.approx([0.0072, 0.006, 0.0036])
    assert found.scale == 1.2
    assert found.first == pytest.approx([0.006, 0.005, 0.003])
    assert found.second_order_note == "not in this edition"
    assert found.gravity.tolist() == [0.0, 0.0, 0.0]
    acting = actions(IS, FACTS, FOUND, Scaling(1.5, 1.2, "", ""), None, None)
    assert acting.shear == pytest.approx([900.0, 600.0, 300.0])
    assert acting.equivalent == pytest.approx([300.0, 300.0, 300.0])
    assert acting.modal_base_shear == 600.0
    assert acting.static_force.tolist() == [0.0, 0.0, 0.0]


def test_static_forces_come_with_the_static_base_shear():
    static = EN.static(FACTS)
    second = SecondOrder(np.zeros(3), np.zeros(3), 0.1, 0.3, np.ones(3), "passes", "", "")
    found = actions(EN, FACTS, FOUND, ONE, static, second)
    # 2000 × 4, 2000 × 7 and 1000 × 10 over 32 000
    assert found.static_force == pytest.approx(static.shear * np.array([8.0, 14.0, 10.0]) / 32.0)


def test_a_spectrum_without_response_is_refused():
    still = dataclasses.replace(FOUND, shear=np.zeros(3), drift=np.zeros(3))
    with pytest.raises(
        ModelError, match="storey drift: 0 in a storey; must be above 0: the spectrum gives no response"
    ):
        drifts(IS, FACTS, still, ONE, None, None)
