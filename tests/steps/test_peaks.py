"""Modal peaks of two storeys, 200 t and 100 t on 2k and k, k = 50 000 kN/m, storeys of 4 m and 3 m, worked by hand.

With A₁ and A₂ the ordinates: shapes (½, 1) and (-1, 1), Γ = 4/3 and -1/3, forces (400/3, 400/3) A₁ and (200/3, -100/3) A₂.
"""

from __future__ import annotations

import math

import pytest

from calcsheet.steps.step import key_of

G = 9.80665
SHEAR = ((800 / 3, 100 / 3), (400 / 3, -100 / 3))  # lower storey first; by mode
MOMENT = ((400 + 4 * 800 / 3, -100 + 4 * 100 / 3), (400.0, -100.0))
DRIFT = ((800 / 3 / 1e5, 100 / 3 / 1e5), (400 / 3 / 5e4, -100 / 3 / 5e4))
TOP = (DRIFT[0][0] + DRIFT[1][0], DRIFT[0][1] + DRIFT[1][1])
SRSS = ("elements =", 'combination = "SRSS"\nelements =')
EN_A = 0.2 * G * 1.2 * 2.5 / 3.0
RHO = 8 * 0.05**2 * (1 + 2) * 2**1.5 / ((1 - 2**2) ** 2 + 4 * 0.05**2 * 2 * (1 + 2) ** 2)  # ω₂/ω₁ = 2: 0.01849


def peaks(job, direction=0):
    payload = job.payload("peaks")
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]["directions"][direction]


def root(values, ordinate, rho=0.0):
    a, b = values
    return math.sqrt(a**2 + b**2 + 2 * rho * a * b) * ordinate


def test_modal_values_and_their_squares(demand_job):
    found = peaks(demand_job("EN", SRSS))
    for i in (0, 1):
        assert found["shear"][i] == pytest.approx([EN_A * v for v in SHEAR[i]], rel=1e-9)
        assert found["moment"][i] == pytest.approx([EN_A * v for v in MOMENT[i]], rel=1e-9)
        assert found["forces"]["shear"][i] == pytest.approx(root(SHEAR[i], EN_A), rel=1e-9)
        assert found["forces"]["moment"][i] == pytest.approx(root(MOMENT[i], EN_A), rel=1e-9)
        assert found["forces"]["drift"][i] == pytest.approx(root(DRIFT[i], EN_A), rel=1e-9)
    assert found["forces"]["displacement"][1] == pytest.approx(root(TOP, EN_A), rel=1e-9)
    assert found["forces"]["force"] == pytest.approx([root((400 / 3, 200 / 3), EN_A), root((400 / 3, 100 / 3), EN_A)])
    # combined forces, added up, are no shear
    assert sum(found["forces"]["force"]) > 1.05 * found["forces"]["shear"][0]
    assert found["rule"] == "SRSS"
    assert found["related"] == [[1.0, 0.0], [0.0, 1.0]]
    assert found["residual"] is False


def test_complete_quadratic_combination_keeps_signs(demand_job):
    found = peaks(demand_job("EN"))
    assert found["related"][0][1] == pytest.approx(RHO, rel=1e-9)
    for i in (0, 1):  # the second mode adds in the lower storey and takes off in the upper
        assert found["forces"]["shear"][i] == pytest.approx(root(SHEAR[i], EN_A, RHO), rel=1e-9)
    assert found["forces"]["displacement"][1] == pytest.approx(root(TOP, EN_A, RHO), rel=1e-9)


def test_absolute_sum(demand_job):
    absolute = ("points =", 'combination = "absolute"\npoints =')
    found = peaks(demand_job("points", absolute))
    assert found["forces"]["shear"] == pytest.approx([300.0 * G, 500 / 3 * G], rel=1e-9)


# ---- modes left out: what mode 1 leaves is (200 (1 - 2/3), 100 (1 - 4/3)), the pattern of mode 2 -----------------------


@pytest.mark.parametrize(
    ("basis", "choice", "ordinate", "residual"),
    [
        ("EN", "last ordinate", EN_A, EN_A),
        ("EN", "zero period", EN_A, 0.2 * G * 1.2 * 2.0 / 3.0),
        ("7-16", "zero period", G / 8.0, 0.4 * G / 8.0),
        ("IS", "zero period", 0.24 / 2 * 1.2 / 5 * 2.5 * G, 0.24 / 2 * 1.2 / 5 * 1.0 * G),
        ("points", "zero period", G, 0.4 * G),
        ("EN", "none", EN_A, None),
    ],
)
def test_residuals(demand_job, basis, choice, ordinate, residual):
    job = demand_job(basis, ("edition =", f'residual = "{choice}"\nedition ='), keep=1)
    found = peaks(job)
    assert found["residual"] is (residual is not None)
    if residual is None:
        assert found["ordinate"] == pytest.approx([ordinate])
        assert found["forces"]["shear"] == pytest.approx([800 / 3 * ordinate, 400 / 3 * ordinate], rel=1e-9)
    else:
        assert found["ordinate"] == pytest.approx([ordinate, residual])
        for i in (0, 1):
            assert found["shear"][i][1] == pytest.approx(SHEAR[i][1] * residual, rel=1e-9)
            expected = math.hypot(SHEAR[i][0] * ordinate, SHEAR[i][1] * residual)
            assert found["forces"]["shear"][i] == pytest.approx(expected, rel=1e-9)
            expected = math.hypot(DRIFT[i][0] * ordinate, DRIFT[i][1] * residual)
            assert found["drifts"]["drift"][i] == pytest.approx(expected, rel=1e-9)
    keys = {key_of(c["kind"], c["subject"]) for c in job.payload("peaks")["cautions"]}
    raised = {"none": {"no-residual-x", "no-residual-y"}, "zero period": {"residual-reduced-x", "residual-reduced-y"}}
    assert keys == raised.get(choice, set())


def test_a_residual_at_a_period_outside_the_points_is_refused(demand_job):
    points = "period [s],ordinate [g]\n0.1,1\n3,0.1\n"
    job = demand_job("points", ("edition =", 'residual = "zero period"\nedition ='), points=points, keep=1)
    why = "period: 0 s; must lie within the spectrum's points, 0.1 to 3 s"
    assert (job.payload("peaks")["state"], job.payload("peaks")["why"]) == ("refused", why)
    assert job.payload("demand")["state"] == "ok"
    assert job.payload("drift")["why"] == f"waits for modal peaks: {why}"


def test_with_all_modes_kept_no_choice_of_residual_matters(demand_job):
    found = [
        peaks(demand_job("EN", ("edition =", f'residual = "{choice}"\nedition ='), name=choice))
        for choice in ("last ordinate", "zero period", "none")
    ]
    assert found[0] == found[1] == found[2]


# ---- the set that serves drifts, the elastic cap -----------------------------------------------------------------------


def test_drifts_come_from_their_own_stiffness_set(demand_job):
    # forces at 0.6 k in x and 0.5 k in y: the same shapes, still on the plateau up to 0.6 s
    cracked = [('forces = "gross"', 'forces = "cracked"')]
    job = demand_job("7-16", card=cracked)
    result = job.payload("peaks")["result"]
    assert (result["stiffness_forces"], result["stiffness_drifts"]) == ("cracked", "gross")
    found = result["directions"][0]
    for i in (0, 1):
        assert found["forces"]["shear"][i] == pytest.approx(root(SHEAR[i], G / 8.0, RHO), rel=1e-9)
        assert found["forces"]["drift"][i] == pytest.approx(root(DRIFT[i], G / 8.0, RHO) / 0.6, rel=1e-9)
        assert found["drifts"]["drift"][i] == pytest.approx(root(DRIFT[i], G / 8.0, RHO), rel=1e-9)


def test_the_cap_is_the_response_to_the_elastic_spectrum(demand_job):
    found = peaks(demand_job("EN", name="all"))
    elastic = 0.2 * G * 1.2 * 2.5
    for i in (0, 1):
        assert found["cap"]["drift"][i] == pytest.approx(root(DRIFT[i], elastic, RHO), rel=1e-9)
    cut = peaks(demand_job("EN", keep=1, name="one"))
    for i in (0, 1):  # the residual belongs to it too
        assert cut["cap"]["drift"][i] == pytest.approx(root(DRIFT[i], elastic), rel=1e-9)
    assert peaks(demand_job("7-16", name="other"))["cap"] is None


# ---- scaling -----------------------------------------------------------------------------------------------------------


def test_scaling_to_the_static_base_shear(demand_job):
    # both on one plateau: 300 t against √(266.67² + 33.33²) = 268.74 t
    for basis in ("7-16", "7-22", "IS"):
        found = peaks(demand_job(basis, ("edition =", 'combination = "SRSS"\nedition ='), name=basis))
        assert found["scaling"]["forces"] == pytest.approx(300.0 / math.sqrt(800**2 + 100**2) * 3.0, rel=1e-9)
        assert found["scaling"]["drifts"] == 1.0
    for basis in ("EN", "points"):
        found = peaks(demand_job(basis, name=basis))["scaling"]
        assert (found["forces"], found["drifts"]) == (1.0, 1.0)


NEAR_FAULT = (("s_ds = 1.0", "s_ds = 0.3"), ("s_d1 = 0.6", "s_d1 = 0.12"), ("s_1 = 0.4", "s_1 = 0.7"))


def test_drifts_are_scaled_where_the_near_fault_bound_governs(demand_job):
    # T_S = 0.4 s: C_s = 0.3/8 = 0.0375, below 0.5 × 0.7/8 = 0.04375; modal 0.0375 × 268.74/300
    found = peaks(demand_job("7-16", *NEAR_FAULT, ("edition =", 'combination = "SRSS"\nedition =')))
    expected = 0.04375 / (0.0375 * math.sqrt(800**2 + 100**2) / 3.0 / 300.0)
    assert found["scaling"]["forces"] == found["scaling"]["drifts"] == pytest.approx(expected, rel=1e-9)


# ---- lines and cautions ------------------------------------------------------------------------------------------------


def test_the_combined_base_shear_is_a_worked_line(demand_job):
    squares, signed = (demand_job("EN", *change, name=str(i)) for i, change in enumerate(((SRSS,), ())))
    line = squares.payload("peaks")["lines"][0]
    assert (line["relation"], line["substitution"]) == ("V = √(Σ V_n²)", "√(({0})² + ({1})²)")
    line = signed.payload("peaks")["lines"][0]
    assert line["relation"] == "V = √(Σ Σ ρ_ij V_i V_j)"
    assert line["substitution"] == "√(({0})² + ({1})² + 2 × {2} × {0} × {1})"
    assert line["numbers"][2]["value"] == pytest.approx(RHO, rel=1e-9)
    assert line["result"]["value"] == pytest.approx(root(SHEAR[0], EN_A, RHO), rel=1e-9)


TUNED = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Mast,3,0.1,100,160,1
1,4,100,100000,160000,1000
"""


def test_srss_with_close_modes_asks_for_an_answer(demand_job):
    def cautions(*changes, **how):
        return {
            key_of(c["kind"], c["subject"]): c for c in demand_job("EN", *changes, **how).payload("peaks")["cautions"]
        }

    assert cautions(SRSS, name="apart") == {}
    found = cautions(SRSS, storeys=TUNED, name="close")  # ω² ≈ 1000 (1 ± 0.03)
    assert set(found) == {"srss-with-close-modes-x", "srss-with-close-modes-y"}
    assert found["srss-with-close-modes-x"]["answer"]
    assert "modes are combined by SRSS, which takes them as unrelated" in found["srss-with-close-modes-x"]["text"]
    # x² − 2.001 x + 1 = 0 for x = ω²/1000: 0.96887 and 1.03213, so T₂/T₁ = 0.9689
    assert "in a ratio of up to 0.969 against T_j ≤ 0.9 T_i" in found["srss-with-close-modes-x"]["text"]
    assert cautions(storeys=TUNED, name="CQC") == {}


def test_srss_with_close_modes_of_the_set_that_serves_drifts_is_its_own_caution(demand_job):
    job = demand_job("EN", SRSS, storeys=TUNED, card=[('forces = "gross"', 'forces = "cracked"')])
    found = {c["subject"]: c["text"] for c in job.payload("peaks")["cautions"]}
    assert set(found) == {"x", "y", "x-drifts", "y-drifts"}
    assert found["x-drifts"].startswith("In x, for drifts, modes are combined by SRSS")
