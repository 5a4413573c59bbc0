"""EN 1998-1:2004 clause by clause, numbers worked by hand (clauses from memory)."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.en1998_2004 import EN1998, damping_correction, least_modes
from calcsheet.core.errors import ModelError

G = 9.80665


def edition(**changed) -> EN1998:
    """a_gR = 0.25 g, type 1, ground B: S = 1.2, T_B = 0.15, T_C = 0.5, T_D = 2 s; class II."""
    given = {
        "ground_acceleration": 0.25, "spectrum": 1, "ground": "B", "importance_class": "II", "q_x": 3.0, "q_y": 1.5,
        "system_x": "concrete moment frame", "system_y": "other", "elements": "brittle",
    }  # fmt: skip
    return EN1998(**(given | changed))


@pytest.mark.parametrize(
    ("period", "over_g"),
    [
        (0.0, 0.25 * 1.2 * 2 / 3),
        (0.075, 0.25 * 1.2 * (2 / 3 + 0.5 * (2.5 / 3 - 2 / 3))),
        (0.15, 0.25 * 1.2 * 2.5 / 3),
        (0.5, 0.25),
        (1.0, 0.25 * 1.2 * 2.5 / 3 * 0.5 / 1.0),
        (2.0, 0.25 * 1.2 * 2.5 / 3 * 0.5 / 2.0),
        (2.2, 0.25 * 1.2 * 2.5 / 3 * 0.5 * 2.0 / 2.2**2),
        (3.0, 0.2 * 0.25),  # 1.2 × 2.5/3 × 0.5 × 2/9 = 0.111 is below β = 0.2
    ],
)
def test_design_spectrum(period, over_g):
    """3.2.2.5(4)."""
    assert edition().ordinates("x", np.array([period])) == pytest.approx([over_g * G], rel=1e-12)


def test_the_lower_bound_is_an_input_and_importance_is_in_it():
    found = edition(beta=0.1, importance_class="III").ordinates("x", np.array([3.0, 10.0]))
    # 1.2 (γ_I) × 0.25 × 1.2 × 2.5/3 × 0.5 × 2/9, and 0.1 × 1.2 × 0.25
    assert found == pytest.approx([1.2 * 0.25 * 1.2 * 2.5 / 3 / 9 * G, 0.03 * G], rel=1e-12)


def test_each_direction_has_its_behaviour_factor():
    found = [edition().ordinates(d, np.array([0.3]))[0] / G for d in "xy"]
    assert found == pytest.approx([0.25 * 1.2 * 2.5 / 3.0, 0.25 * 1.2 * 2.5 / 1.5], rel=1e-12)


def test_own_ground():
    own = edition(ground="own", corners=(1.3, 0.1, 0.6, 2.5))
    # 0.25 × 1.3 × 2.5/3 × 0.6/1.2
    assert own.ordinates("x", np.array([1.2])) == pytest.approx([0.25 * 1.3 * 2.5 / 3 / 2 * G], rel=1e-12)


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        ({"ground": "own"}, 'corners: 0 values with ground "own"; go with ground "own"'),
        ({"corners": (1.2, 0.1, 0.5, 2.0)}, 'corners: 4 values with ground "B"; go with ground "own"'),
        (
            {"ground": "own", "corners": (1.2, 0.5, 0.1, 2.0)},
            "corners: got (1.2, 0.5, 0.1, 2.0); must rise from T_B to T_C to T_D",
        ),
    ],
)
def test_corners_that_do_not_fit(changed, message):
    with pytest.raises(ModelError) as caught:
        edition(**changed)
    assert str(caught.value) == message


def test_type_2_of_ground_d():
    """Table 3.3: S = 1.8, T_B = 0.10, T_C = 0.30, T_D = 1.2 s."""
    found = edition(spectrum=2, ground="D").elastic(np.array([0.0, 0.05, 0.2, 0.6, 2.4]))
    top = 0.25 * 1.8 * 2.5
    by_hand = [0.25 * 1.8, 0.25 * 1.8 * (1 + 0.5 * 1.5), top, top * 0.3 / 0.6, top * 0.3 * 1.2 / 2.4**2]
    assert found == pytest.approx(np.array(by_hand) * G, rel=1e-12)


@pytest.mark.parametrize("damping", [0.0, -0.05, 1.0, 5.0, np.nan])
def test_damping_outside_its_range(damping):
    with pytest.raises(ModelError, match=r"^damping ratio: got .*; must be above 0 and below 1$"):
        damping_correction(damping)
    with pytest.raises(ModelError, match=r"^damping ratio"):
        edition().elastic(np.array([0.3]), damping)


def test_the_elastic_spectrum_caps_displacements():
    """4.3.4(1): where q S_d is above S_e, at short periods and at the lower bound, the cap is S_e."""
    found, period = edition(), np.array([0.0, 0.3, 3.0])
    design = found.drift("x").value * found.ordinates("x", period) / G
    elastic = found.elastic_ordinates("x", period) / G
    # 3 × 0.25 × 1.2 × 2/3 = 0.6 against 0.3; 0.75 both; 3 × 0.2 × 0.25 = 0.15 against 0.25 × 1.2 × 2.5 × 0.5 × 2/9
    assert design == pytest.approx([0.6, 0.75, 0.15], rel=1e-12)
    assert elastic == pytest.approx([0.3, 0.75, 0.75 / 9], rel=1e-12)


@pytest.mark.parametrize(
    ("period", "height", "shear", "reduced"),
    [
        (0.6, (4.0, 7.0, 10.0), 0.25 * 1.2 * 2.5 / 3 * (0.5 / 0.6) * 0.85 * 5000, "0.85"),
        (1.0, (4.0, 7.0, 10.0), 0.25 * 1.2 * 2.5 / 3 * (0.5 / 1.0) * 0.85 * 5000, "0.85"),  # T₁ = 2 T_C
        (1.1, (4.0, 7.0, 10.0), 0.25 * 1.2 * 2.5 / 3 * (0.5 / 1.1) * 5000, "1"),
        (0.6, (4.0, 7.0), 0.25 * 1.2 * 2.5 / 3 * (0.5 / 0.6) * 5000, "1"),  # two storeys
        (2.9, (4.0, 7.0, 10.0), 0.2 * 0.25 * 5000, "1"),
    ],
)
def test_static_base_shear(building, worked, period, height, shear, reduced):
    """4.3.3.2.2(1), Eq. (4.5)."""
    weight = {3: (2000.0, 2000.0, 1000.0), 2: (3000.0, 2000.0)}[len(height)]
    static = edition().static(building(period=period, height=height, weight=weight))
    assert static.shear == pytest.approx(shear, rel=1e-12)
    assert static.governing.endswith(f"λ = {reduced}")
    assert static.period == period
    assert worked(static.relations[-1]) == pytest.approx(shear, rel=1e-12)


def test_empirical_period(building):
    """4.3.3.2.2(3), for information."""
    assert edition().static(building("x")).approximate_period == pytest.approx(0.075 * 10**0.75, rel=1e-14)
    assert edition().static(building("y")).approximate_period == pytest.approx(0.050 * 10**0.75, rel=1e-14)
    tall = edition().static(building("x", height=(20.0, 41.0), weight=(900.0, 900.0)))
    assert tall.relations[0].clause == "4.3.3.2.2(3): for heights up to 40 m"


def test_distribution(building):
    """4.3.3.2.3(3): 2000 × 4, 2000 × 7, 1000 × 10 of 32000."""
    found, facts = edition(), building()
    static = found.static(facts)
    force, clause = found.distribution(facts, static)
    assert force / static.shear == pytest.approx([8 / 32, 14 / 32, 10 / 32], rel=1e-14)
    assert clause == "4.3.3.2.3(3), Eq. (4.11)"


@pytest.mark.parametrize(("period", "words"), [(1.9, "would meet"), (2.0, "would meet"), (2.1, "would not meet")])
def test_permitted(building, period, words):
    """4.3.3.2.1(2): min(4 × 0.5, 2.0) = 2 s."""
    answer = edition().permitted(building(period=period))
    assert words in answer.text
    assert "= 2 s" in answer.text
    assert answer.verdict == "passes"


@pytest.mark.parametrize(("levels", "modes"), [(1, 3), (4, 6), (5, 7), (9, 9), (10, 10), (100, 30)])
def test_least_number_of_modes(levels, modes):
    """3 √5 = 6.71, 3 √10 = 9.49."""
    assert least_modes(levels) == modes


@pytest.mark.parametrize(
    ("period", "verdict"), [((1.0, 0.9, 0.3), "passes"), ((1.0, 0.5, 0.46), "exceeds"), ((1.0,), "passes")]
)
def test_srss_asks_for_modes_apart(period, verdict):
    """4.3.3.3.2(2)."""
    assert edition().independent(np.array(period)).verdict == verdict


def test_nothing_is_scaled(building):
    scaling = edition().scaling(building(), 1.0, edition().static(building()))
    assert (scaling.forces, scaling.drifts) == (1.0, 1.0)


def test_torsion_of_planar_models():
    """4.3.3.2.4(2): 1 + 1.2 × 0.5 at the edge of a symmetric plan, 1 + 1.2 × 0.6 with the mass nearer the other edge."""
    assert edition().torsion("x")[0] == pytest.approx(1.6, rel=1e-14)
    shifted = edition(edge_y=0.6)
    assert shifted.torsion("x")[0] == pytest.approx(1.6, rel=1e-14)
    factor, answer = shifted.torsion("y")
    assert factor == pytest.approx(1.72, rel=1e-14)
    assert "1.72 at the edge where x/L_e = 0.6" in answer.text


def test_drift_factor():
    """4.3.4(1)."""
    assert (edition().drift("x").value, edition().drift("y").value) == (3.0, 1.5)
    assert edition(q_d_x=3.6).drift("x").value == 3.6


@pytest.mark.parametrize(
    ("changed", "shares"),
    [
        ({}, 0.005 / 0.5),
        ({"elements": "ductile"}, 0.0075 / 0.5),
        ({"elements": "none"}, 0.010 / 0.5),
        ({"importance_class": "I"}, 0.005 / 0.5),
        ({"importance_class": "III"}, 0.005 / 0.4),
        ({"importance_class": "IV"}, 0.005 / 0.4),
        ({"reduction_factor": 0.55}, 0.005 / 0.55),
    ],
)
def test_drift_limit(building, changed, shares):
    """4.4.3.2(1): ν d_r ≤ α h, storeys of 4, 3 and 3 m."""
    limit, _ = edition(**changed).drift_limit(building())
    assert limit == pytest.approx(np.array([4.0, 3.0, 3.0]) * shares, rel=1e-14)


@pytest.mark.parametrize(("importance_class", "factor"), [("I", 0.8), ("II", 1.0), ("III", 1.2), ("IV", 1.4)])
def test_importance(importance_class, factor):
    assert edition(importance_class=importance_class).importance().value == factor
    assert edition(importance_class=importance_class, importance_factor=1.15).importance().value == 1.15


@pytest.mark.parametrize(
    ("gravity", "theta", "factor", "verdict"),
    [
        # θ = P × 0.04/(500 × 4) = P/50000
        (5000.0, 0.10, 1.0, "passes"),
        (7500.0, 0.15, 1 / 0.85, "passes"),
        (10000.0, 0.20, 1.25, "passes"),
        (12500.0, 0.25, 1 / 0.75, "judgement"),
        (15000.0, 0.30, 1 / 0.70, "judgement"),
        (16000.0, 0.32, 1 / 0.68, "exceeds"),
    ],
)
def test_second_order(building, gravity, theta, factor, verdict):
    """4.4.2.2(2) to (4)."""
    shear, drift = np.array([500.0, 400.0, 200.0]), np.array([0.04, 0.03, 0.02])
    found = edition().second_order(building(), np.array([gravity, 1000.0, 300.0]), shear, drift)
    # upper storeys: 1000 × 0.03/(400 × 3), 300 × 0.02/(200 × 3)
    assert found.theta == pytest.approx([theta, 0.025, 0.01], rel=1e-12)
    assert found.drift.tolist() == drift.tolist()
    assert found.factor == pytest.approx([factor, 1.0, 1.0], rel=1e-12)
    assert (found.verdict, found.ignore_up_to, found.limit) == (verdict, 0.1, 0.3)


def test_screens(building):
    """4.2.3.3 gives no number for stiffness and mass: the numbers are shown."""
    screens = edition().irregularities(building(), np.array([9e4, 6e4, 5e4]), np.zeros(3))
    by_name = {s.name: s for s in screens}
    stiffness, mass = by_name["stiffness along the height"], by_name["mass along the height"]
    # 9/6 = 1.5, 6/5 = 1.2; 2000/2000 and 1000/2000
    assert (stiffness.verdict, mass.verdict) == ("judgement", "judgement")
    assert "1.20 to 1.50" in stiffness.text
    assert "0.50 to 1.00" in mass.text
    assert "times 0.8" in stiffness.consequence
    others = [s for s in screens if s not in (stiffness, mass)]
    assert {s.verdict for s in others} == {"not assessed"}
    assert all(s.text.startswith("missing: ") for s in others)


def test_one_storey_is_even_along_its_height(building):
    screens = edition().irregularities(building(height=(4.0,), weight=(900.0,)), np.array([9e4]), np.zeros(1))
    assert [s.text for s in screens[:2]] == ["one storey", "one storey"]


def test_separation():
    assert edition().separation(0.125) == (0.125, "4.4.2.7(2)")


def test_where_the_lower_bound_governs_its_relation_says_so():
    # at 3 s the branch gives 0.25 × 1.2 × 2.5/3 × 0.5 × 2/9 = 0.0278 of g, the bound 0.2 × 0.25 = 0.05
    _, branch, bound = edition().ordinate_relation("x", 3.0)
    assert branch.quantity == "Branch of the period, below the lower bound"
    assert branch.result.value == pytest.approx(0.25 / 9 * G, rel=1e-12)
    assert bound.relation == "S_d = β a_g, the lower bound, which governs"
    assert bound.result.value == pytest.approx(0.05 * G, rel=1e-12)
    _, branch = edition().ordinate_relation("x", 2.2)
    assert branch.relation == "S_d = a_g S (2.5/q) T_C T_D/T², for T > T_D"


def test_the_corners_of_the_spectrum_stand_among_the_values():
    a_g, plateau = edition(importance_class="III").ordinate_relation("x", 0.3)
    assert a_g.result.value == pytest.approx(1.2 * 0.25 * G, rel=1e-14)
    assert [v.value for v in plateau.values[1:]] == [1.2, 3.0, 0.15, 0.3, 0.5]
