"""What a mass take-off shares with storey table and job card."""

from __future__ import annotations

import copy

import pytest

from calcsheet.record.check.finding import AGREES, DIFFERS
from calcsheet.record.check.given import said_twice
from calcsheet.steps.graph import Job

FILES = {
    "storeys.csv": "level,elevation [m],stiffness x [kN/m],stiffness y [kN/m]\nRoof,9,5e4,6e4\n1,5,7e4,8e4\nG,0,,\n",
    "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²],offices [m²]\n"
    "Roof,180,12,15,180,\n1,300,20,15,300,250\nG,300,20,15,80,\n",
    "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,7.2\noffices,variable,floor,3\n",
}
CARD = (
    ("[answers]", '[[mass_basis]]\nload = " Offices"\nshare = 0.3\n[masses]\nsource = "floors.csv"\n[answers]'),
    ("base_elevation = 1.2", "base_elevation = -3"),
    ('effective_base = ""', 'effective_base = "G"'),
)


@pytest.fixture
def payloads(job_folder):
    return copy.deepcopy(Job(job_folder(CARD, files=FILES)).payloads())


def places(payloads) -> list[str]:
    return [f.place for f in said_twice(payloads) if f.verdict == DIFFERS]


def test_masses_heights_and_shares_are_the_same(payloads):
    assert payloads["storeys"]["state"] == "ok"
    assert [f.verdict for f in said_twice(payloads)] == [AGREES]


@pytest.mark.parametrize(
    ("path", "at"),
    [
        (("storeys", "inputs", "mass", 1), "/storeys/inputs/mass/1"),
        (("masses", "result", "mass", 1), "/storeys/inputs/mass/0"),
        (("storeys", "inputs", "below", 0, "mass"), "/storeys/inputs/below/0/mass"),
        (("masses", "inputs", "storey_height", 2), "/storeys/inputs/storey_height/1"),
        (("masses", "inputs", "load", 0, "share"), "/masses/inputs/load/0/share"),
        (("masses", "inputs", "load", 1, "share"), "/masses/inputs/load/1/share"),
        (("card", "inputs", "mass_basis", 0, "share"), "/masses/inputs/load/1/share"),
    ],
)
def test_a_difference_is_named(payloads, path, at):
    *way, last = path
    place = payloads
    for step in way:
        place = place[step]
    place[last] *= 1.001
    assert at in places(payloads)


def test_what_one_side_lacks_is_named(payloads):
    no_share, no_level, no_takeoff = (copy.deepcopy(payloads) for _ in range(3))
    no_share["card"]["inputs"]["mass_basis"] = []
    assert places(no_share) == ["/masses/inputs/load/1/share"]
    no_level["masses"]["inputs"]["level"] = ["G", "2", "Roof"]
    assert "/storeys/inputs/level/0" in places(no_level)
    del no_takeoff["masses"]
    assert places(no_takeoff) == ["/storeys/inputs/given"]


def test_masses_of_the_storey_tables_own_are_not_held_against_it(job_folder):
    own = {"storeys.csv": FILES["storeys.csv"].replace("level,", "level,mass [t],").replace("Roof,", "Roof,90,")}
    own["storeys.csv"] = own["storeys.csv"].replace("\n1,", "\n1,300,").replace("\nG,", "\nG,5,")
    card = (("[answers]", '[[mass_basis]]\nload = "offices"\nshare = 0.3\n[answers]'), *CARD[1:])
    job = Job(job_folder(card, files=FILES | own))
    job.attach("masses", None)
    assert {p["state"] for p in job.payloads().values()} == {"ok"}
    assert places(job.payloads()) == []
