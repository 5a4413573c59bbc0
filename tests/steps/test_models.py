"""Sticks, springs at the base and gravity loads in the stiffness through all steps of a job."""

from __future__ import annotations

import math

import numpy as np
import pytest

from calcsheet.steps.replay import replay
from calcsheet.steps.step import key_of

G = 9.80665
STICK = (('kind = "storey chain"', 'kind = "cantilever stick"'),)
WALLS = """\
level,storey height [m],mass [t],bending stiffness x [kN·m²],shear stiffness x [kN],bending stiffness y [kN·m²],gravity load [kN]
Roof,3.2,180,2.2e7,9e5,1.4e7,1900
2,3.4,240,2.9e7,1.2e6,1.9e7,2500
1,4.1,255,2.9e7,1.2e6,1.9e7,2700
"""
SPRINGS = (("[stiffness.gross]", "[base]\ntranslation_x = 8e5\nrocking_x = 6e7\ndamping_x = 0.05\n[stiffness.gross]"),)
IN_STIFFNESS = ("edition =", "second_order_in_stiffness = true\nedition =")
ONE = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,{h},120,20000,24000,{load}
"""


def key(caution):
    return key_of(caution["kind"], caution["subject"])


def result(job, kind):
    payload = job.payload(kind)
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
@pytest.mark.parametrize("card", [STICK, (*STICK, *SPRINGS)], ids=["fixed", "springs"])
@pytest.mark.parametrize("change", [(), (IN_STIFFNESS,)], ids=["first order", "second order"])
def test_every_step_takes_a_stick(demand_job, basis, card, change):
    job = demand_job(basis, *change, card=card, storeys=WALLS)
    for kind in ("storeys", "modes", "participation", "demand", "peaks", "drift", "actions"):
        result(job, kind)
    evidence = [e for p in job.payloads().values() for e in p["evidence"]]
    assert len(evidence) == 14
    assert all(e["within"] for e in evidence)
    assert replay(job.payloads()) == []


def test_the_roof_of_a_uniform_stick_in_one_mode(demand_job):
    # one storey: k = 1/(h³/3EI + h/GA_s) (beam theory)
    one = WALLS.splitlines()[0] + "\nRoof,5.0,150,4.0e6,2.5e5,3.0e6,1500\n"
    job = demand_job("7-16", card=STICK, storeys=one)
    stiffness = (1.0 / (125.0 / (3.0 * 4.0e6) + 5.0 / 2.5e5), 3.0 * 3.0e6 / 125.0)
    for i, k in enumerate(stiffness):
        period = result(job, "modes")["models"][i]["modes"]["period"][0]
        assert period == pytest.approx(2.0 * math.pi * math.sqrt(150.0 / k), rel=1e-12)
        assert result(job, "drift")["directions"][i]["stiffness"][0] == pytest.approx(k, rel=1e-9)


def test_period_lengthening_is_worked_out(demand_job):
    # T/T_fixed = √(1 + k/k_x + k h²/k_θ) (Veletsos and Meek, Earthq. Eng. Struct. Dyn. 3, 1974, from memory)
    job = demand_job("7-16", card=SPRINGS, storeys=ONE.format(h=5.0, load=900))
    x, y = result(job, "modes")["models"]
    wanted = math.sqrt(1.0 + 2.0e4 / 8e5 + 2.0e4 * 25.0 / 6e7)
    assert x["fixed"]["lengthening"] == pytest.approx(wanted, rel=1e-12)
    assert x["fixed"]["period"] == pytest.approx(2.0 * math.pi * math.sqrt(120.0 / 2.0e4), rel=1e-12)
    assert y["fixed"] is None
    (line,) = [li for li in job.payload("modes")["lines"] if "fixed base" in li["quantity"]]
    period, fixed = (n["value"] for n in line["numbers"])
    assert line["result"]["value"] == pytest.approx(period / fixed, rel=1e-14)
    assert {key(c) for c in job.payload("storeys")["cautions"]} >= {"base-springs-x"}


def test_a_base_that_moves_is_in_the_displacement_and_not_in_the_drift(demand_job):
    job = demand_job("7-16", card=SPRINGS, storeys=ONE.format(h=5.0, load=900))
    item = result(job, "peaks")["directions"][0]["drifts"]
    shear = item["shear"][0]
    assert item["drift"][0] == pytest.approx(shear / 2.0e4 + shear * 25.0 / 6e7, rel=1e-10)
    assert item["displacement"][0] == pytest.approx(item["drift"][0] + shear / 8e5, rel=1e-10)


def test_one_storey_in_the_stiffness_is_one_storey_amplified(demand_job):
    # on a plateau V is one and the same, and Δ = V/(k - P/h) = Δ₀/(1 - θ): ASCE's amplification, exact for one storey
    storeys = ONE.format(h=4.0, load=12000)
    once, never = demand_job("7-16", storeys=storeys), demand_job("7-16", IN_STIFFNESS, storeys=storeys, name="second")
    a, b = result(once, "drift")["directions"][0], result(never, "drift")["directions"][0]
    theta = 12000.0 / (4.0 * 20000.0)
    assert a["second_order"]["theta"][0] == pytest.approx(theta, rel=1e-9)
    assert a["second_order"]["factor"][0] == pytest.approx(1.0 / (1.0 - theta), rel=1e-9)
    assert b["second_order"]["theta"][0] == pytest.approx(theta / (1.0 - theta), rel=1e-9)
    assert b["second_order"]["factor"] == [1.0]
    assert b["design"] == pytest.approx(a["design"], rel=1e-9)
    assert b["stiffness"] == pytest.approx([20000.0], rel=1e-9)
    a, b = result(once, "actions")["directions"][0], result(never, "actions")["directions"][0]
    assert b["modal_base_shear"] == pytest.approx(a["modal_base_shear"], rel=1e-9)
    assert b["shear"] == pytest.approx(a["shear"], rel=1e-9)
    assert b["moment"] == pytest.approx(a["moment"], rel=1e-9)
    assert b["amplified"] == pytest.approx([1.0 / (1.0 - theta)], rel=1e-9)


@pytest.mark.parametrize(
    ("load", "verdict"), [(15000, "passes"), (15600, "passes"), (16400, "exceeds"), (40000, "exceeds")]
)
def test_asce_holds_theta_over_one_plus_theta_against_its_limit(demand_job, load, verdict):
    # θ_max = 0.25 at β = 0.25 and less: first-order θ = P/(k h) is θ/(1 + θ) of the second-order drift (algebra)
    change = ("c_d_x = 5.5", "c_d_x = 5.5\nshear_ratio = 0.3636363636363636")
    job = demand_job("7-16", IN_STIFFNESS, change, storeys=ONE.format(h=3.2, load=load))
    second = result(job, "drift")["directions"][0]["second_order"]
    theta = second["theta"][0]
    assert theta / (1.0 + theta) == pytest.approx(load / (20000.0 * 3.2), rel=1e-9)
    assert second["limit"] / (1.0 + second["limit"]) == pytest.approx(0.25, rel=1e-9)
    assert second["verdict"] == verdict
    assert second["factor"] == [1.0]


@pytest.mark.parametrize(
    ("load", "verdict", "said"),
    [
        (1500, "passes", "need not be taken into account"),
        (4600, "passes", "are in the stiffness"),
        (6000, "exceeds", "not allowed"),
    ],
)
def test_en_never_amplifies_what_is_in_the_stiffness(demand_job, load, verdict, said):
    job = demand_job("EN", IN_STIFFNESS, storeys=ONE.format(h=3.2, load=load))
    second = result(job, "drift")["directions"][0]["second_order"]
    elastic = load / 3.2 / (20000.0 - load / 3.2)
    assert second["theta"][0] == pytest.approx(3.0 * elastic, rel=1e-9)
    assert (second["verdict"], second["factor"]) == (verdict, [1.0])
    assert said in second["text"]


def test_a_building_that_buckles_is_refused_by_its_storey(demand_job):
    job = demand_job("7-16", IN_STIFFNESS, storeys=ONE.format(h=3.2, load=70000))
    payload = job.payload("modes")
    assert payload["state"] == "refused"
    assert payload["why"] == (
        'storey below level "Roof": gravity load 70000 kN with an elastic critical load factor of 0.914; must be above 1 '
        "with second-order effects in the stiffness: the building buckles"
    )
    assert job.payload("drift")["state"] == "waiting"


@pytest.mark.parametrize(
    ("load", "raised", "asked"),
    [
        (6000, set(), set()),
        (7000, {"critical-load-x"}, set()),
        (70000, {"critical-load-x", "critical-load-y"}, {"critical-load-x"}),
    ],
)
def test_a_critical_load_that_is_near(demand_job, load, raised, asked):
    # λ = k h/P: 20000 × 3.2 = 64 000 kN in x, 76 800 kN in y (closed form)
    job = demand_job("7-16", storeys=ONE.format(h=3.2, load=load))
    payload = job.payload("modes")
    x = payload["result"]["models"][0]["critical"]
    assert (x["factor"], x["storey"]) == (pytest.approx(64000.0 / load, rel=1e-9), 0)
    found = {key(c): c for c in payload["cautions"] if key(c).startswith("critical")}
    assert found.keys() == raised
    assert {key for key, c in found.items() if c["answer"]} == asked


def test_deformation_that_is_neglected_is_named(demand_job):
    job = demand_job("7-16", card=STICK, storeys=WALLS)
    keys = [key(c) for c in job.payload("storeys")["cautions"]]
    assert keys == ["deformation-neglected-shear-stiffness-y"]


def test_a_jump_of_bending_stiffness(demand_job):
    job = demand_job("7-16", card=STICK, storeys=WALLS.replace("2.2e7", "2.2e5"))
    keys = [key(c) for c in job.payload("storeys")["cautions"]]
    assert "jump-bending-stiffness-x-(gross)-Roof" in keys


def test_modal_moments_hold_the_gravity_loads(demand_job):
    # overturning of two storeys: Σ f h + Σ P Δ with the storeys' gravity loads, mode by mode (statics)
    job = demand_job("7-16", IN_STIFFNESS)
    item = result(job, "peaks")["directions"][0]
    shear, moment = np.array(item["shear"]), np.array(item["moment"])
    load, height, k = np.array([2900.0, 950.0]), np.array([4.0, 3.0]), np.array([1e5, 5e4])
    drift = shear / (k - load / height)[:, None]
    held = shear + (load / height)[:, None] * drift
    np.testing.assert_allclose(moment[1], held[1] * 3.0, rtol=1e-9)
    np.testing.assert_allclose(moment[0], held[1] * 3.0 + held[0] * 4.0, rtol=1e-9)
