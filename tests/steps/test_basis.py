"""The basis as a step: what the edition says, and the cautions that follow."""

from __future__ import annotations

import pytest

from calcsheet.steps.step import key_of

MASSES = """\
[[mass_basis]]
load = "Floors {0}"
share = 1.0
clause = "3.2.4"
[[mass_basis]]
load = "Snow"
share = 0.2
clause = ""
[answers]"""


def cautions(job):
    return {key_of(c["kind"], c["subject"]): c for c in job.payload("basis")["cautions"]}


@pytest.mark.parametrize(
    ("basis", "name", "importance"),
    [
        ("EN", "EN 1998-1:2004", ("γ_I", 1.0)),
        ("7-16", "ASCE/SEI 7-16", ("I_e", 1.0)),
        ("7-22", "ASCE/SEI 7-22", ("I_e", 1.0)),
        ("IS", "IS 1893 (Part 1):2016", ("I", 1.2)),
        ("points", "given points", ("I", 1.0)),
    ],
)
def test_what_the_edition_says(demand_job, basis, name, importance):
    payload = demand_job(basis).payload("basis")
    said = payload["result"]
    assert said["edition"] == name
    assert (said["importance"]["symbol"], said["importance"]["value"]) == importance
    assert said["damping"]["value"] == 0.05
    assert payload["inputs"]["combination"] == "CQC"
    texts = [c["text"] for c in payload["cautions"]]
    assert any(name in text and "for the engineer to confirm" in text for text in texts)
    assert any(said["level"] in text for text in texts)


def test_masses_without_a_basis_ask_for_an_answer(demand_job):
    bare = cautions(demand_job("EN", name="bare"))
    assert bare["no-mass-basis"]["answer"]
    stated = cautions(demand_job("EN", card=[("[answers]", MASSES)], name="stated"))
    assert "no-mass-basis" not in stated
    assert "mass-basis-1" not in stated
    assert stated["mass-basis-2"]["text"] == "Mass basis, Snow: stated without its clause."


def test_a_ground_acceleration_that_may_be_in_another_unit_asks_for_an_answer(demand_job):
    weak = cautions(demand_job("EN", ("= 0.2", "= 0.6"), name="weak"))
    assert "ground-acceleration" not in weak
    strong = cautions(demand_job("EN", ("= 0.2", "= 1.5"), name="strong"))["ground-acceleration"]
    assert strong["answer"]
    assert strong["numbers"] == [{"value": 1.5, "quantity": "ratio", "at": "inputs/edition/ground_acceleration"}]


@pytest.mark.parametrize(
    ("changes", "why"),
    [
        ((("q_x = 3", "q_x = 0.9"),), "job.toml, basis.q_x: got 0.9; must be a number 1 or above (behaviour factor in x)"),
        ((('ground = "B"', 'ground = "F"'),), 'job.toml, basis.ground: got "F"; must be "A", "B", "C", "D", "E" or "own"'),
        ((("q_x = 3", "q_x = 3\nr_x = 8"),), "job.toml, basis.r_x: a parameter of ASCE/SEI 7-16, ASCE/SEI 7-22 and IS 1893 "
         '(Part 1):2016; must be left out with edition "EN 1998-1:2004"'),
    ],
)  # fmt: skip
def test_a_wrong_key_is_refused_in_one_sentence_and_what_follows_waits(demand_job, changes, why):
    job = demand_job("EN", *changes)
    assert (job.payload("basis")["state"], job.payload("basis")["why"]) == ("refused", why)
    assert job.payload("participation")["state"] == "ok"
    for kind in ("demand", "peaks", "drift", "actions"):
        assert job.payload(kind)["state"] == "waiting"
        assert why in job.payload(kind)["why"]
