"""Drifts of two storeys, 200 t and 100 t on 2k and k, k = 50 000 kN/m, storeys of 4 m and 3 m, worked by hand.

On a plateau of ordinate A and by SRSS: shears √(800² + 100²)/3 A and √(400² + 100²)/3 A over stiffnesses of 1e5 and 5e4.
"""

from __future__ import annotations

import math

import pytest

from calcsheet.steps.step import key_of

G = 9.80665
SHEAR = (math.sqrt(800**2 + 100**2) / 3, math.sqrt(400**2 + 100**2) / 3)  # 268.74 and 137.44, times A
DRIFT = (SHEAR[0] / 1e5, SHEAR[1] / 5e4)
TOP = math.sqrt((800 / 1e5 + 400 / 5e4) ** 2 + (100 / 1e5 - 100 / 5e4) ** 2) / 3
SRSS = ("edition =", 'combination = "SRSS"\nedition =')
EN_A, ASCE_A, IS_A = 0.2 * G * 1.2 * 2.5 / 3.0, G / 8.0, 0.24 / 2 * 1.2 / 5 * 2.5 * G
STOREYS = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]{more}
Roof,3,100,50000,80000{roof}
1,4,200,{k},160000{first}
"""


def storeys(upper=None, lower=None, k=100000):
    """The two storeys with gravity loads [kN], or none."""
    if upper is None:
        return STOREYS.format(more="", roof="", first="", k=k)
    return STOREYS.format(more=",gravity load [kN]", roof=f",{upper}", first=f",{lower}", k=k)


def drift(job, direction=0):
    payload = job.payload("drift")
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]["directions"][direction]


def cautions(job):
    return {key_of(c["kind"], c["subject"]): c for c in job.payload("drift")["cautions"]}


@pytest.mark.parametrize(
    ("basis", "ordinate", "factor", "limit", "separation"),
    [
        ("EN", EN_A, 3.0, (0.0075 / 0.5 * 4, 0.0075 / 0.5 * 3), 1.0),
        ("7-16", ASCE_A, 5.5, (0.02 * 4, 0.02 * 3), 1.0),
        ("7-22", ASCE_A, 5.5, (0.02 * 4, 0.02 * 3), 1.0),
        ("IS", IS_A, 1.0, (0.004 * 4, 0.004 * 3), 5.0),
        ("points", G, 1.0, (0.01 * 4, 0.01 * 3), None),
    ],
)
def test_design_drifts_and_limits(demand_job, basis, ordinate, factor, limit, separation):
    job = demand_job(basis, SRSS)
    found = drift(job)
    assert found["elastic"] == pytest.approx([d * ordinate for d in DRIFT], rel=1e-9)
    assert found["design"] == pytest.approx([factor * d * ordinate for d in DRIFT], rel=1e-9)
    assert found["displacement"][1] == pytest.approx(factor * TOP * ordinate, rel=1e-9)
    assert found["limit"] == pytest.approx(limit, rel=1e-12)
    assert found["share"] == pytest.approx([factor * d * ordinate / m for d, m in zip(DRIFT, limit, strict=True)])
    assert found["worst"] == 1  # 3 m against 4 m at about one drift
    assert found["capped"] is False
    if separation is None:
        assert found["separation"] is None
    else:
        assert found["separation"] == pytest.approx(separation * factor * TOP * ordinate, rel=1e-9)
    assert found["stiffness"] == pytest.approx([1e5, 5e4], rel=1e-9)
    line = next(
        one
        for one in job.payload("drift")["lines"]
        if one["quantity"].startswith('Design drift, storey below level "Roof"')
    )
    assert line["result"]["value"] == pytest.approx(factor * DRIFT[1] * ordinate, rel=1e-9)


def test_drifts_stiffness_and_theta_are_those_of_the_set_that_serves_drifts(demand_job):
    # forces at 0.6 k, drifts at k; still on the plateau up to T_S = 0.6 s
    job = demand_job("7-16", SRSS, card=[('forces = "gross"', 'forces = "cracked"')])
    found = drift(job)
    assert job.payload("drift")["result"]["stiffness"] == "gross"
    assert found["elastic"] == pytest.approx([d * ASCE_A for d in DRIFT], rel=1e-9)
    assert found["stiffness"] == pytest.approx([1e5, 5e4], rel=1e-9)
    assert found["second_order"]["theta"] == pytest.approx([2900 / (1e5 * 4), 950 / (5e4 * 3)], rel=1e-9)


def test_asce_with_risk_and_redundancy(demand_job):
    # risk III: I_e = 1.25, C_d/I_e = 4.4 on ordinates times 1.25; 0.015 h over ρ = 1.3 for a moment frame in category D
    changes = (('risk_category = "II"', 'risk_category = "III"\nrho = 1.3'), SRSS)
    found = drift(demand_job("7-16", *changes))
    assert found["design"] == pytest.approx([4.4 * d * 1.25 * ASCE_A for d in DRIFT], rel=1e-9)
    assert found["limit"] == pytest.approx([0.015 * 4 / 1.3, 0.015 * 3 / 1.3], rel=1e-12)


def test_drifts_scaled_near_a_fault_and_theta_not(demand_job):
    changes = (("s_ds = 1.0", "s_ds = 0.3"), ("s_d1 = 0.6", "s_d1 = 0.12"), ("s_1 = 0.4", "s_1 = 0.7"), SRSS)
    found = drift(demand_job("7-16", *changes))
    scale = 0.04375 * 300 / (0.0375 * SHEAR[0])
    assert found["scale"] == pytest.approx(scale, rel=1e-9)
    assert found["design"] == pytest.approx([scale * 5.5 * d * 0.3 * ASCE_A for d in DRIFT], rel=1e-9)
    assert found["displacement"][1] == pytest.approx(scale * 5.5 * TOP * 0.3 * ASCE_A, rel=1e-9)
    assert found["second_order"]["theta"] == pytest.approx([2900 / (1e5 * 4), 950 / (5e4 * 3)], rel=1e-9)


def test_displacements_need_not_exceed_the_elastic_spectrums(demand_job):
    # q_d = 4 on S_e/3 would give 4/3 of the elastic spectrum's
    found = drift(demand_job("EN", ("q_x = 3", "q_x = 3\nq_d_x = 4"), SRSS))
    assert found["capped"] is True
    assert found["factor"]["value"] == 4.0
    assert found["design"] == pytest.approx([3.0 * d * EN_A for d in DRIFT], rel=1e-9)
    assert found["displacement"][1] == pytest.approx(3.0 * TOP * EN_A, rel=1e-9)
    below = drift(demand_job("EN", ("q_x = 3", "q_x = 3\nq_d_x = 2"), SRSS, name="below"))
    assert below["capped"] is False
    assert below["design"] == pytest.approx([2.0 * d * EN_A for d in DRIFT], rel=1e-9)


def test_a_capped_drift_has_its_own_worked_line(demand_job):
    lines = demand_job("EN", ("q_x = 3", "q_x = 3\nq_d_x = 4"), SRSS).payload("drift")["lines"]
    found = {one["quantity"]: one for one in lines}
    line = found['Design drift, storey below level "Roof", x']
    assert line["relation"] == "drift of the elastic spectrum × scale × second order"
    assert line["numbers"][0]["value"] == pytest.approx(3.0 * DRIFT[1] * EN_A, rel=1e-9)
    assert (
        found['Design drift, storey below level "Roof", y']["relation"] == "q_d × elastic drift × scale × second order"
    )


# ---- second order ------------------------------------------------------------------------------------------------------


def test_asce_amplifies_above_a_tenth(demand_job):
    # θ = P/(k h), as drift over shear is 1/k in each storey: 50 000/(1e5 × 4) = 0.125, 9000/(5e4 × 3) = 0.06
    changes = (("c_d_x = 5.5", "c_d_x = 2.5\nshear_ratio = 0.5"), SRSS)  # limit 0.5/(0.5 × 2.5) = 0.4, at most 0.25
    job = demand_job("7-16", *changes, storeys=storeys(9000, 41000))
    found, second = drift(job), drift(job)["second_order"]
    assert found["gravity"] == [50000.0, 9000.0]
    assert second["theta"] == pytest.approx([0.125, 0.06], rel=1e-9)
    assert second["limit"] == 0.25
    assert second["factor"] == pytest.approx([1 / 0.875, 1.0], rel=1e-9)
    assert second["drift"] == pytest.approx([d * ASCE_A for d in DRIFT], rel=1e-9)
    assert found["design"] == pytest.approx([2.5 * DRIFT[0] * ASCE_A / 0.875, 2.5 * DRIFT[1] * ASCE_A], rel=1e-9)
    # whatever stands on the amplified storey moves with it
    assert found["displacement"] == pytest.approx(
        [2.5 * DRIFT[0] * ASCE_A / 0.875, 2.5 * TOP * ASCE_A / 0.875], rel=1e-9
    )
    assert found["separation"] == pytest.approx(2.5 * TOP * ASCE_A / 0.875, rel=1e-9)
    raised = cautions(job)["second-order-x"]
    assert not raised["answer"]
    assert raised["numbers"][0]["value"] == pytest.approx(0.125, rel=1e-9)


@pytest.mark.parametrize(
    ("lower", "theta", "verdict", "factor", "answer"),
    [
        (9000, 0.09, "passes", 1.0, None),  # θ = 3 P/(k h): 3 × 12 000/4e5
        (17000, 0.15, "passes", 1 / 0.85, False),
        (30333.333333333332, 0.25, "judgement", 1 / 0.75, True),
        (43666.666666666664, 0.35, "exceeds", 1 / 0.65, True),
    ],
)
def test_en_in_its_four_ranges(demand_job, lower, theta, verdict, factor, answer):
    job = demand_job("EN", SRSS, storeys=storeys(3000, lower))
    second = drift(job)["second_order"]
    assert second["theta"] == pytest.approx([theta, 3 * 3000 / (5e4 * 3)], rel=1e-9)
    assert second["verdict"] == verdict
    assert second["factor"] == pytest.approx([factor, 1.0], rel=1e-9)
    raised = cautions(job).get("second-order-x")
    assert (raised and raised["answer"]) is answer
    line = next(
        one
        for one in job.payload("drift")["lines"]
        if 'stability coefficient, storey below level "1"' in one["quantity"]
    )
    load, moved, shear, height = (n["value"] for n in line["numbers"])
    assert load * moved / (shear * height) == pytest.approx(theta, rel=1e-9)
    assert (load, height) == (pytest.approx(3000 + lower), 4.0)


def test_a_storey_that_cannot_carry_its_load_is_refused(demand_job):
    job = demand_job("EN", SRSS, storeys=storeys(3000, 150000))
    why = "stability coefficient of storey 1 from the base: 1.15; must be below 1: the storey cannot carry its gravity load"
    assert (job.payload("drift")["state"], job.payload("drift")["why"]) == ("refused", why)
    assert job.payload("actions")["why"] == f"waits for drift and second order: {why}"


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22"])
def test_without_gravity_loads_second_order_is_not_assessed(demand_job, basis):
    job = demand_job(basis, storeys=storeys())
    found = drift(job)
    assert found["second_order"] is None
    assert found["second_order_note"] == "gravity load column is missing"
    text = "Second-order effects in x are not assessed: gravity load column is missing."
    assert cautions(job)["no-second-order-x"]["text"] == text
    assert cautions(job)["no-second-order-x"]["answer"]
    assert not any("stability" in line["quantity"] for line in job.payload("drift")["lines"])


@pytest.mark.parametrize("basis", ["IS", "points"])
@pytest.mark.parametrize("loads", [(), (950, 1950)])
def test_an_edition_without_second_order_says_so_with_and_without_loads(demand_job, basis, loads):
    job = demand_job(basis, storeys=storeys(*loads))
    found = drift(job)
    assert (found["second_order"], found["second_order_note"]) == (None, "not in this edition")
    assert not any(key.startswith("no-second-order") for key in cautions(job))


# ---- limits and screens ------------------------------------------------------------------------------------------------


def test_a_drift_beyond_its_limit_names_the_level_and_asks_for_an_answer(demand_job):
    found = demand_job("EN", SRSS, ("ground_acceleration = 0.2", "ground_acceleration = 0.6"))
    raised = cautions(found)["drift-exceeds-x"]  # three times 0.3594
    assert raised["answer"]
    assert raised["numbers"][0]["value"] == pytest.approx(3 * DRIFT[1] * 3 * EN_A / 0.045, rel=1e-9)
    assert raised["text"] == 'The drift in x exceeds its limit: {0} of it, in the storey below "Roof".'
    assert not any(key.startswith("drift-exceeds") for key in cautions(demand_job("EN", SRSS, name="within")))


def test_a_soft_storey_asks_for_an_answer(demand_job):
    raised = cautions(demand_job("IS", storeys=storeys(950, 1950, k=49000)))
    assert raised["screen-x-1"]["answer"]
    assert 'softer than the storey above: storey below "1". Dynamic analysis' in raised["screen-x-1"]["text"]
    assert "screen-y-1" not in raised
    assert "screen-x-1" not in cautions(demand_job("IS", storeys=storeys(950, 1950, k=51000), name="stiffer"))


def test_what_the_screens_leave_open_is_one_caution_a_direction(demand_job):
    # 1e5 over 5e4 below the top, weights of 1 over 2; the same in y
    found = cautions(demand_job("EN", SRSS))
    assert {key for key in found if key.startswith("screens-open")} == {"screens-open-x", "screens-open-y"}
    caution = found["screens-open-x"]
    assert not caution["answer"]
    judged, missing = caution["text"].split(" Not assessed: ")
    assert judged.startswith("Irregularities in x that the numbers do not decide. Left to judgement: ")
    assert "stiffness along the height (storey stiffness over that above: 2.00 to 2.00" in judged
    assert "mass along the height (level weight over that below: 0.50 to 0.50" in judged
    assert "strength along the height (missing: storey strengths)" in missing
    assert "setbacks (missing: plan dimensions of the levels)" in missing


def test_periods_of_both_directions_are_those_of_the_set_that_serves_forces(demand_job):
    # cracked: 0.6 k in x, 0.5 × 1.6 k in y; gross: 1 and 1.6
    job = demand_job("IS", card=[('forces = "gross"', 'forces = "cracked"')])
    t_x, t_y = (job.payload("modes")["result"]["models"][i]["modes"]["period"][0] for i in (0, 1))
    for i in (0, 1):
        screen = next(s for s in drift(job, i)["screens"] if s["name"] == "first periods of both directions")
        assert screen["text"].startswith(f"{min(t_x, t_y):.3g} s and {max(t_x, t_y):.3g} s")
