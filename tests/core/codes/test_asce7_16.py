"""ASCE/SEI 7-16: what the site class asks for (11.4.8, from memory)."""

from __future__ import annotations

import pytest

from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.errors import ModelError


def edition(**changed) -> ASCE716:
    given = {
        "s_ds": 1.0, "s_d1": 0.6, "s_1": 0.5, "t_l": 8.0, "site_class": "D", "risk_category": "II", "r_x": 8.0, "r_y": 5.0,
        "c_d_x": 5.5, "c_d_y": 4.0, "system_x": "concrete moment frame", "system_y": "other", "height_unit": "m",
    }  # fmt: skip
    return ASCE716(**(given | changed))


@pytest.mark.parametrize(
    ("site", "s_1", "motion", "verdict", "words"),
    [
        ("A", 0.5, "code tables", "passes", "no study"),
        ("C", 0.9, "code tables", "passes", "no study"),
        ("D", 0.19, "code tables", "passes", "no study"),
        ("D", 0.20, "code tables", "judgement", "unless an exception is taken"),
        ("D", 0.50, "C_s increased", "passes", "no study"),
        ("D", 0.50, "S_D1 increased", "passes", "no study"),
        ("D", 0.50, "site-specific study", "passes", "no study"),
        ("E", 0.19, "code tables", "judgement", "S_S ≥ 1.0"),
        ("E", 0.20, "code tables", "judgement", "its exception is static alone"),
        ("E", 0.50, "site-specific study", "passes", "no study"),
        ("F", 0.10, "code tables", "judgement", "site response analysis"),
        ("F", 0.10, "site-specific study", "passes", "no study"),
    ],
)
def test_the_gate_by_site_class(building, site, s_1, motion, verdict, words):
    answer = edition(site_class=site, s_1=s_1, ground_motion=motion).permitted(building())
    assert answer.verdict == verdict
    assert words in answer.text
    assert "11.4.8" in answer.clause


@pytest.mark.parametrize(
    ("period", "coefficient", "governing"),
    [
        # T_S = 0.6 s: the plateau goes on to 1.5 T_S = 0.9 s, then 1.5 × 0.6/(T × 8), then 1.5 × 0.6 × 8/(T² × 8)
        (0.5, 0.125, "S_DS/(R/I_e)"),
        (0.85, 0.125, "S_DS/(R/I_e)"),
        (1.2, 1.5 * 0.6 / (1.2 * 8), "1.5 S_D1/(T R/I_e)"),
        (8.2, 1.5 * 0.6 * 8 / (8.2**2 * 8), "0.044 S_DS I_e"),  # 0.0134 against 0.044
    ],
)
def test_c_s_with_the_exception_of_site_class_d(period, coefficient, governing):
    """11.4.8, exception 2."""
    found = edition(ground_motion="C_s increased").coefficient(period, 8.0)
    assert found == (pytest.approx(max(coefficient, 0.044), rel=1e-12), governing)
    assert edition().coefficient(1.2, 8.0)[0] == pytest.approx(0.6 / (1.2 * 8), rel=1e-12)


def test_its_relation_says_so(building, worked):
    found = edition(ground_motion="C_s increased", system_x="steel moment frame")
    tall = building(height=(20.0, 40.0, 60.0), period=5.0)
    # T = 1.4 × 0.0724 × 60^0.8 = 2.68 s
    period = 1.4 * 0.0724 * 60**0.8
    static = found.static(tall)
    response = static.relations[-2]
    # 1.5 × 0.6/(2.68 × 8) = 0.0419 is below 0.044: R = 5 brings it above
    assert static.governing == "0.044 S_DS I_e"
    static = edition(ground_motion="C_s increased", system_x="steel moment frame", r_x=5.0).static(tall)
    response = static.relations[-2]
    assert response.relation == "C_s = 1.5 S_D1/(T R/I_e)"
    assert worked(response) == pytest.approx(1.5 * 0.6 / (period * 5), rel=1e-12)
    assert response.clause == "12.8.1.1, Eq. (12.8-3), 11.4.8"


@pytest.mark.parametrize("motion", ["C_s increased", "S_D1 increased"])
def test_the_exceptions_are_for_site_class_d(motion):
    with pytest.raises(ModelError) as caught:
        edition(ground_motion=motion, site_class="C")
    assert str(caught.value) == f'ground_motion: got "{motion}" with site class "C"; goes with site class D'
