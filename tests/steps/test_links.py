"""Storeys whose masses come from the take-off, held against it."""

from __future__ import annotations

import copy

import pytest

from calcsheet.steps.graph import Job
from calcsheet.steps.links import links
from calcsheet.steps.replay import replay

FILES = {
    "storeys.csv": "level,elevation [m],stiffness x [kN/m],stiffness y [kN/m]\nRoof,9,5e4,6e4\n1,5,7e4,8e4\nG,0,,\n",
    "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²]\nRoof,180,12,15,180\n1,300,20,15,300\nG,300,20,15,80\n",
    "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,7.2\n",
}
CARD = (
    ("[answers]", '[masses]\nsource = "floors.csv"\n[answers]'),
    ("base_elevation = 1.2", "base_elevation = -3"),
    ('effective_base = ""', 'effective_base = "G"'),
)


@pytest.fixture
def payloads(job_folder):
    return copy.deepcopy(Job(job_folder(CARD, files=FILES)).payloads())


def test_masses_are_the_takeoffs(payloads):
    assert payloads["storeys"]["state"] == "ok"
    assert links(payloads) == replay(payloads) == []


def test_a_mass_changed_on_either_side_is_named(payloads):
    payloads["storeys"]["inputs"]["below"][0]["mass"] += 1e-9
    payloads["storeys"]["inputs"]["mass"][0] += 1e-9
    assert [(d.step, d.field) for d in links(payloads)] == [
        ("storeys", 'inputs/mass, level "G"'),
        ("storeys", 'inputs/mass, level "1"'),
    ]
    assert {d.step for d in replay(payloads)} == {"storeys"}


def test_a_takeoff_that_is_not_stored_is_named(payloads):
    del payloads["masses"]
    assert [d.found for d in links(payloads)] == ["no mass take-off is stored"]


def test_masses_typed_by_hand_are_held_against_nothing(job_folder):
    assert links(Job(job_folder()).payloads()) == []


def test_what_no_step_has_made_is_malformed(payloads):
    payloads["storeys"]["inputs"]["below"] = 3
    assert ("masses", "result/mass") in {(d.step, d.field) for d in replay(payloads)}
