"""Demand of two storeys, 200 t and 100 t on 2k and k with k = 50 000 kN/m, worked by hand: ω₁² = k/2m, ω₂² = 2k/m."""

from __future__ import annotations

import math

import pytest

from calcsheet.steps.step import key_of

G = 9.80665
T_1, T_2 = 2.0 * math.pi / math.sqrt(250.0), 2.0 * math.pi / math.sqrt(1000.0)  # 0.3974 s and 0.1987 s in x
W = 300.0 * G


def demand(job, direction=0):
    payload = job.payload("demand")
    assert payload["state"] == "ok", payload["why"]
    return payload["result"]["directions"][direction]


def line(job, start):
    return next(one for one in job.payload("demand")["lines"] if one["quantity"].startswith(start))


@pytest.mark.parametrize(
    ("basis", "changes", "ordinate"),
    [
        ("EN", (), 0.2 * G * 1.2 * 2.5 / 3.0),  # 0.15 s = T_B < T < T_C = 0.5 s: a_g S 2.5/q
        ("EN", (('"II"', '"III"'),), 1.2 * 0.2 * G * 1.2 * 2.5 / 3.0),
        ("7-16", (), 1.0 * G / 8.0),  # 0.12 s = T_0 < T < T_S = 0.6 s: S_DS/(R/I_e)
        ("7-16", (('risk_category = "II"', 'risk_category = "IV"'),), 1.0 * G * 1.5 / 8.0),
        ("7-22", (), 1.0 * G / 8.0),  # between 0.1 and 0.6 s the points hold 1.0
        ("IS", (), 0.24 / 2.0 * 1.2 / 5.0 * 2.5 * G),  # 0.10 s < T < 0.55 s: 2.5
        ("points", (), 1.0 * G),
    ],
)
def test_the_plateau_in_both_modes(demand_job, basis, changes, ordinate):
    found = demand(demand_job(basis, *changes))
    assert found["facts"]["period"] == pytest.approx(T_1, rel=1e-12)
    assert found["ordinate"] == pytest.approx([ordinate, ordinate], rel=1e-12)
    # effective mass of mode 1: (200 × 0.5 + 100)²/(200 × 0.25 + 100) = 266.67 t
    assert found["first_effective_mass"] == pytest.approx(200.0**2 / 150.0, rel=1e-10)
    assert found["first_base_shear"] == pytest.approx(200.0**2 / 150.0 * ordinate, rel=1e-10)


@pytest.mark.parametrize(
    ("basis", "changes", "shear", "governing"),
    [
        # 2 storeys: λ = 1
        ("EN", (), 0.2 * G * 1.2 * 2.5 / 3.0 * 300.0, "S_d(T₁) m λ with λ = 1"),
        # T_a = 0.0466 × 7^0.9 = 0.2685 s, C_u T_a = 1.4 × 0.2685 = 0.3759 s < T_S = 0.6 s
        ("7-16", (), 1.0 / 8.0 * W, "S_DS/(R/I_e)"),
        # T_S = 0.2 s: 0.2/(0.4028 × 8), with C_u = 1.5 and T_a = 0.2685 s; the model's 0.3974 s is shorter
        ("7-16", (("0.6", "0.2"),), 0.2 / (T_1 * 8.0) * W, "S_D1/(T R/I_e)"),
        ("7-22", (), 1.0 / 8.0 * W, "S_DS/(R/I_e)"),
        # T_a = 0.075 × 7^0.75 = 0.3228 s < 0.55 s
        ("IS", (), 0.24 / 2.0 * 2.5 * 1.2 / 5.0 * W, "(Z/2)(S_a/g)/(R/I)"),
        # 0.12 × 2.5 × 1.2/30 = 0.012, below the 0.016 of zone IV
        ("IS", (("r_x = 5", "r_x = 30"),), 0.016 * W, "least base shear of Table 7"),
    ],
)
def test_static_base_shear_and_what_governs_it(demand_job, basis, changes, shear, governing):
    static = demand(demand_job(basis, *changes))["static"]
    assert static["shear"] == pytest.approx(shear, rel=1e-10)
    assert static["coefficient"] == pytest.approx(shear / W, rel=1e-10)
    assert static["governing"] == governing


def test_given_points_have_no_static_base_shear(demand_job):
    job = demand_job("points")
    assert demand(job)["static"] is None
    relations = ["S = S_i + (S_j − S_i)(T − T_i)/(T_j − T_i)", "S g", "V₁ = M₁* S_a(T₁)"]
    assert [one["relation"] for one in job.payload("demand")["lines"]] == relations * 2


def test_between_points_ordinates_are_interpolated(demand_job):
    # soft: 1/16 of the stiffness, four times the periods; 1.5896 s between 0.6 and 2 s
    soft = [("[stiffness.gross]\nfactor = 1.0", "[stiffness.gross]\nfactor = 0.0625")]
    found = demand(demand_job("points", card=soft))
    slope = (0.3 - 1.0) / (2.0 - 0.6)
    expected = [(1.0 + slope * (4 * T_1 - 0.6)) * G, (1.0 + slope * (4 * T_2 - 0.6)) * G]
    assert found["ordinate"] == pytest.approx(expected, rel=1e-10)


def test_the_curve_passes_through_the_modes_and_stays_within_the_points(demand_job):
    found = demand(demand_job("points", points="period [s],ordinate [g]\n0.1,1\n0.5,0.9\n"))
    assert found["curve_period"][-1] == pytest.approx(0.5, rel=0.02)
    assert max(found["curve_period"]) <= 0.5
    for period, ordinate in zip((T_1, T_2), found["ordinate"], strict=True):
        nearest = min(range(len(found["curve"])), key=lambda i: abs(found["curve_period"][i] - period))
        assert found["curve"][nearest] == pytest.approx(ordinate, rel=1e-9)


def test_what_each_edition_says_of_torsion_is_a_caution(demand_job):
    for basis in ("EN", "7-16", "7-22", "IS", "points"):
        job = demand_job(basis, name=basis)
        torsion = {c["subject"]: c["text"] for c in job.payload("demand")["cautions"] if c["kind"] == "torsion"}
        assert set(torsion) == {"x", "y"}
        assert demand(job)["torsion"]["text"] in torsion["x"]


def test_a_period_beyond_four_seconds_is_a_caution(demand_job):
    def keys(factor, name, basis="EN"):
        card = [("[stiffness.gross]\nfactor = 1.0", f"[stiffness.gross]\nfactor = {factor}")]
        payload = demand_job(basis, card=card, name=name).payload("demand")
        return {key_of(c["kind"], c["subject"]): c for c in payload["cautions"]}

    assert "long-period-x" not in keys(0.0101, "short")  # 3.954 s
    found = keys(0.0098, "long")  # 4.014 s
    assert found["long-period-x"]["numbers"][0]["value"] == pytest.approx(T_1 / math.sqrt(0.0098), rel=1e-9)
    assert "long-period-y" not in found  # 3.17 s
    # the spectrum of one edition ends there, those of others go on
    assert found["long-period-x"]["answer"]
    assert "up to which EN 1998-1:2004 gives its spectrum" in found["long-period-x"]["text"]
    going_on = keys(0.0098, "going on", "7-16")["long-period-x"]
    assert not going_on["answer"]
    assert "up to which" not in going_on["text"]


def test_an_analysis_that_is_not_plainly_permitted_asks_for_an_answer(demand_job):
    def asked(*changes, name):
        cautions = demand_job("7-16", *changes, name=name).payload("demand")["cautions"]
        return {key_of(c["kind"], c["subject"]) for c in cautions if c["answer"]}

    assert asked(name="C") == set()
    assert asked(('site_class = "C"', 'site_class = "D"'), name="D") == {"permitted-x", "permitted-y"}


def test_a_period_outside_the_points_is_refused_and_what_follows_waits(demand_job):
    job = demand_job("points", points="period [s],ordinate [g]\n0.2,1\n3,0.1\n")  # y: 0.157 s
    payload = job.payload("demand")
    assert payload["state"] == "refused"
    assert payload["why"] == "period: 0.1987 s; must lie within the spectrum's points, 0.2 to 3 s"
    assert payload["result"] is None
    for kind in ("peaks", "drift", "actions"):
        waiting = job.payload(kind)
        assert waiting["state"] == "waiting"
        assert waiting["why"] == f"waits for design demand: {payload['why']}"


def test_the_first_point_holds_by_stated_choice(demand_job):
    points = "period [s],ordinate [g]\n0.2,1\n3,0.1\n"
    job = demand_job("points", ('points = "points.csv"', 'points = "points.csv"\nhold_below = true'), points=points)
    assert demand(job)["ordinate"][1] == pytest.approx(1.0 * G)


def test_a_system_without_its_base_is_refused_at_the_basis(demand_job):
    job = demand_job("IS", ("base_y = 16\n", ""))
    why = 'job.toml, basis.base_y: missing; must be given with system_y "other"'
    assert (job.payload("basis")["state"], job.payload("basis")["why"]) == ("refused", why)
    assert job.payload("modes")["state"] == "ok"
    for kind in ("demand", "peaks", "drift", "actions"):
        assert (job.payload(kind)["state"], job.payload(kind)["why"]) == (
            "waiting",
            f"waits for basis of the demand: {why}",
        )


def test_the_first_modes_base_shear_is_a_worked_line(demand_job):
    job = demand_job("EN")
    found = line(job, "Base shear of mode 1, x")
    assert [n["value"] for n in found["numbers"]] == pytest.approx([200.0**2 / 150.0, 1.96133], rel=1e-9)
    assert found["result"]["value"] == pytest.approx(266.6666667 * 1.96133, rel=1e-9)


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_the_ordinate_of_mode_1_is_worked_out_before_its_base_shear(demand_job, basis):
    job = demand_job(basis)
    lines = [one for one in job.payload("demand")["lines"] if one["quantity"].endswith(", x")]
    assert [one["quantity"] for one in lines[-2:]] == ["Design ordinate at T₁, x", "Base shear of mode 1, x"]
    assert lines[-2]["result"]["value"] == lines[-1]["numbers"][1]["value"] == demand(job)["ordinate"][0]


def test_bounds_of_the_static_base_shear_stand_beside_what_governs(demand_job):
    lines = demand_job("7-16", ("s_1 = 0.4", "s_1 = 0.7")).payload("demand")["lines"]
    found = {one["relation"]: one for one in lines if one["quantity"].endswith("C_s, x")}
    # T = 0.3759 s: 0.6/(0.3759 × 8) = 0.1995; 0.044 × 1; 0.5 × 0.7/8 = 0.04375
    expected = {"S_D1/(T R/I_e)": 0.19951, "0.044 S_DS I_e": 0.044, "0.01": 0.01, "0.5 S_1/(R/I_e)": 0.04375}
    assert {r: one["result"]["value"] for r, one in found.items()} == pytest.approx(expected, rel=1e-4)
    assert [one["quantity"] for one in found.values()] == ["Upper bound of C_s, x"] + ["Lower bound of C_s, x"] * 3


def test_the_static_force_at_the_top_level_is_worked_out(demand_job):
    job = demand_job("EN")
    found = line(job, "Static force at the top level, x")
    # F_b × 100 × 7/(100 × 7 + 200 × 4)
    assert found["result"]["value"] == pytest.approx(demand(job)["static"]["shear"] * 700.0 / 1500.0, rel=1e-12)
    assert job.payload("actions")["result"]["directions"][0]["static_force"][-1] == found["result"]["value"]
