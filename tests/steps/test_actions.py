"""Storey actions of two storeys, 200 t and 100 t on 2k and k, k = 50 000 kN/m, storeys of 4 m and 3 m, worked by hand."""

from __future__ import annotations

import json
import math

import pytest

from calcsheet.core.codes.common import up_to_static
from calcsheet.steps.replay import replay

G = 9.80665
W = 300.0 * G
SHEAR = (math.sqrt(800**2 + 100**2) / 3, math.sqrt(400**2 + 100**2) / 3)  # by SRSS, times the ordinate A of the plateau
MOMENT = (math.sqrt((400 + 3200 / 3) ** 2 + (-100 + 400 / 3) ** 2), math.sqrt(400**2 + 100**2))
SRSS = ("edition =", 'combination = "SRSS"\nedition =')
EN_A, ASCE_A, IS_A = 0.2 * G * 1.2 * 2.5 / 3.0, G / 8.0, 0.24 / 2 * 1.2 / 5 * 2.5 * G
SCALE = 300 / SHEAR[0]  # static on the same plateau: 300 t
AMPLIFIED = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,3,100,50000,80000,9000
1,4,200,100000,160000,41000
"""


def actions(job, direction=0):
    payload = job.payload("actions")
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]["directions"][direction]


@pytest.mark.parametrize(
    ("basis", "ordinate", "scale", "static"),
    [
        # F by weight and height: 200 × 4 and 100 × 7 over 1500
        ("EN", EN_A, 1.0, (300 * EN_A * 800 / 1500, 300 * EN_A * 700 / 1500)),
        # k = 1 up to 0.5 s
        ("7-16", ASCE_A, SCALE, (W / 8 * 800 / 1500, W / 8 * 700 / 1500)),
        ("7-22", ASCE_A, SCALE, (W / 8 * 800 / 1500, W / 8 * 700 / 1500)),
        # by h²: 200 × 16 and 100 × 49 over 8100
        ("IS", IS_A, SCALE, (300 * IS_A * 3200 / 8100, 300 * IS_A * 4900 / 8100)),
        ("points", G, 1.0, (0.0, 0.0)),
    ],
)
def test_from_modal_to_design_values(demand_job, basis, ordinate, scale, static):
    found = actions(demand_job(basis, SRSS))
    assert found["modal_base_shear"] == pytest.approx(SHEAR[0] * ordinate, rel=1e-9)
    assert found["scaling"]["forces"] == pytest.approx(scale, rel=1e-9)
    assert found["shear"] == pytest.approx([scale * v * ordinate for v in SHEAR], rel=1e-9)
    assert found["moment"] == pytest.approx([scale * m * ordinate for m in MOMENT], rel=1e-9)
    lower, upper = (scale * v * ordinate for v in SHEAR)
    assert found["equivalent"] == pytest.approx([lower - upper, upper], rel=1e-9)
    assert found["design_base_shear"] == pytest.approx(lower, rel=1e-9)
    assert found["static_force"] == pytest.approx(static, rel=1e-9)
    assert found["weight"] == pytest.approx(W, rel=1e-12)
    assert found["overturning"] == pytest.approx(scale * MOMENT[0] * ordinate / W, rel=1e-9)
    assert found["amplified"] == [1.0, 1.0]


def test_a_scaled_base_shear_is_the_static_one_and_scaling_again_changes_nothing(demand_job):
    for basis in ("7-16", "7-22", "IS"):
        found = actions(demand_job(basis, name=basis))
        assert found["scaling"]["forces"] > 1.0
        assert found["design_base_shear"] == pytest.approx(found["static"]["shear"], rel=1e-12)
        assert up_to_static(found["static"]["shear"], found["design_base_shear"]) == pytest.approx(1.0, rel=1e-12)


def test_a_modal_base_shear_above_the_static_one_is_left_as_it_is(demand_job):
    # R = 8 in the modal ordinates at S_DS = 1, static by S_D1/(T R/I_e) with T_S = 0.2 s; points hold 1.0 at both periods
    found = actions(demand_job("7-22", SRSS, ("s_d1 = 0.6", "s_d1 = 0.2")))
    assert found["static"]["shear"] < found["modal_base_shear"]
    assert found["scaling"]["forces"] == 1.0
    assert found["shear"] == pytest.approx([v * ASCE_A for v in SHEAR], rel=1e-9)


def test_second_order_goes_into_shears_and_into_moments_below(demand_job):
    # θ = 0.125 in the lower storey, 0.06 in the upper
    changes = (("c_d_x = 5.5", "c_d_x = 2.5\nshear_ratio = 0.5"), SRSS)
    found = actions(demand_job("7-16", *changes, storeys=AMPLIFIED))
    assert found["amplified"] == pytest.approx([1 / 0.875, 1.0], rel=1e-9)
    lower, upper = SCALE * SHEAR[0] * ASCE_A / 0.875, SCALE * SHEAR[1] * ASCE_A
    assert found["shear"] == pytest.approx([lower, upper], rel=1e-9)
    moments = [SCALE * MOMENT[0] * ASCE_A / 0.875, SCALE * MOMENT[1] * ASCE_A]
    assert found["moment"] == pytest.approx(moments, rel=1e-9)
    assert found["equivalent"] == pytest.approx([lower - upper, upper], rel=1e-9)


def test_torsion_at_the_edge_where_the_edition_has_a_multiplier(demand_job):
    found = demand_job("EN", ("q_x = 3", "q_x = 3\nedge_x = 0.4"))
    assert actions(found)["torsion"] == pytest.approx(1 + 1.2 * 0.4)
    assert actions(found, 1)["torsion"] == pytest.approx(1 + 1.2 * 0.5)
    for basis in ("7-16", "7-22", "IS", "points"):
        assert actions(demand_job(basis, name=basis))["torsion"] is None


def test_worked_lines_say_what_is_multiplied(demand_job):
    job = demand_job("IS", SRSS)
    lines = {line["quantity"]: line for line in job.payload("actions")["lines"]}
    scale = lines["Scale of forces, x"]
    assert [n["value"] for n in scale["numbers"]] == pytest.approx([300 * IS_A, SHEAR[0] * IS_A], rel=1e-9)
    design = lines["Design base shear, x"]
    assert [n["value"] for n in design["numbers"]] == pytest.approx([SHEAR[0] * IS_A, SCALE, 1.0], rel=1e-9)
    assert design["result"]["value"] == pytest.approx(300 * IS_A, rel=1e-9)
    top = lines["Equivalent lateral force at the top, x"]
    assert top["result"]["value"] == top["numbers"][0]["value"]
    assert "Scale of forces, x" not in {
        line["quantity"] for line in demand_job("EN", name="unscaled").payload("actions")["lines"]
    }


# ---- cautions ----------------------------------------------------------------------------------------------------------


def test_a_modal_base_shear_that_stays_below_the_static_one_is_a_caution(demand_job):
    x, y = demand_job("EN", SRSS).payload("actions")["cautions"]
    assert (x["kind"], x["subject"], y["subject"], x["answer"]) == ("unscaled-base-shear", "x", "y", False)
    # 268.74 t of the two modes and 300 t of the static shear, on one plateau
    assert [n["value"] for n in x["numbers"]] == pytest.approx([SHEAR[0] * EN_A, 300 * EN_A], rel=1e-9)
    at = "result/directions/0"
    assert [n["at"] for n in x["numbers"]] == [f"{at}/modal_base_shear", f"{at}/static/shear"]


@pytest.mark.parametrize("basis", ["7-16", "IS", "points"])
def test_a_base_shear_that_is_scaled_or_has_no_static_one_beside_it_raises_nothing(demand_job, basis):
    assert demand_job(basis, SRSS).payload("actions")["cautions"] == []


def test_a_modal_base_shear_above_the_static_one_raises_nothing(demand_job):
    # three equal storeys: mode 1 at 0.499 s, on the plateau, moves 91.4 % of the mass; beyond two storeys λ = 0.85
    table = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]\n"
    job = demand_job("EN", SRSS, storeys=table + "".join(f"{i},3,100,80000,80000\n" for i in (3, 2, 1)))
    found = actions(job)
    assert found["static"]["shear"] == pytest.approx(0.85 * 300 * EN_A, rel=1e-9)
    assert found["modal_base_shear"] > 0.914 * 300 * EN_A
    assert job.payload("actions")["cautions"] == []


def second(quantity, value, direction="x"):
    parts = f'quantity = "{quantity}"\ndirection = "{direction}"\nvalue = {value}\norigin = "Model {{2}}, 5 % damped"\n'
    return f"[[second_model]]\n{parts}"


# by hand: T₁ = 2π √(200/50 000) s; weight 300 t; base shear 268.74 t of two modes by SRSS, times the plateau's ordinate
@pytest.mark.parametrize(
    ("quantity", "direction", "here", "subject"),
    [
        ("period", "x", 2 * math.pi * math.sqrt(200 / 50_000), "period-x"),
        ("weight", "", W, "weight"),
        ("base shear", "x", SHEAR[0] * EN_A, "base-shear-x"),
    ],
)
def test_a_second_model_more_than_a_tenth_away_asks_for_an_answer(demand_job, quantity, direction, here, subject):
    shares = (1.101, 0.899, 1.099, 0.901)
    tables = "".join(second(quantity, share * here, direction) for share in shares)
    job = demand_job("EN", SRSS, card=[("[answers]", f"{tables}[answers]")])
    raised = [c for step in ("demand", "actions") for c in job.payload(step)["cautions"]]
    found = [c for c in raised if c["kind"] == "second-model-differs"]
    assert [(c["subject"], c["answer"]) for c in found] == [(subject, True), (f"{subject}-2", True)]
    of = f"{quantity} in {direction}" if direction else quantity
    for caution, side in zip(found, ("above", "below"), strict=True):
        (number,) = caution["numbers"]
        assert number["value"] == pytest.approx(here, rel=1e-9)
        said = f"The {of} is A here; that of the second model (Model {{2}}, 5 % damped) lies 10.1 % {side} it."
        assert caution["text"].format("A") == said
    assert replay(json.loads(json.dumps(job.payloads()))) == []
