"""IS 1893 (Part 1):2016 clause by clause, numbers worked by hand (clauses from memory)."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.is1893_2016 import IS1893
from calcsheet.core.errors import ModelError

G = 9.80665


def edition(**changed) -> IS1893:
    """Zone IV: Z = 0.24; I = 1.2, R = 5 in x and 4 in y, so Z/2 × I/R = 0.0288 and 0.036."""
    given = {
        "zone": "IV", "soil": "medium", "importance_value": 1.2, "r_x": 5.0, "r_y": 4.0,
        "system_x": "concrete moment frame", "system_y": "other", "base_y": 16.0,
    }  # fmt: skip
    return IS1893(**(given | changed))


@pytest.mark.parametrize(
    ("soil", "ordinates"),
    [
        # at 0, 0.05, 0.1, 0.35, 0.8, 4 and 5 s
        ("hard", (1.0, 1.75, 2.5, 2.5, 1.00 / 0.8, 0.25, 0.25)),
        ("medium", (1.0, 1.75, 2.5, 2.5, 1.36 / 0.8, 0.34, 0.34)),
        ("soft", (1.0, 1.75, 2.5, 2.5, 1.67 / 0.8, 1.67 / 4, 0.42)),
    ],
)
def test_two_curves(soil, ordinates):
    """6.4.2: both from 0.1 s on; below, the static one stays at 2.5 where the other is 1 + 15 T."""
    period = np.array([0.0, 0.05, 0.1, 0.35, 0.8, 4.0, 5.0])
    found = edition(soil=soil)
    assert found.curve(period, "spectrum") == pytest.approx(ordinates, rel=1e-12)
    assert found.curve(period, "static") == pytest.approx((2.5, 2.5, *ordinates[2:]), rel=1e-12)


def test_design_ordinates():
    found = [edition().ordinates(d, np.array([0.8]))[0] for d in "xy"]
    assert found == pytest.approx([0.24 / 2 * 1.2 / 5 * 1.7 * G, 0.24 / 2 * 1.2 / 4 * 1.7 * G], rel=1e-12)
    assert edition().elastic_ordinates("x", np.array([0.8])) is None


@pytest.mark.parametrize(
    ("zone", "coefficient"),
    # 2.5 × Z/2 × 1.2/5 with Z of Table 3
    [("II", 2.5 * 0.05 * 0.24), ("III", 2.5 * 0.08 * 0.24), ("IV", 2.5 * 0.12 * 0.24), ("V", 2.5 * 0.18 * 0.24)],
)
def test_static_base_shear_on_the_plateau(building, worked, zone, coefficient):
    """T_a = 0.075 × 10^0.75 = 0.422 s is below 0.55 s; the model's period does not enter."""
    static = edition(zone=zone).static(building(period=3.0))
    assert static.shear == pytest.approx(coefficient * 5000, rel=1e-12)
    assert static.period == pytest.approx(0.075 * 10**0.75, rel=1e-14)
    assert static.governing == "(Z/2)(S_a/g)/(R/I)"
    assert [worked(r) for r in static.relations[-2:]] == pytest.approx([coefficient, coefficient * 5000], rel=1e-12)


@pytest.mark.parametrize(("zone", "least"), [("II", 0.007), ("III", 0.011), ("IV", 0.016), ("V", 0.024)])
def test_least_base_shear(building, worked, zone, least):
    """7.2.2, Table 7: at 150 m T_a = 0.075 × 150^0.75 = 3.21 s, and 1/3.21 × Z/2 × 0.24 is less in every zone."""
    tall = building(height=(50.0, 100.0, 150.0))
    static = edition(zone=zone, soil="hard").static(tall)
    assert static.shear == pytest.approx(least * 5000, rel=1e-12)
    assert static.governing == "least base shear of Table 7"
    assert [worked(r) for r in static.relations[-2:]] == pytest.approx([least, least * 5000], rel=1e-12)


def test_falling_branch_governs(building):
    """T_a = 0.075 × 40^0.75 = 1.193 s: 1.36/1.193 × 0.0288."""
    static = edition().static(building(height=(16.0, 28.0, 40.0)))
    assert static.coefficient == pytest.approx(1.36 / (0.075 * 40**0.75) * 0.0288, rel=1e-12)


@pytest.mark.parametrize(
    ("system", "more", "period"),
    [
        ("concrete moment frame", {}, 0.075 * 10**0.75),
        ("composite moment frame", {}, 0.080 * 10**0.75),
        ("steel moment frame", {}, 0.085 * 10**0.75),
        ("other", {"base_x": 25.0}, 0.09 * 10 / 5),
        ("concrete walls", {"base_x": 25.0, "wall_area_x": 2.25}, 0.075 * 10**0.75 / 1.5),  # 0.281 s
        ("concrete walls", {"base_x": 16.0, "wall_area_x": 9.0}, 0.09 * 10 / 4),  # 0.141 s is less than 0.225 s
    ],
)
def test_approximate_period(building, worked, system, more, period):
    """7.6.2."""
    static = edition(system_x=system, **more).static(building())
    assert static.approximate_period == pytest.approx(period, rel=1e-12)
    assert worked(static.relations[0]) == pytest.approx(period, rel=1e-12)


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        ({"base_y": None}, 'base_y: missing; must be given with system_y "other"'),
        ({"system_x": "concrete walls"}, 'base_x: missing; must be given with system_x "concrete walls"'),
        (
            {"system_x": "concrete walls", "base_x": 9.0},
            'wall_area_x: missing; must be given with system_x "concrete walls"',
        ),
    ],
)
def test_what_a_system_needs(changed, message):
    with pytest.raises(ModelError) as caught:
        edition(**changed)
    assert str(caught.value) == message


def test_distribution(building):
    """7.6.3(a): 2000 × 16, 2000 × 49, 1000 × 100 of 230000."""
    facts = building()
    static = edition().static(facts)
    force, _ = edition().distribution(facts, static)
    assert force / static.shear == pytest.approx([32 / 230, 98 / 230, 100 / 230], rel=1e-14)


@pytest.mark.parametrize(
    ("zone", "top", "words"),
    [("II", 14.9, "alone may do"), ("II", 15.0, "alone may not do"), ("III", 10.0, "alone may not do")],
)
def test_permitted(building, zone, top, words):
    """7.7.1: static alone for regular buildings lower than 15 m in zone II."""
    assert words in edition(zone=zone).permitted(building(height=(4.0, 7.0, top))).text


def test_forces_are_scaled_and_displacements_are_not(building):
    """7.7.3: V̄_B = 2.5 × 0.0288 × 5000 = 360 kN."""
    facts = building()
    static = edition().static(facts)
    scaling = edition().scaling(facts, 300.0, static)
    assert (scaling.forces, scaling.drifts) == (pytest.approx(1.2, rel=1e-12), 1.0)
    assert edition().scaling(facts, 360.1, static).forces == 1.0


def test_the_least_base_shear_bounds_the_modal_one_too(building):
    """7.2.2: 0.016 × 5000 = 80 kN."""
    tall = building(height=(50.0, 100.0, 150.0))
    found = edition(soil="hard")
    assert found.scaling(tall, 50.0, found.static(tall)).forces == pytest.approx(1.6, rel=1e-12)


@pytest.mark.parametrize(
    ("period", "verdict"),
    # f₂/f₁ = 1/0.92 = 1.087 and 1/0.90 = 1.111
    [((1.0, 0.92), "exceeds"), ((1.0, 0.90), "passes"), ((1.0,), "passes")],
)
def test_srss_asks_for_modes_apart(period, verdict):
    """7.7.5.3."""
    assert edition().independent(np.array(period)).verdict == verdict


def test_drift(building):
    """7.11.1: 0.004 h at the design force, no R."""
    assert edition().drift("x").value == 1.0
    assert edition().drift_limit(building())[0] == pytest.approx([0.016, 0.012, 0.012], rel=1e-14)


def test_second_order_is_not_in_this_edition(building):
    some = np.ones(3)
    assert edition().second_order(building(), some, some, some) is None


def screens(facts, stiffness, **changed):
    return {s.name: s for s in edition(**changed).irregularities(facts, np.array(stiffness), np.zeros(3))}


def test_soft_storey(building):
    """Table 6(i), 2016: softer than the storey above."""
    assert screens(building(), (9e4, 9e4, 8e4))["soft storey"].verdict == "passes"
    found = screens(building(), (9e4, 9.1e4, 8e4))["soft storey"]
    assert found.verdict == "exceeds"
    assert "storey 1 from the base" in found.text
    assert found.consequence


def test_mass(building):
    """Table 6(ii): 3100 > 1.5 × 2000; the light roof does not count."""
    assert screens(building(), (9e4, 9e4, 8e4))["mass"].verdict == "passes"
    found = screens(building(weight=(2000.0, 3100.0, 1000.0)), (9e4, 9e4, 8e4))["mass"]
    assert (found.verdict, found.consequence) == ("exceeds", "dynamic analysis in zones III to V")
    assert "level 2 from the base" in found.text


@pytest.mark.parametrize(("share", "verdict"), [(0.65, "passes"), (0.649, "exceeds"), (None, "not assessed")])
def test_mass_in_three_modes(building, share, verdict):
    """Table 6(vii)."""
    found = screens(building(share_of_three=share), (9e4, 9e4, 8e4))["mass in the first three modes"]
    assert found.verdict == verdict
    assert bool(found.consequence) == (verdict == "exceeds")


@pytest.mark.parametrize(
    ("zone", "other", "verdict"),
    [
        # 0.6 s against other; 10 % of the larger
        ("IV", 0.66, "exceeds"),  # 1 - 0.6/0.66 = 9.1 %
        ("IV", 0.67, "passes"),  # 10.4 %
        ("V", 0.55, "exceeds"),  # 8.3 %
        ("V", 0.53, "passes"),  # 11.7 %
        ("III", 0.6, "passes"),
        ("V", None, "not assessed"),
    ],
)
def test_first_periods_of_both_directions(building, zone, other, verdict):
    """Table 6(vii)."""
    found = screens(building(other_period=other), (9e4, 9e4, 8e4), zone=zone)["first periods of both directions"]
    assert found.verdict == verdict


def test_separation():
    """7.11.3.1: R Δ; 5 × 0.02, R of x being the larger."""
    gap, clause = edition().separation(0.02)
    assert gap == pytest.approx(0.1, rel=1e-14)
    assert clause.startswith("7.11.3.1")
