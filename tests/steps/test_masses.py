"""The mass take-off as a step: worked lines that can be worked out again, cautions, and a job that lives on it."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest

from calcsheet.core.floors import Floors, Load, OtherMass
from calcsheet.job import edits
from calcsheet.steps.given import inputs_of
from calcsheet.steps.graph import Job
from calcsheet.steps.masses import run
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.replay import replay

G = 9.80665


def floors(**parts) -> Floors:
    """Two levels of 20 m × 15 m under a set-back roof."""
    given = {
        "level": ("1", "2", "Roof"),
        "below": 0,
        "storey_height": np.array([4.4, 3.3, 3.0]),
        "area": np.array([300.0, 300.0, 180.0]),
        "plan_x": np.array([20.0, 20.0, 12.0]),
        "plan_y": np.full(3, 15.0),
        "centre_x": np.array([0.0, 0.0, -4.0]),
        "centre_y": np.zeros(3),
        "own_radius": (None, 8.1, None),
        "load": (
            Load("slab {a_b}", "permanent", "floor", 7.2, 1.0, ""),
            Load("offices", "variable", "floor", 3.0, 0.3, "4.2.4"),
            Load("façade", "permanent", "façade", 0.9, 1.0, ""),
            Load("columns", "permanent", "columns", 25.0, 1.0, ""),
        ),
        "amount": np.array([[290, 250, 70, 2.4], [300, 260, 70, 2.1], [180, 0, 54, 1.6]]),
        "other": (OtherMass("Roof", "chiller {1}", 85.0, -2.0, -3.0, 3.0, 2.0),),
    }
    return Floors(**(given | parts))


def keys(given: Floors) -> list[str]:
    return [c.key for c in run(given).cautions]


def at(payload, pointer: str):
    for part in pointer.split("/"):
        payload = payload[int(part)] if isinstance(payload, list) else payload[part]
    return payload


@pytest.fixture
def folder(job_folder):
    """Three levels whose masses come from floors.csv."""

    def write(card=(("[answers]", '[masses]\nsource = "floors.csv"\n[answers]'),), **files):
        texts = {
            "storeys.csv": "level,storey height [m],stiffness x [kN/m],stiffness y [kN/m]\n"
            "Roof,3.0,148000,131000\n2,3.3,160000,150000\n1,4.4,155000,140000\n",
            "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²],façade [m]\n"
            "Roof,180,12,15,180,54\n2,300,20,15,300,70\n1,300,20,15,290,70\n",
            "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,7.2\nfaçade,permanent,façade,0.9\n",
        }
        return job_folder(card, files=texts | files)

    return write


def test_every_level_can_be_worked_out_from_its_line():
    """The line's own words as a formula, its numbers put in: the mass in the result."""
    outcome = run(floors())
    lines = [line for line in outcome.lines if line.quantity.startswith("Mass, ")]
    assert [line.result.value for line in lines] == outcome.result.mass[::-1].tolist()
    for line in lines:
        names = line.substitution.replace("slab {{a_b}}", "").replace("chiller {{1}}", "")
        formula = (
            re.sub("offices|façade|columns", "", names).replace("×", "*").replace("½", "0.5").replace("/ g", f"/ {G}")
        )
        formula = formula.replace("0.5 (", "0.5 * (")
        found = eval(formula.format(*(n.value for n in line.numbers)))
        assert found == pytest.approx(line.result.value, rel=1e-12)


def test_a_level_by_hand():
    """Level 2: 300·7.2 + 260·0.3·3.0 + ½·0.9·(3.3·70 + 3.0·54) + ½·25·(3.3·2.1 + 3.0·1.6) kN."""
    weight = 2160.0 + 234.0 + 0.45 * (231.0 + 162.0) + 12.5 * (6.93 + 4.8)
    assert run(floors()).result.mass[1] == pytest.approx(weight / G, rel=1e-14)


def test_other_lines():
    outcome = run(floors())
    share, radius = outcome.lines[0], outcome.lines[-1]
    assert share.quantity == "offices: share held by the masses"
    assert (share.result.value, share.reference) == (pytest.approx(0.9), "4.2.4")
    inertia, mass = (n.value for n in radius.numbers)
    assert (inertia / mass) ** 0.5 == pytest.approx(radius.result.value, rel=1e-14)


def test_numbers_stand_where_they_say(folder):
    payload = Job(folder()).payload("masses")
    numbers = [n for line in payload["lines"] for n in (*line["numbers"], line["result"])]
    numbers += [n for c in payload["cautions"] for n in c["numbers"]]
    assert len(numbers) > 30
    assert [at(payload, n["at"]) for n in numbers] == [n["value"] for n in numbers]


def test_a_usual_building_raises_nothing():
    assert keys(floors()) == []


def test_columns_that_are_not_known_are_told():
    (caution,) = run(floors(unused=('floors.csv, column "radius" isn\'t known: not used, and kept',))).cautions
    assert caution.key == "unused-columns"
    assert caution.text == 'Tables of the mass take-off: floors.csv, column "radius" isn\'t known: not used, and kept.'


def test_a_load_without_a_share():
    given = floors()
    bare = replace(given, load=(given.load[0], replace(given.load[1], share=None), *given.load[2:]))
    (caution,) = run(bare).cautions
    assert (caution.key, caution.answer) == ("no-mass-share-offices", True)


@pytest.mark.parametrize(
    ("value", "levels", "asked"), [(20.0, [2, 1, 0], False), (0.5, [0, 1, 2], False), (200.0, [0, 1, 2], True)]
)
def test_weight_per_area_beyond_the_usual(value, levels, asked):
    given = floors()
    (caution,) = run(replace(given, load=(replace(given.load[0], value=value), *given.load[1:]))).cautions
    assert (caution.key, caution.answer) == ("weight-per-area-take-off", asked)
    assert {n.at for n in caution.numbers} == {f"result/weight_per_area/{i}" for i in levels}


def test_levels_below_the_base_may_be_heavy():
    given = floors()
    heavy = given.amount.copy()
    heavy[0, 3] = 120.0
    assert keys(replace(given, amount=heavy)) == ["weight-per-area-take-off"]
    assert keys(replace(given, amount=heavy, below=1)) == []


def test_a_centre_of_mass_outside_the_plan():
    (caution,) = run(floors(other=(OtherMass("Roof", "tank", 900.0, 25.0, 0.0, 3.0, 2.0),))).cautions
    assert (caution.key, caution.answer) == ("centre-outside-plan-Roof", True)


def test_a_load_that_covers_more_than_the_floor():
    amount = floors().amount.copy()
    amount[1, 0] = 301.0
    (caution,) = run(floors(amount=amount)).cautions
    assert caution.key == "covers-more-slab {a_b}"
    assert [n.value for n in caution.numbers] == [301.0, 300.0]


def test_masses_that_the_storey_table_states_differently():
    mass = run(floors()).result.mass
    assert keys(floors(stated=mass * 1.009)) == []
    (caution,) = run(floors(stated=mass * np.array([1.0, 0.8, 1.02]))).cautions
    assert (caution.key, caution.answer) == ("masses-differ", True)
    assert [n.at for n in caution.numbers] == ["inputs/stated/1", "result/mass/1"]
    assert "and 1 more level" in caution.text


def test_a_job_takes_its_masses_from_the_floors(folder):
    job = Job(folder())
    job.attach("modes", ModesOptions())
    payloads = job.payloads()
    assert {p["state"] for p in payloads.values()} == {"ok"}
    assert payloads["storeys"]["inputs"]["mass"] == payloads["masses"]["result"]["mass"]
    assert payloads["storeys"]["inputs"]["given"] == "take-off"
    assert replay(payloads) == []


def test_a_storey_height_changes_the_masses_at_once(folder):
    job = Job(folder())
    before = job.payload("storeys")["inputs"]["mass"]
    job.edit(lambda reading: edits.set_number(reading, "2", "storey height", 4.3))
    after = job.payload("storeys")["inputs"]["mass"]
    # by hand: ½·0.9·70 kN for each metre that storey 2 grows, to the levels at both ends
    assert np.subtract(after, before) == pytest.approx([31.5 / G, 31.5 / G, 0.0], abs=1e-12)


def test_without_its_tables_it_is_refused_and_the_storeys_live(job_folder):
    job = Job(job_folder())
    job.attach("masses", None)
    payloads = job.payloads()
    assert payloads["masses"]["state"] == "refused"
    assert payloads["masses"]["why"] == "no floors.csv and loads.csv in the job folder; the mass take-off needs both"
    assert payloads["storeys"]["state"] == "ok"


def test_problems_hold_back_the_storeys_that_need_it_and_no_others(folder, job_folder):
    broken = {
        "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,x\nfaçade,permanent,façade,0.9\n"
    }
    job = Job(folder(**broken))
    assert job.payload("storeys")["state"] == job.payload("masses")["state"] == "refused"
    assert job.payload("storeys")["why"] == 'loads.csv, load "slab": load per area "x"; must be a number in kN/m²'
    apart = Job(job_folder(name="apart", files={"loads.csv": "", "floors.csv": "level\n"}))
    apart.attach("masses", None)
    assert apart.payload("storeys")["state"] == "ok"
    assert apart.payload("masses")["state"] == "refused"


def test_a_table_changed_on_disk_is_noticed(folder):
    job = Job(folder())
    (job.folder.path / "loads.csv").write_text("load\n", encoding="utf-8")
    job.look()
    assert job.status.text == "loads.csv: changed on disk since read here"
    job.load()
    assert job.payload("storeys")["state"] == "refused"


def test_the_card_says_where_the_tables_come_from(folder):
    asked = {c["subject"] for c in Job(folder()).payload("card")["cautions"] if c["kind"] == "no-origin"}
    assert {"floors.csv", "loads.csv"} <= asked


def test_what_was_given_goes_by_names_of_loads_levels_and_items(folder):
    """Another load in front, another level's mass: only these differ, whatever their places in the tables."""
    masses = "level,item,weight [kN],x [m],y [m]\nRoof,fan,8,1,1\nRoof,fan,9,2,2\n"
    payloads = Job(folder(**{"masses.csv": masses})).payloads()
    found = {(g.level, g.key): g for g in inputs_of(payloads)}
    assert len(found) == len(inputs_of(payloads))
    for given in found.values():
        if given.at.startswith("/masses"):
            value = at(payloads, given.at.removeprefix("/"))
            assert value == (given.text if given.number is None else given.number)
    amount = found["Roof", "load “façade”, length"]
    assert (amount.number, amount.quantity) == (54.0, "length")
    assert found["", "masses.load “slab”.value"].quantity == "area load"
    assert found["Roof", "other “fan” (2), weight"].number == 9.0
