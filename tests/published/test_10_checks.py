"""Drift limits, second order and vertical irregularities.

Sources: EN 1998-1:2004 4.4.2.2 and 4.4.3.2, ASCE/SEI 7 12.8.7 and Table 12.12-1, IS 1893 (Part 1) 7.11.1 (from memory);
N. Taly, Design of Reinforced Masonry Structures, 2nd edition (2010), Table 7.7.
"""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.common import amplified, heavier, softer, stability
from calcsheet.core.codes.edition import Facts
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.codes.is1893_2016 import IS1893

ASCE = ASCE716(
    s_ds=1.0, s_d1=0.6, s_1=0.5, t_l=8.0, site_class="C", risk_category="II", r_x=8.0, r_y=8.0, c_d_x=5.5, c_d_y=5.5,
    system_x="other", system_y="other", shear_ratio=0.2,
)  # fmt: skip
EN = EN1998(
    ground_acceleration=0.25, spectrum=1, ground="B", importance_class="II", q_x=3.0, q_y=3.0, system_x="other",
    system_y="other", elements="brittle",
)  # fmt: skip
IS = IS1893(
    zone="IV", soil="hard", importance_value=1.0, r_x=5.0, r_y=5.0, system_x="concrete moment frame",
    system_y="concrete moment frame",
)  # fmt: skip


def storeys(height: float, n: int = 1) -> Facts:
    return Facts("x", 1.0, height * np.arange(1.0, n + 1.0), np.full(n, height), np.full(n, 900.0))


def test_drift_limits(case):
    published = case("10-drift-limits")
    facts = storeys(published.inputs["storey_height_mm"] / 1000)

    def limit(edition, **changed):
        return 1000 * dataclasses.replace(edition, **changed).drift_limit(facts)[0][0]

    nu = published.inputs["EC8_nu"]
    elements = ("brittle", "ductile", "none")
    largest = np.array([limit(EN, elements=e, reduction_factor=nu) for e in elements])
    published.meets("EC8_max_dr_mm", largest)
    published.meets("EC8_limit_mm", nu * largest)
    published.meets("EC8_check_dr_nu_mm", nu * published.inputs["design_drift_mm"])
    published.meets("ASCE7_other_structures_II_mm", limit(ASCE))
    published.meets("ASCE7_other_structures_IV_mm", limit(ASCE, risk_category="IV"))
    published.meets("masonry_cantilever_wall_mm", limit(ASCE, structure="masonry cantilever walls"))
    published.meets("other_masonry_wall_mm", limit(ASCE, structure="other masonry walls"))
    published.meets("IS1893_mm", limit(IS))


def test_second_order(case):
    published = case("10-p-delta")
    given = published.inputs
    first = Chain(np.array([given["k_kN_per_m"]], float)).displacement(np.array([[given["V_kN"]]], float))[0, 0]
    theta = stability(*(np.array([v], float) for v in (given["P_kN"], first, given["V_kN"], given["h_m"])))
    published.meets("first_order_drift_m", first)
    published.meets("theta", theta[0])
    published.meets("second_order_drift_m", first * amplified(theta, 0.0)[0])
    softened = Chain(np.array([given["k_kN_per_m"] - given["P_kN"] / given["h_m"]]))
    published.meets("second_order_drift_m", softened.displacement(np.array([[given["V_kN"]]], float))[0, 0])
    published.meets("amplification", amplified(np.array(given["theta_list"]), 0.0))


@pytest.mark.parametrize("step", [-1e-6, 1e-6])
def test_thresholds_of_the_stability_coefficient(case, step):
    """Just below and just above each: V = 100 kN, h = 1 m, and a drift that makes θ = P/100 000."""
    published = case("10-p-delta")
    facts, shear = storeys(1.0), np.array([100.0])
    ignore, to_amplify, most = published.expected["EC8_thresholds"]["value"]
    found = [
        EN.second_order(facts, np.array([1e5 * (theta + step)]), shear, np.array([0.001]))
        for theta in (ignore, to_amplify, most)
    ]
    assert (found[0].factor[0] > 1.0) == (step > 0.0)
    assert found[1].verdict == ("judgement" if step > 0.0 else "passes")
    assert found[2].verdict == ("exceeds" if step > 0.0 else "judgement")
    published.meets("EC8_thresholds", [found[0].ignore_up_to, 0.2, found[0].limit])
    at = published.expected["ASCE7_ignore_up_to"]["value"]
    asce = ASCE.second_order(facts, np.array([1e5 * (at + step)]), shear, np.array([0.001 * 5.5]))
    published.meets("ASCE7_ignore_up_to", asce.ignore_up_to)
    assert (asce.factor[0] > 1.0) == (step > 0.0)


def test_vertical_irregularities(case):
    published = case("10-vertical-irregularity")
    stiffness = np.array(published.inputs["storey_stiffness_from_below"], float)
    mass = np.array(published.inputs["floor_mass_from_below"], float)
    limits = published.expected["thresholds"]["value"]
    published.meets("k1_over_k2", stiffness[0] / stiffness[1])
    published.meets("k1_over_mean_three_above", stiffness[0] / stiffness[1:4].mean())

    def from_one(found):
        return [i + 1 for i in found]

    published.meets("storeys_soft", from_one(softer(stiffness, limits["soft_above"], limits["soft_three_above"])))
    extreme = softer(stiffness, limits["extreme_above"], limits["extreme_three_above"])
    published.meets("storeys_extreme_soft", from_one(extreme))
    published.meets("floors_mass_irregular", from_one(heavier(mass, limits["mass_adjacent"])))
    # and by the edition, with drift ratios that allow no exception
    facts = Facts("x", 1.0, 3.0 * np.arange(1.0, 7.0), np.full(6, 3.0), mass)
    screens = {
        s.name: s for s in ASCE.irregularities(facts, stiffness, np.array([9.0, 3.0, 3.0, 3.0, 3.0, 3.0]) / 1000)
    }
    assert screens["soft storey"].text == screens["extreme soft storey"].text == "storey 1 from the base"
    assert screens["weight"].text == "level 3 from the base"
    assert {screens[n].verdict for n in ("soft storey", "extreme soft storey", "weight")} == {"exceeds"}
