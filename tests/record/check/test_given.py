"""Inputs that a record holds twice."""

from __future__ import annotations

import copy

import pytest

from calcsheet.record.check.finding import AGREES, DIFFERS
from calcsheet.record.check.given import said_twice


def test_what_is_said_twice_is_the_same(record):
    assert [f.verdict for f in said_twice(record["payloads"])] == [AGREES]


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
@pytest.mark.parametrize("us", [False, True])
def test_it_is_the_same_in_every_edition_and_system(demand_job, basis, us):
    if us:
        storeys = (
            "level,storey height [ft],weight [kip],stiffness x [kip/in],stiffness y [kip/in]\n"
            "Roof,10,220,290,450\n1,13,440,570,910\n"
        )
        job = demand_job(basis, storeys=storeys, us=True, card=[('effective_base = "Plaza"', 'effective_base = ""')])
    else:
        job = demand_job(basis)
    assert {key: p["why"] for key, p in job.payloads().items() if p["state"] != "ok"} == {}
    assert [str(f) for f in said_twice(job.payloads()) if f.verdict == DIFFERS] == []


@pytest.mark.parametrize(
    ("path", "at"),
    [
        (("storeys", "inputs", "stiffness", 0, "lateral", "x", "storey", 1), "/storeys/inputs/stiffness/1/lateral/x"),
        (("card", "inputs", "stiffness", "soft", "factor_y"), "/storeys/inputs/stiffness/1/lateral/y"),
        (("storeys", "inputs", "storey_height", 2), "/storeys/inputs/storey_height/2"),
        (("storeys", "inputs", "elevation", 0), "/storeys/inputs/storey_height/0"),
        (("card", "inputs", "basis", "q_x"), "/basis/inputs/edition/q_x"),
        (("basis", "inputs", "edition", "ground_acceleration"), "/basis/inputs/edition/ground_acceleration"),
    ],
)
def test_a_difference_is_named(record, path, at):
    payloads = copy.deepcopy(record["payloads"])
    *way, last = path
    place = payloads
    for step in way:
        place = place[step]
    place[last] *= 1.001
    assert at in [f.place for f in said_twice(payloads) if f.verdict == DIFFERS]


def test_a_word_that_differs_is_named(record):
    payloads = copy.deepcopy(record["payloads"])
    payloads["basis"]["inputs"]["edition"]["ground"] = "A"
    (finding,) = said_twice(payloads)
    assert str(finding) == "/basis/inputs/edition/ground: ground is A, the job card has C"
