"""What ASCE/SEI 7-16 and 7-22 share, clause by clause, numbers worked by hand (clauses from memory)."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.asce7_22 import ASCE722
from calcsheet.core.errors import ModelError

G = 9.80665
T_A = 0.0466 * 10**0.9  # 0.370 s: concrete moment frame of 10 m
LONGEST = 1.4 * T_A  # 0.518 s


@pytest.fixture(params=[ASCE716, ASCE722])
def edition(request):
    """S_DS = 1.0, S_D1 = 0.6, S_1 = 0.5 (category D), I_e = 1; R = 8 and 5, C_d = 5.5 and 4."""
    given = {
        "s_ds": 1.0, "s_d1": 0.6, "s_1": 0.5, "t_l": 8.0, "site_class": "C", "risk_category": "II", "r_x": 8.0, "r_y": 5.0,
        "c_d_x": 5.5, "c_d_y": 4.0, "system_x": "concrete moment frame", "system_y": "other", "height_unit": "m",
    }  # fmt: skip
    return lambda **changed: request.param(**(given | changed))


@pytest.mark.parametrize(
    ("s_ds", "s_d1", "s_1", "ordinary", "essential"),
    [
        # Tables 11.6-1 and 11.6-2, the worse of both; 0.75 of S_1 before either
        (0.16, 0.06, 0.1, "A", "A"),
        (0.167, 0.06, 0.1, "B", "C"),
        (0.16, 0.067, 0.1, "B", "C"),
        (0.32, 0.14, 0.1, "C", "D"),
        (0.33, 0.10, 0.1, "C", "D"),
        (0.49, 0.19, 0.1, "C", "D"),
        (0.50, 0.10, 0.1, "D", "D"),
        (0.40, 0.20, 0.74, "D", "D"),
        (1.20, 0.80, 0.75, "E", "F"),
    ],
)
def test_seismic_design_category(edition, s_ds, s_d1, s_1, ordinary, essential):
    """11.6."""
    values = {"s_ds": s_ds, "s_d1": s_d1, "s_1": s_1}
    assert [edition(**values, risk_category=c).category for c in ("I", "II", "III")] == [ordinary] * 3
    assert edition(**values, risk_category="IV").category == essential


def test_category_a_asks_for_little(edition, building):
    answer = edition(s_ds=0.1, s_d1=0.05).permitted(building())
    assert "no more than 11.7" in answer.text
    assert "11.7" not in edition().permitted(building()).text


def test_two_period_spectrum(edition):
    """T_0 = 0.12 s, T_S = 0.6 s: 0.4 + 0.6 × 0.5 at 0.06 s, 0.6/1.5, 0.6 × 8/16²."""
    found = edition().two_period(np.array([0.0, 0.06, 0.12, 0.6, 1.5, 8.0, 16.0]))
    assert found == pytest.approx([0.4, 0.7, 1.0, 1.0, 0.4, 0.075, 0.01875], rel=1e-12)


def test_ordinates_are_divided_by_r_over_i(edition):
    """12.9.1.2: 1.0 g over 8/1.25 and 5/1.25."""
    found = edition(risk_category="III")
    assert found.ordinates("x", np.array([0.3])) == pytest.approx([G * 1.25 / 8], rel=1e-12)
    assert found.ordinates("y", np.array([0.3])) == pytest.approx([G * 1.25 / 5], rel=1e-12)
    assert found.elastic_ordinates("x", np.array([0.3])) is None


def test_t_l_below_t_s_is_refused(edition):
    with pytest.raises(ModelError, match=r"^t_l: got 0\.5 s with T_S = 0\.6 s; must be above T_S = S_D1/S_DS$"):
        edition(t_l=0.5)


@pytest.mark.parametrize(
    ("s_d1", "c_u"),
    [(0.05, 1.7), (0.1, 1.7), (0.12, 1.66), (0.15, 1.6), (0.2, 1.5), (0.25, 1.45), (0.3, 1.4), (0.9, 1.4)],
)
def test_upper_limit_of_the_period(edition, s_d1, c_u):
    """Table 12.8-1, straight lines between; 1.4 beyond."""
    assert edition(s_d1=s_d1).limit_of_period() == pytest.approx(c_u, rel=1e-12)


@pytest.mark.parametrize(
    ("changed", "coefficient", "governing", "number"),
    [
        ({}, 1.0 / 8, "S_DS/(R/I_e)", "12.8-2"),
        ({"s_d1": 0.3}, 0.3 / (LONGEST * 8), "S_D1/(T R/I_e)", "12.8-3"),
        ({"s_d1": 0.3, "t_l": 0.4}, 0.3 * 0.4 / (LONGEST**2 * 8), "S_D1 T_L/(T² R/I_e)", "12.8-4"),
        # S_D1 = 0.1: C_u = 1.7 and 0.1/(0.629 × 8) = 0.020
        ({"s_d1": 0.1}, 0.044 * 1.0 * 1.0, "0.044 S_DS I_e", "12.8-5"),
        ({"s_d1": 0.1, "risk_category": "IV"}, 0.044 * 1.0 * 1.5, "0.044 S_DS I_e", "12.8-5"),
        # 0.044 × 0.2 = 0.0088 and 0.05/(0.629 × 8) = 0.00993
        ({"s_ds": 0.2, "s_d1": 0.05, "s_1": 0.05}, 0.01, "0.01", "12.8-5"),
        ({"s_d1": 0.1, "s_1": 0.8}, 0.5 * 0.8 / 8, "0.5 S_1/(R/I_e)", "12.8-6"),
        ({"s_d1": 0.1, "s_1": 0.8, "risk_category": "IV"}, 0.5 * 0.8 * 1.5 / 8, "0.5 S_1/(R/I_e)", "12.8-6"),
        # below 0.6 that bound is not asked for, though 0.5 × 0.59/5 = 0.059 is above 0.044
        ({"s_d1": 0.1, "s_1": 0.59, "r_x": 5.0}, 0.044, "0.044 S_DS I_e", "12.8-5"),
        ({"s_d1": 0.1, "s_1": 0.6, "r_x": 5.0}, 0.5 * 0.6 / 5, "0.5 S_1/(R/I_e)", "12.8-6"),
    ],
)
def test_static_base_shear_and_its_bounds(edition, building, worked, changed, coefficient, governing, number):
    """12.8.1.1, with the period held to C_u T_a."""
    found = edition(**changed)
    static = found.static(building(period=0.9))
    assert static.coefficient == pytest.approx(coefficient, rel=1e-12)
    assert static.shear == pytest.approx(coefficient * 5000.0, rel=1e-12)
    assert static.governing == governing
    *_, response, shear = static.relations
    assert worked(response) == pytest.approx(coefficient, rel=1e-12)
    assert worked(shear) == pytest.approx(coefficient * 5000.0, rel=1e-12)
    assert (f"({number})" in response.clause) == (found.name == "ASCE/SEI 7-16")


def test_the_period_is_held_to_c_u_t_a(edition, building):
    """12.8.2."""
    long, short = edition().static(building(period=0.9)), edition().static(building(period=0.45))
    assert long.approximate_period == pytest.approx(T_A, rel=1e-14)
    assert long.period_limit == pytest.approx(LONGEST, rel=1e-14)
    assert (long.period, short.period) == (long.period_limit, 0.45)


@pytest.mark.parametrize(
    ("system", "feet", "metres"),
    [
        ("steel moment frame", 0.028 * (10 / 0.3048) ** 0.8, 0.0724 * 10**0.8),
        ("concrete moment frame", 0.016 * (10 / 0.3048) ** 0.9, 0.0466 * 10**0.9),
        ("eccentric or buckling-restrained braces", 0.03 * (10 / 0.3048) ** 0.75, 0.0731 * 10**0.75),
        ("other", 0.02 * (10 / 0.3048) ** 0.75, 0.0488 * 10**0.75),
    ],
)
def test_approximate_period(edition, building, worked, system, feet, metres):
    """Table 12.8-2 in both units."""
    for unit, period in (("ft", feet), ("m", metres)):
        static = edition(system_x=system, height_unit=unit).static(building())
        assert static.approximate_period == pytest.approx(period, rel=1e-12)
        assert worked(static.relations[0]) == pytest.approx(period, rel=1e-12)


def test_distribution(edition, building):
    """12.8.3: at 1.5 s k = 1 + (1.5 - 0.5)/2 = 1.5; 2000 × 4^1.5 = 16000, 2000 × 7^1.5 = 37040.5, 1000 × 10^1.5 = 31622.8."""
    found = edition(s_d1=0.1, t_l=4.0)
    facts = building(height=(16.0, 28.0, 40.0), period=1.5)  # C_u T_a = 1.7 × 0.0466 × 40^0.9 = 2.19 s
    static = found.static(facts)
    assert static.period == 1.5
    force, _ = found.distribution(facts, static)
    parts = np.array([16000.0, 2000 * 7**1.5, 1000 * 10**1.5])
    assert force == pytest.approx(static.shear * parts / parts.sum(), rel=1e-12)
    assert [found.exponent(t) for t in (0.2, 0.5, 1.0, 2.5, 4.0)] == [1.0, 1.0, 1.25, 2.0, 2.0]


def test_forces_are_scaled_to_the_static_base_shear(edition, building):
    """12.9.1.4.1: 625 kN over 500; drifts are not."""
    facts, found = building(period=0.9), edition()
    scaling = found.scaling(facts, 500.0, found.static(facts))
    assert (scaling.forces, scaling.drifts) == (pytest.approx(1.25, rel=1e-12), 1.0)
    assert "drifts are not" in scaling.text


def test_drifts_are_scaled_where_the_near_fault_bound_governs(edition, building):
    """12.9.1.4.2: 0.5 × 0.8/8 × 5000 = 250 kN over 200."""
    facts, found = building(period=0.9), edition(s_d1=0.1, s_1=0.8)
    scaling = found.scaling(facts, 200.0, found.static(facts))
    assert (scaling.forces, scaling.drifts) == (pytest.approx(1.25, rel=1e-12), pytest.approx(1.25, rel=1e-12))
    assert "0.5 S_1/(R/I_e) governs" in scaling.text
    # with S_1 at 0.8 and the plateau above the bound, 0.125 against 0.05, drifts stay
    plateau = edition(s_1=0.8)
    assert plateau.scaling(facts, 500.0, plateau.static(facts)).drifts == 1.0


def test_nothing_is_scaled_down(edition, building):
    facts, found = building(period=0.9), edition(s_d1=0.1, s_1=0.8)
    scaling = found.scaling(facts, 251.0, found.static(facts))
    assert (scaling.forces, scaling.drifts) == (1.0, 1.0)
    assert "nothing is scaled" in scaling.text


def test_design_drift(edition):
    """12.8.6: C_d/I_e."""
    assert edition().drift("x").value == 5.5
    assert edition().drift("y").value == 4.0
    assert edition(risk_category="IV").drift("x").value == pytest.approx(5.5 / 1.5, rel=1e-14)


@pytest.mark.parametrize(
    ("structure", "shares"),
    [
        ("other", (0.020, 0.020, 0.015, 0.010)),
        ("low with accommodating finishes", (0.025, 0.025, 0.020, 0.015)),
        ("masonry cantilever walls", (0.010, 0.010, 0.010, 0.010)),
        ("other masonry walls", (0.007, 0.007, 0.007, 0.007)),
    ],
)
def test_allowable_drift(edition, building, structure, shares):
    """Table 12.12-1, storeys of 4, 3 and 3 m."""
    for category, share in zip(("I", "II", "III", "IV"), shares, strict=True):
        limit, relation = edition(structure=structure, risk_category=category).drift_limit(building("y"))
        assert limit == pytest.approx([4 * share, 3 * share, 3 * share], rel=1e-14)
        assert "12.12-1" in relation.clause


def test_redundancy_tightens_the_drift_of_moment_frames(edition, building):
    """12.12.1.1: 0.020 × 4/1.3 in categories D to F, for moment frames."""
    assert edition(rho=1.3).drift_limit(building("x"))[0][0] == pytest.approx(0.08 / 1.3, rel=1e-14)
    assert edition(rho=1.3).drift_limit(building("y"))[0][0] == pytest.approx(0.08, rel=1e-14)
    mild = edition(rho=1.3, s_ds=0.4, s_d1=0.15)
    assert (mild.category, mild.drift_limit(building("x"))[0][0]) == ("C", pytest.approx(0.08, rel=1e-14))


def test_accommodating_finishes_go_with_four_storeys(edition, building):
    found = edition(structure="low with accommodating finishes")
    four = building(height=(4.0, 7.0, 10.0, 13.0), weight=(500.0,) * 4)
    assert found.drift_limit(four)[0][0] == pytest.approx(0.1, rel=1e-14)
    five = building(height=(4.0, 7.0, 10.0, 13.0, 16.0), weight=(500.0,) * 5)
    with pytest.raises(ModelError) as caught:
        found.drift_limit(five)
    message = 'structure: got "low with accommodating finishes" with 5 storeys; goes with up to four storeys'
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("changed", "gravity", "theta", "limit", "factor", "verdict"),
    [
        # θ = P × (0.044/5.5)/(400 × 4) = P/200000; θ_max = 0.5/(β 5.5) up to 0.25
        ({}, 16000.0, 0.08, 0.5 / 5.5, 1.0, "passes"),
        ({}, 19000.0, 0.095, 0.5 / 5.5, 1.0, "exceeds"),
        ({"shear_ratio": 0.5}, 20000.0, 0.10, 1 / 5.5, 1.0, "passes"),
        ({"shear_ratio": 0.5}, 30000.0, 0.15, 1 / 5.5, 1 / 0.85, "passes"),
        ({"shear_ratio": 0.5}, 40000.0, 0.20, 1 / 5.5, 1.25, "exceeds"),
        ({"shear_ratio": 0.2}, 48000.0, 0.24, 0.25, 1 / 0.76, "passes"),
        # I_e = 1.5: the same drift stands for 1.5 times the elastic one of I_e = 1
        ({"risk_category": "IV"}, 10000.0, 0.075, 0.5 / 5.5, 1.0, "passes"),
    ],
)
def test_second_order(edition, building, changed, gravity, theta, limit, factor, verdict):
    """12.8.7: θ = P Δ I_e/(V h C_d)."""
    shear, drift = np.array([400.0, 300.0, 200.0]), np.array([0.044, 0.033, 0.022])
    found = edition(**changed).second_order(building(), np.array([gravity, 1000.0, 500.0]), shear, drift)
    assert found.theta[0] == pytest.approx(theta, rel=1e-12)
    assert found.drift * (5.5 / (1.5 if changed.get("risk_category") == "IV" else 1.0)) == pytest.approx(drift)
    assert found.factor == pytest.approx([factor, 1.0, 1.0], rel=1e-12)
    assert found.limit == pytest.approx(limit, rel=1e-12)
    assert (found.verdict, found.ignore_up_to) == (verdict, 0.1)


def test_close_modes_are_a_matter_of_judgement(edition):
    """12.9.1.3 gives no number."""
    assert edition().independent(np.array([1.0, 0.89])).verdict == "passes"
    assert edition().independent(np.array([1.0, 0.91])).verdict == "judgement"


def test_torsion_and_separation(edition):
    factor, answer = edition().torsion("x")
    assert (factor, answer.verdict) == (None, "not assessed")
    assert edition().separation(0.12)[0] == 0.12
