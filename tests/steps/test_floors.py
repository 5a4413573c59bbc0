"""Rigid floors through all steps of a job, against the planar job that a symmetric plan is."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.steps.replay import replay

KIND = ('kind = "storey chain"', 'kind = "rigid floors"')
SETS = (("factor_x = 0.6\nfactor_y = 0.5", "factor = 0.6"),)
CARD = (KIND, *SETS)
STOREYS = """\
level,storey height [m],mass [t],gravity load [kN],stiffness A [kN/m],stiffness B [kN/m],stiffness 1 [kN/m],stiffness 2 [kN/m]
Roof,3.1,180,1900,{a[2]},{b[2]},60000,60000
2,3.4,240,2500,{a[1]},{b[1]},75000,75000
1,4.2,255,2700,{a[0]},{b[0]},80000,80000
"""
FLOORS = """\
level,centre of mass x [m],centre of mass y [m],radius of gyration [m],plan x from [m],plan x to [m],plan y from [m],plan y to [m]
Roof,{x},6,6.1,0,18,0,12
2,{x},6,6.1,0,18,0,12
1,{x},6,6.1,0,18,0,12
"""
LINES = "line,x [m],y [m],direction [°]\nA,0,0,90\nB,18,0,90\n1,0,0,0\n2,0,12,0\n"
A = B = (50000, 46000, 38000)
PLANAR = """\
level,storey height [m],mass [t],gravity load [kN],stiffness x [kN/m],stiffness y [kN/m]
Roof,3.1,180,1900,120000,76000
2,3.4,240,2500,150000,92000
1,4.2,255,2700,160000,100000
"""
IN_STIFFNESS = ("edition =", "second_order_in_stiffness = true\nedition =")
KINDS = ("storeys", "modes", "participation", "demand", "peaks", "drift", "actions")


@pytest.fixture
def floors_job(job_folder, demand_job, monkeypatch):
    """Opens a job of rigid floors, or of the planar model that a symmetric plan is."""

    def build(basis, *changes, a=A, b=B, x=9.0, lines=LINES, name="floors", keep=None):
        files = {"floors.csv": FLOORS.format(x=x), "lines.csv": lines}
        return demand_job(
            basis, *changes, card=CARD, storeys=STOREYS.format(a=a, b=b), name=name, more=files, keep=keep
        )

    return build


def result(job, kind):
    payload = job.payload(kind)
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
@pytest.mark.parametrize("change", [(), (IN_STIFFNESS,)], ids=["first order", "second order"])
def test_a_symmetric_plan_gives_the_planar_results(floors_job, demand_job, basis, change):
    floors, planar = floors_job(basis, *change), demand_job(basis, *change, storeys=PLANAR, name="planar")
    for kind in KINDS:
        result(floors, kind)
    for i in range(2):
        for kind, fields in {
            "peaks": ("forces", "drifts"),
            "drift": ("elastic", "design", "limit", "displacement", "stiffness"),
            "actions": ("shear", "moment", "modal_base_shear", "design_base_shear", "static_force"),
        }.items():
            here, there = (result(job, kind)["directions"][i] for job in (floors, planar))
            for field in fields:
                a, b = here[field], there[field]
                if kind == "peaks":
                    a, b = (
                        [combined[q] for q in ("force", "shear", "moment", "displacement", "drift")]
                        for combined in (a, b)
                    )
                np.testing.assert_allclose(a, b, rtol=1e-6, err_msg=f"{kind} {field}")
    assert replay(floors.payloads()) == []


def test_evidence_and_names_of_one_model(floors_job):
    job = floors_job("EN")
    evidence = [e for p in job.payloads().values() for e in p["evidence"]]
    assert [e["key"] for e in evidence if not e["within"]] == []
    assert {"mass-x-y", "second-route-x-y", "total-mass-x", "total-mass-y"} <= {e["key"] for e in evidence}
    (model,) = result(job, "modes")["models"]
    assert (model["name"], model["size"]) == ("x and y", 9)
    assert model["rows"] == {"x": [0, 3, 6], "y": [1, 4, 7]}


def test_the_main_mode_of_each_direction(floors_job):
    job = floors_job("EN")
    x, y = result(job, "participation")["directions"]
    assert y["main"] == 0
    assert x["main"] == int(np.argmax(x["share"])) > 0
    demand = result(job, "demand")["directions"]
    assert demand[0]["facts"]["period"] == x["period"][x["main"]]
    assert demand[0]["first_base_shear"] == pytest.approx(
        x["effective_mass"][x["main"]] * demand[0]["ordinate"][x["main"]]
    )
    lines = [line["quantity"] for line in job.payload("demand")["lines"]]
    assert f"Base shear of mode {x['main'] + 1}, x" in lines
    relations = [line["relation"] for line in job.payload("participation")["lines"]]
    assert f"M{'₁₂₃₄'[x['main']]}* / Σ m" in relations


def test_an_eccentric_plan_is_coupled(floors_job):
    job = floors_job("EN", b=(20000, 18000, 15000), x=8.0)
    y = result(job, "participation")["directions"][1]
    shares = sorted(y["share"])
    assert shares[-2] > 0.02  # y and rotation share the mass
    screens = {s["name"]: s for s in result(job, "drift")["directions"][1]["screens"]}
    # centre of stiffness at 18 × 20/70 m, torsional radius by hand from the lowest storey
    e = 8.0 - 18.0 * 20.0 / 70.0
    torsion = 5e4 * (18.0 * 2.0 / 7.0) ** 2 + 2e4 * (18.0 * 5.0 / 7.0) ** 2 + 2.0 * 8e4 * 36.0
    assert screens["regularity in plan"]["verdict"] == ("exceeds" if e > 0.3 * np.sqrt(torsion / 7e4) else "passes")
    assert screens["regularity in plan"]["text"].startswith("e_0/r up to 0.")


def test_a_mechanism_is_refused_with_its_level(floors_job):
    job = floors_job("EN", lines="line,x [m],y [m],direction [°]\nA,0,0,90\nB,18,0,90\n1,0,0,90\n2,0,12,90\n")
    payload = job.payload("modes")
    assert payload["state"] == "refused"
    assert payload["why"] == (
        'lateral stiffness, level "1", in x: a mechanism; lines of resistance must be neither all parallel nor all through one '
        "point"
    )


@pytest.mark.parametrize(
    ("changes", "wanted"),
    [
        ({}, []),
        ({"x": 18.5}, [f"centre-of-mass-outside-{level}" for level in ("1", "2", "Roof")]),
        ({"lines": LINES.replace("B,18,0,90", "B,0,7,-90")}, ["lines-along-one-another-A-B"]),
    ],
)
def test_cautions_of_the_plan(floors_job, changes, wanted):
    cautions = floors_job("EN", **changes).payload("storeys")["cautions"]
    assert [c["key"] for c in cautions] == wanted
    assert all(c["answer"] for c in cautions)


def test_few_modes_leave_a_residual_that_is_added(floors_job):
    job = floors_job("7-16", keep=4, b=(30000, 28000, 25000))
    for item in result(job, "peaks")["directions"]:
        assert item["residual"] is True
        assert len(item["ordinate"]) == 5
    assert replay(job.payloads()) == []
