"""Inputs leaf by leaf."""

from __future__ import annotations

import dataclasses

import pytest

from calcsheet.steps.given import inputs_of

NAMES = (
    "[answers]",
    """[[mass_basis]]
load = "Archive, 5/6"
share = 0.8
clause = "4.2.4"
[[mass_basis]]
load = "Archive, 5/6"
share = 0.6
[[second_model]]
quantity = "weight"
value = 2900.5
origin = "by hand"
[answers]""",
)


def followed(payloads, pointer):
    for part in pointer.removeprefix("/").split("/"):
        part = part.replace("~1", "/").replace("~0", "~")
        payloads = payloads[int(part)] if isinstance(payloads, list) else payloads[part]
    return payloads


def held(payloads):
    found = {(g.level, g.key): g for g in inputs_of(payloads)}
    assert len(found) == len(inputs_of(payloads))
    return found


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_every_input_stands_where_it_says(demand_job, basis):
    payloads = demand_job(basis, card=[NAMES]).payloads()
    for given in inputs_of(payloads):
        value = followed(payloads, given.at)
        if given.text == "stated":
            assert value in given.label
        elif given.number is None:
            assert given.text == (str(value).lower() if isinstance(value, bool) else value)
        else:
            assert given.number == value
            assert given.text == ""


def test_storeys_by_level(demand_job):
    found = held(demand_job("EN", card=[("base_elevation = 1.2", "base_elevation = 2.5")]).payloads())
    assert {level for level, _ in found} == {"", "1", "Roof"}
    for key, quantity, below, above in (
        ("storey_height", "length", 4.0, 3.0),
        ("mass", "mass", 200.0, 100.0),
        ("gravity", "force", 1950.0, 950.0),
        ("stiffness x, gross", "stiffness", 100000.0, 50000.0),
        ("stiffness y, cracked", "stiffness", 80000.0, 40000.0),
    ):
        assert (found["1", key].quantity, found["1", key].number) == (quantity, below)
        assert found["Roof", key].number == pytest.approx(above, rel=1e-12)
    assert found["", "levels.base_elevation"].number == 2.5
    assert ("1", "area") not in found


def test_weights_where_weights_were_given(job_folder, chain):
    from calcsheet.steps.graph import Job

    found = held(chain(Job(job_folder(us=True))).payloads())
    assert ("2", "mass") not in found
    assert found["2", "weight"].number / 4.4482216152605 == pytest.approx(561.0, rel=1e-12)  # kN a kip, exact
    assert found["Plaza", "below.mass"].quantity == "mass"
    assert found["", "levels.effective_base"].text == "Plaza"


def test_a_matrix_by_level_and_column(job_folder):
    from calcsheet.steps.graph import Job

    rows = "level,Roof,1\nRoof,50000,-50000\n1,-50000,150000\n"
    card = [
        ('kind = "storey chain"', 'kind = "stiffness matrix"\nx = "x.csv"\ny = "x.csv"'),
    ]
    files = {"storeys.csv": "level,storey height [m],mass [t]\nRoof,3,100\n1,4,200\n"}
    folder = job_folder(card, files={**files, "x.csv": rows.replace("level", "stiffness [kN/m]")})
    payloads = Job(folder).payloads()
    assert payloads["storeys"]["state"] == "ok", payloads["storeys"]["why"]
    found = held(payloads)
    assert found["1", "stiffness matrix x, gross, column Roof"].number == -50000.0
    assert found["1", "stiffness matrix x, gross, column 1"].number == 150000.0
    for given in found.values():
        if "matrix" in given.key:
            assert followed(payloads, given.at) == given.number


def test_keys_of_the_card_and_of_the_basis(demand_job):
    payloads = demand_job("EN", card=[NAMES]).payloads()
    found = {key: g for (level, key), g in held(payloads).items() if not level}
    assert found["stiffness.cracked.factor_x"].number == 0.6
    assert found["basis.q_x"].number == 3.0
    assert found["basis.q_x"].label.startswith("basis.q_x: ")
    assert found["basis.edition"].text == "EN 1998-1:2004"
    assert found['mass_basis."Archive, 5/6".share'].number == 0.8
    assert found['mass_basis."Archive, 5/6 (2)".share'].number == 0.6
    assert found["second_model.weight.value"].quantity == "weight"
    assert found["modes.share"].number == 0.9
    left_out = ("people", "answers", "format", "levels.b", "job.revision", "job.date", "job.reason")
    assert not [k for k in found if k.startswith(left_out) and k != "levels.base_elevation"]


def test_the_cards_basis_counts_where_no_step_has_it(demand_job):
    payloads = {k: p for k, p in demand_job("EN").payloads().items() if k in ("card", "storeys")}
    found = {g.key: g for g in inputs_of(payloads)}
    assert found["basis.q_x"].at == "/card/inputs/basis/q_x"


@pytest.mark.parametrize("empty", [None, "", [], {}, False])
def test_an_empty_entry_is_none(demand_job, empty):
    payloads = demand_job("EN").payloads()
    basis = payloads["basis"]
    edition = {**basis["inputs"]["edition"], "of_a_later_version": empty}
    later = {**payloads, "basis": {**basis, "inputs": {**basis["inputs"], "edition": edition, "another": empty}}}
    later["card"] = {**later["card"], "inputs": {**later["card"]["inputs"], "another": empty}}
    later["modes"] = {**later["modes"], "inputs": {**later["modes"]["inputs"], "another": empty}}
    assert inputs_of(later) == inputs_of(payloads)


def test_a_parameter_that_an_earlier_version_had_not_stands_at_its_default(demand_job):
    from calcsheet.core.codes.asce7_16 import ASCE716

    payloads = demand_job("7-16").payloads()
    usual = {f.name: f.default for f in dataclasses.fields(ASCE716) if f.default is not dataclasses.MISSING}
    given = payloads["basis"]["inputs"]["edition"]
    without = {k: v for k, v in given.items() if k not in usual or v != usual[k]}
    assert len(without) < len(given)
    basis = {**payloads["basis"], "inputs": {**payloads["basis"]["inputs"], "edition": without}}
    earlier = {(g.level, g.key): g for g in inputs_of({**payloads, "basis": basis})}
    assert earlier == held(payloads)
