"""Rigid floors through all steps of a job, against the planar job that a symmetric plan is."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.steps.plan import PlanOptions
from calcsheet.steps.replay import replay
from calcsheet.steps.step import key_of
from calcsheet.steps.torsion import TorsionOptions

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


def key(caution):
    return key_of(caution["kind"], caution["subject"])


@pytest.fixture
def floors_job(job_folder, demand_job, monkeypatch):
    """Opens a job of rigid floors, or of the planar model that a symmetric plan is."""

    def build(basis, *changes, a=A, b=B, x=9.0, lines=LINES, name="floors", keep=None):
        files = {"plan.csv": FLOORS.format(x=x), "lines.csv": lines}
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
    assert [key(c) for c in cautions] == wanted
    assert all(c["answer"] for c in cautions)


def test_few_modes_leave_a_residual_that_is_added(floors_job):
    job = floors_job("7-16", keep=4, b=(30000, 28000, 25000))
    for item in result(job, "peaks")["directions"]:
        assert item["residual"] is True
        assert len(item["ordinate"]) == 5
    assert replay(job.payloads()) == []


@pytest.fixture
def with_plan(floors_job):
    """The same with plan and edges attached."""

    def build(basis, *changes, accidental=0.05, **how):
        job = floors_job(basis, *changes, **how)
        job.attach("plan", PlanOptions())
        job.attach("torsion", TorsionOptions(accidental))
        return job

    return build


ECCENTRIC = {"b": (20000, 18000, 15000), "x": 8.0}


@pytest.mark.parametrize("basis", ["EN", "7-16", "IS", "points"])
def test_plan_and_edges_replay(with_plan, basis):
    job = with_plan(basis, **ECCENTRIC)
    for kind in ("plan", "torsion"):
        result(job, kind)
    assert replay(job.payloads()) == []


def test_the_plan_of_a_symmetric_building(with_plan):
    found = result(with_plan("EN"), "plan")
    np.testing.assert_allclose(found["centres"]["eccentricity"], 0.0, atol=1e-9)
    stiffness = [[160000, 100000], [150000, 92000], [120000, 76000]]
    np.testing.assert_allclose(found["centres"]["stiffness"], stiffness, rtol=1e-9)
    np.testing.assert_allclose(np.max(found["shares"], axis=0), 1.0, rtol=1e-9)


def test_without_eccentricity_edges_move_as_the_centre(with_plan):
    job = with_plan("7-16", accidental=0.0)
    for item, drift in zip(result(job, "torsion")["directions"], result(job, "drift")["directions"], strict=True):
        for edge in range(2):
            np.testing.assert_allclose(np.array(item["nominal"]["drift"])[:, edge], drift["elastic"], rtol=1e-6)
            np.testing.assert_allclose(np.array(item["accidental"]["drift"])[:, edge], drift["elastic"], rtol=1e-6)
            np.testing.assert_allclose(np.array(item["design"])[:, edge], drift["design"], rtol=1e-6)
            # excitation square to a symmetric plan moves no edge along it
            np.testing.assert_allclose(np.array(item["both"]["drift"])[:, edge], drift["elastic"], rtol=1e-6)
        np.testing.assert_allclose(item["static"]["ratio"], 1.0, rtol=1e-9)
        np.testing.assert_allclose(item["static"]["amplification"], 1.0, rtol=1e-12)
    assert [key(c) for c in job.payload("torsion")["cautions"] if key(c).startswith("torsional")] == []


def test_static_torsion_of_one_storey_by_hand(with_plan):
    # F e_a = k_θ θ; edges at 9 m: ratio 1 + 9 θ k_y/F, A_x = (ratio/1.2)² from 1 (statics; ASCE/SEI 7-16, 12.8.4.3)
    job = with_plan("7-16", accidental=0.2)
    item = result(job, "torsion")["directions"][1]["static"]
    force = np.array(item["force"])
    np.testing.assert_allclose(item["eccentricity"], 3.6)
    torque = np.cumsum((force * 3.6)[::-1])[::-1]
    np.testing.assert_allclose(item["torque"], torque, rtol=1e-9)
    shear = np.cumsum(force[::-1])[::-1]
    for i, (k_y, k_x) in enumerate(((1e5, 1.6e5), (9.2e4, 1.5e5), (7.6e4, 1.2e5))):
        k_theta = k_y * 81.0 + k_x * 36.0
        ratio = 1.0 + 9.0 * (torque[i] / k_theta) / (shear[i] / k_y)
        assert item["ratio"][i] == pytest.approx(ratio, rel=1e-8)
    top = np.abs(item["edge"][2])
    assert item["amplification"][2] == pytest.approx(max((top.max() / (0.6 * top.sum())) ** 2, 1.0), rel=1e-9)
    keys = [key(c) for c in job.payload("torsion")["cautions"]]
    assert "torsional-irregularity-y" in keys


def test_edges_of_an_eccentric_plan(with_plan):
    job = with_plan("EN", **ECCENTRIC)
    item = result(job, "torsion")["directions"][1]
    nominal, accidental, both = (np.array(item[name]["drift"]) for name in ("nominal", "accidental", "both"))
    assert (accidental >= nominal).all()
    assert (both >= accidental - 1e-15).all()
    # the edge far from the centre of stiffness moves more
    assert (nominal[:, 1] > nominal[:, 0]).all()
    lines = job.payload("torsion")["lines"]
    design = [line for line in lines if line["quantity"].startswith("Design drift at the edge")]
    for line in design:
        assert line["result"]["value"] == pytest.approx(np.prod([n["value"] for n in line["numbers"]]), rel=1e-12)


def test_a_planar_job_has_no_plan(demand_job):
    job = demand_job("EN")
    job.attach("plan", PlanOptions())
    assert job.payload("plan")["state"] == "refused"
    assert job.payload("plan")["why"] == (
        'model: planar in each direction; must be of model.kind "rigid floors" in job.toml'
    )


def test_edges_ask_for_the_plans_extent(with_plan, monkeypatch):
    bare = "\n".join(",".join(line.split(",")[:4]) for line in FLOORS.splitlines()) + "\n"
    monkeypatch.setitem(globals(), "FLOORS", bare)
    payload = with_plan("EN").payload("torsion")
    assert payload["state"] == "refused"
    assert payload["why"].startswith("plan.csv: no extent of the plan; must be given")


def test_lines_share_the_storey_shear_of_a_symmetric_plan(with_plan):
    # along x two equal lines take half each; along y they take it by their stiffness; nothing square to it (statics)
    job = with_plan("7-16", accidental=0.0)
    shears = {line["name"]: line for line in result(job, "torsion")["lines"]}
    x, y = (item["shear"] for item in result(job, "actions")["directions"])
    for name in ("1", "2"):
        np.testing.assert_allclose(shears[name]["x"], np.array(x) / 2.0, rtol=1e-6)
        np.testing.assert_allclose(shears[name]["y"], 0.0, atol=1e-6)
    for name in ("A", "B"):
        np.testing.assert_allclose(shears[name]["y"], np.array(y) / 2.0, rtol=1e-6)
        np.testing.assert_allclose(shears[name]["both"], shears[name]["y"], rtol=1e-6)


def test_masses_shifted_load_every_line_more(with_plan):
    centred, shifted = ({line["name"]: np.array(line["both"]) for line in result(with_plan(
        "EN", accidental=e, name=f"floors {e:g}", **ECCENTRIC), "torsion")["lines"]} for e in (0.0, 0.05))  # fmt: skip
    for name, shear in centred.items():
        assert (shifted[name] >= shear * (1.0 - 1e-9)).all()
    assert (shifted["B"] > 1.02 * centred["B"]).all()


def test_lines_hold_what_the_storeys_hold_with_gravity_in_the_stiffness(with_plan):
    job = with_plan("7-16", IN_STIFFNESS, accidental=0.0)
    shears = {line["name"]: np.array(line["x"]) for line in result(job, "torsion")["lines"]}
    np.testing.assert_allclose(shears["1"] + shears["2"], result(job, "actions")["directions"][0]["shear"], rtol=1e-6)
