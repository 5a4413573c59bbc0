"""The mass take-off against hand calculations and numerical integration."""

from __future__ import annotations

from dataclasses import replace

import mpmath
import numpy as np
import pytest

from calcsheet.core.errors import ModelError
from calcsheet.core.floors import Floors, Load, OtherMass
from calcsheet.core.masstakeoff import edge_radius, evidence_of_take_off, spread_radius, take_off

G = 9.80665
SLAB = Load("slab", "permanent", "floor", 7.0, 1.0, "")
PLANT = OtherMass("Roof", "plant", 210.0, 6.0, -3.0, 4.0, 2.0)


def floors(load=(SLAB,), amount=((300.0,), (300.0,), (300.0,)), **parts) -> Floors:
    """Three levels of 20 m × 15 m, storeys of 4.4, 3.3 and 3.0 m from the base up."""
    n = len(amount)
    given = {
        "level": ("1", "2", "Roof")[-n:],
        "below": 0,
        "storey_height": np.array([4.4, 3.3, 3.0][-n:]),
        "area": np.full(n, 300.0),
        "plan_x": np.full(n, 20.0),
        "plan_y": np.full(n, 15.0),
        "centre_x": np.zeros(n),
        "centre_y": np.zeros(n),
        "own_radius": (None,) * n,
        "other": (),
    }
    return Floors(load=tuple(load), amount=np.array(amount), **(given | parts))


def test_a_slab_by_hand():
    """7 kN/m² on 20 m × 15 m: 2100 kN; r² = (400 + 225)/12 m²."""
    found = take_off(floors())
    assert found.weight == pytest.approx([2100.0] * 3, rel=1e-15)
    assert found.mass == pytest.approx([214.14040472536493] * 3, rel=1e-13)  # 2100/9.80665
    assert found.radius == pytest.approx([7.2168783648703] * 3, rel=1e-13)
    assert found.weight_per_area == pytest.approx([7.0] * 3, rel=1e-15)
    assert found.total == pytest.approx(6300.0, rel=1e-15)
    assert found.foot == 0.0


def test_half_storeys_by_hand():
    """Walls 30, 24 and 18 m long of 5 kN/m²: ½·5·(4.4·30 + 3.3·24), ½·5·(3.3·24 + 3.0·18), ½·5·3.0·18; foot ½·5·4.4·30."""
    walls = Load("walls", "permanent", "walls", 5.0, 1.0, "")
    found = take_off(floors((walls,), ((30.0,), (24.0,), (18.0,))))
    assert found.weight == pytest.approx([528.0, 333.0, 135.0], rel=1e-14)
    assert found.foot == pytest.approx(330.0, rel=1e-14)


def test_columns_by_hand():
    """Columns of 2.0 and 1.6 m² in section at 25 kN/m³: ½·25·(3.3·2.0 + 3.0·1.6) and ½·25·3.0·1.6."""
    columns = Load("columns", "permanent", "columns", 25.0, 1.0, "")
    found = take_off(floors((columns,), ((2.0,), (1.6,))))
    assert found.weight == pytest.approx([142.5, 60.0], rel=1e-14)


def test_a_facade_set_back_by_hand():
    """Façade of 1.2 kN/m²: 70 m round the lower floor, 50 m round the upper, which is 10 m × 15 m and centred at x = -5.

    Lower level: ½·1.2·3.3·70 = 138.6 kN at 0 and ½·1.2·3.0·50 = 90 kN at -5: x = -450/228.6; inertia, times g:
    138.6·35²/12 + 90·25²/12 + 138.6·90/228.6·25 (two bodies 5 m apart).
    """
    facade = Load("façade", "permanent", "façade", 1.2, 1.0, "")
    given = floors(
        (facade,),
        ((70.0,), (50.0,)),
        plan_x=np.array([20.0, 10.0]),
        centre_x=np.array([0.0, -5.0]),
        area=np.array([300.0, 150]),
    )
    found = take_off(given)
    assert found.weight == pytest.approx([228.6, 90.0], rel=1e-14)
    assert found.centre_x == pytest.approx([-450.0 / 228.6, -5.0], rel=1e-14)
    by_hand = 138.6 * 1225.0 / 12.0 + 90.0 * 625.0 / 12.0 + 138.6 * 90.0 / 228.6 * 25.0
    assert found.inertia[0] == pytest.approx(by_hand / G, rel=1e-14)
    assert found.radius[1] == pytest.approx(25.0 / 12.0**0.5, rel=1e-14)


def test_a_parapet_lies_on_its_level_along_the_edge():
    """77 m² of 4.0 kN/m²: 308 kN on its level alone, r = (20 + 15)/√12."""
    parapet = Load("parapet", "permanent", "parapet", 4.0, 1.0, "")
    found = take_off(floors((parapet,), ((77.0,),)))
    assert found.weight == pytest.approx([308.0], rel=1e-15)
    assert found.radius == pytest.approx([35.0 / 12.0**0.5], rel=1e-14)


def test_plant_off_the_centre_by_hand():
    """Slab 2100 kN at the centre, plant 210 kN at (6, -3), 4 m × 2 m.

    Centre 210/2310 of the way: (6/11, -3/11). Inertia times g: 2100·625/12 + 210·20/12 + (2100·210/2310)·(36 + 9).
    """
    found = take_off(floors(other=(PLANT,)))
    assert found.centre_x[2] == pytest.approx(6.0 / 11.0, rel=1e-14)
    assert found.centre_y[2] == pytest.approx(-3.0 / 11.0, rel=1e-14)
    by_hand = 2100.0 * 625.0 / 12.0 + 210.0 * 20.0 / 12.0 + 2100.0 * 210.0 / 2310.0 * 45.0
    assert found.inertia[2] == pytest.approx(by_hand / G, rel=1e-14)
    assert found.radius[2] == pytest.approx((by_hand / 2310.0) ** 0.5, rel=1e-14)
    assert found.other.tolist() == [0.0, 0.0, 210.0]
    assert found.centre_x[:2].tolist() == [0.0, 0.0]


@pytest.mark.parametrize(
    ("share", "value", "counted"),
    [
        (
            0.24,
            3.0,
            0.72,
        ),  # EN 1998-1:2004, 4.2.4: φ ψ₂ = 0.8 · 0.3, offices in storeys of related occupancy (from memory)
        (0.25, 7.2, 1.8),  # ASCE/SEI 7-16, 12.7.2: a quarter of the storage load (from memory)
        (0.25, 3.0, 0.75),  # IS 1893 (Part 1):2016, Table 10: up to 3 kN/m² (from memory)
        (0.5, 4.0, 2.0),  # the same, above 3 kN/m² (from memory)
        (None, 1.5, 0.0),
    ],
)
def test_a_variable_load_counts_with_its_share(share, value, counted):
    imposed = Load("imposed", "variable", "floor", value, share, "")
    found = take_off(floors((SLAB, imposed), ((300.0, 200.0),)))
    assert found.counted == pytest.approx([7.0, counted], rel=1e-15)
    assert found.weight == pytest.approx([2100.0 + 200.0 * counted], rel=1e-15)


def test_a_given_radius_serves_what_is_spread_and_not_the_edge():
    facade = Load("façade", "permanent", "façade", 1.2, 1.0, "")
    found = take_off(floors((SLAB, facade), ((300.0, 70.0),), own_radius=(9.0,)))
    edge = 0.5 * 1.2 * 3.0 * 70.0
    assert found.radius[0] ** 2 == pytest.approx((2100.0 * 81.0 + edge * 1225.0 / 12.0) / (2100.0 + edge), rel=1e-14)


@pytest.mark.parametrize(("a", "b"), [(20.0, 15.0), (3.0, 61.0), (7.5, 7.5)])
def test_radii_against_numerical_integration(a, b):
    with mpmath.workdps(30):
        area = mpmath.quad(lambda x, y: x**2 + y**2, [-a / 2, a / 2], [-b / 2, b / 2]) / (a * b)
        sides = mpmath.quad(lambda x: x**2 + (b / 2) ** 2, [-a / 2, a / 2])
        sides += mpmath.quad(lambda y: y**2 + (a / 2) ** 2, [-b / 2, b / 2])
        assert float(spread_radius(a, b)) == pytest.approx(float(mpmath.sqrt(area)), rel=1e-14)
        assert float(edge_radius(a, b)) == pytest.approx(float(mpmath.sqrt(sides / (a + b))), rel=1e-14)


def test_parallel_axes_against_numerical_integration():
    """Polar inertia of slab and plant integrated over both rectangles about the centre found."""
    found = take_off(floors(other=(PLANT,)))
    x, y = found.centre_x[2], found.centre_y[2]

    def integrated(weight, at_x, at_y, a, b):
        def squared(u, v):
            return (u - x) ** 2 + (v - y) ** 2

        over = mpmath.quad(squared, [at_x - a / 2, at_x + a / 2], [at_y - b / 2, at_y + b / 2])
        return float(weight / (a * b) * over)

    whole = integrated(2100.0, 0.0, 0.0, 20.0, 15.0) + integrated(210.0, 6.0, -3.0, 4.0, 2.0)
    assert found.inertia[2] == pytest.approx(whole / G, rel=1e-12)


def test_where_the_origin_lies_does_not_matter():
    near = take_off(floors(other=(PLANT,)))
    moved = replace(PLANT, x=PLANT.x + 500.0, y=PLANT.y - 80.0)
    far = take_off(floors(other=(moved,), centre_x=np.full(3, 500.0), centre_y=np.full(3, -80.0)))
    assert far.inertia == pytest.approx(near.inertia, rel=1e-10)
    assert far.centre_x == pytest.approx(near.centre_x + 500.0, rel=1e-14)


def test_levels_below_the_base_may_weigh_nothing_and_others_not():
    given = floors(amount=((0.0,), (300.0,), (300.0,)), below=1, centre_x=np.array([4.0, 0.0, 0.0]))
    found = take_off(given)
    assert (found.mass[0], found.radius[0], found.centre_x[0]) == (0.0, 0.0, 4.0)
    assert found.total == pytest.approx(4200.0, rel=1e-15)
    with pytest.raises(ModelError) as caught:
        take_off(replace(given, below=0))
    assert str(caught.value) == 'weight of level "1": 0 kN; must be above 0 above the effective base'


def test_evidence_finds_a_wrong_sum():
    given = floors(
        (SLAB, Load("walls", "permanent", "walls", 5.0, 1.0, "")), ((300.0, 30.0), (300.0, 24.0)), other=(PLANT,)
    )
    found = take_off(given)
    assert all(e.within for e in evidence_of_take_off(given, found))
    heavier = evidence_of_take_off(given, replace(found, weight=found.weight * 1.001))
    assert [e.within for e in heavier] == [False, True]
    turned = evidence_of_take_off(given, replace(found, inertia=found.inertia * 1.001))
    assert [e.within for e in turned] == [True, False]
