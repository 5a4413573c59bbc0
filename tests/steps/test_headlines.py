"""Headline numbers and conclusions of payloads, against hand figures."""

from __future__ import annotations

import math

import pytest

from calcsheet.steps.headlines import conclusions_of, headlines_of

G = 9.80665  # m/s² (ISO 80000-3)


def at(payloads, pointer):
    """What a JSON pointer without escapes leads to."""
    for part in pointer.removeprefix("/").split("/"):
        payloads = payloads[int(part)] if isinstance(payloads, list) else payloads[part]
    return payloads


def values(payloads):
    return {h.key: h.value for h in headlines_of(payloads)}


def words(payloads):
    return {c.key: c.word for c in conclusions_of(payloads)}


@pytest.mark.parametrize("basis", ["EN", "7-16", "IS", "points"])
def test_every_headline_stands_where_it_says(demand_job, basis):
    payloads = demand_job(basis).payloads()
    found = headlines_of(payloads)
    assert len({h.key for h in found}) == len(found)
    for headline in found:
        assert at(payloads, headline.at) == headline.value


def test_keys_of_conclusions_are_unique(demand_job):
    for basis in ("EN", "7-16", "IS", "points"):
        found = conclusions_of(demand_job(basis, name=basis).payloads())
        assert len({c.key for c in found}) == len(found)


def test_two_storeys_by_hand(demand_job):
    """Masses 2m, m and storey stiffnesses 2k, k: ω₁ = √(k/2m), effective masses 8/9 and 1/9 of all
    (Chopra, Dynamics of Structures, the two-storey shear frame; from memory, and worked out by hand)."""
    payloads = demand_job("EN").payloads()
    found, said = values(payloads), words(payloads)
    first = 2.0 * math.pi / math.sqrt(50000.0 / 200.0)
    assert found["storeys/mass"] == pytest.approx(300.0, rel=1e-12)
    assert found["storeys/weight"] == pytest.approx(300.0 * G, rel=1e-12)
    assert found["storeys/height"] == pytest.approx(7.0, rel=1e-12)
    assert found["modes/first period/x"] == pytest.approx(first, rel=1e-10)
    assert found["modes/first frequency/x"] == pytest.approx(1.0 / first, rel=1e-10)
    assert found["participation/first share/x"] == pytest.approx(8.0 / 9.0, rel=1e-10)
    assert found["participation/modes needed/x"] == 2
    assert found["participation/share reached/x"] == pytest.approx(1.0, rel=1e-10)
    assert said["participation/target/x"] == "reached"
    assert said["participation/modes needed/x"] == "2"
    assert said["modes/close modes/x"] == "none"
    assert said["modes/evidence"] == "within its limits"


def test_a_target_that_is_not_reached(demand_job):
    payloads = demand_job("EN", keep=1).payloads()
    found, said = values(payloads), words(payloads)
    assert "participation/modes needed/x" not in found
    assert found["participation/share reached/x"] == pytest.approx(8.0 / 9.0, rel=1e-10)
    assert said["participation/target/x"] == "not reached"


def test_conclusions_of_the_demand(demand_job):
    payloads = demand_job("7-16").payloads()
    found, said = values(payloads), words(payloads)
    assert found["actions/static/x"] == pytest.approx(0.125 * 300.0 * G, rel=1e-9)  # S_DS/(R/I_e) = 1.0/8 of the weight
    assert said["demand/permitted/x"] == "passes"
    assert said["demand/torsion/x"] == "not assessed"
    assert said["drift/limit/x"] in ("passes", "exceeds")
    assert said["drift/second order/x"] == "passes"
    assert said["drift/screen/x/weak storey"] == "not assessed"
    assert said["actions/scaled/x"] == "scaled"
    no_static = words(demand_job("points", name="points").payloads())
    assert not any("static" in key for key in no_static)
    assert no_static["drift/second order/x"] == "not assessed"


@pytest.mark.parametrize(
    ("load", "word"),
    # θ = P d_r/(V h) = P q/(k h) = P · 3/(1e5 · 4) in the lower storey: 0.075, 0.15 and 0.375, of which 0.3 is allowed
    [(10_000, "ignored"), (20_000, "amplified"), (50_000, "to be redesigned")],
)
def test_second_order_beyond_its_limit_is_redesigned(demand_job, load, word):
    table = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]\n"
    job = demand_job("EN", storeys=table + f"Roof,3,100,50000,80000,0\n1,4,200,100000,160000,{load}\n")
    assert words(job.payloads())["drift/amplified/x"] == word


def test_evidence_beyond_its_limit_is_concluded(demand_job):
    payloads = demand_job("EN").payloads()
    modes = payloads["modes"]
    figures = [dict(e, within=e["key"] != "sturm-x") for e in modes["evidence"]]
    assert words({**payloads, "modes": {**modes, "evidence": figures}})["modes/evidence"] == "beyond its limits"


def test_one_of_several_steps_goes_by_its_name(demand_job):
    payloads = demand_job("EN").payloads()
    found = {h.key: h.label for h in headlines_of({**payloads, "gross": payloads["modes"]})}
    assert found["modes/first period/x"] == "First period T₁ in x"
    assert found["gross/first period/x"] == "First period T₁ in x (gross)"


def test_what_is_not_ok_says_nothing(demand_job):
    payloads = demand_job("EN").payloads()
    refused = {key: {**p, "state": "refused", "result": None} for key, p in payloads.items()}
    assert headlines_of(refused) == conclusions_of(refused) == ()
