"""The stiffness take-off as a step: fed to the storey table, replayed, and what it warns of."""

from __future__ import annotations

import json
from dataclasses import replace

import numpy as np
import pytest

from calcsheet.core.sections import Material, Section
from calcsheet.core.stiffnesstakeoff import Member, SetFactor, Takeoff
from calcsheet.steps.fromfiles import STIFFNESSES
from calcsheet.steps.given import inputs_of
from calcsheet.steps.graph import Job
from calcsheet.steps.replay import replay
from calcsheet.steps.serial import from_json, to_json
from calcsheet.steps.stiffnesstakeoff import run

MATERIALS = (Material("C", "concrete", 30e6, 12.5e6), Material("S", "steel", 200e6, 80e6))
SECTIONS = (
    Section("C40", "C", "rectangle", 0.4, 0.4),
    Section("B", "C", "rectangle", 0.6, 0.2),
    Section("W", "C", "rectangle", 3.0, 0.2),
    Section("D", "S", "own", area=2e-3),
)
COLUMN = Member(
    name="C1", kind="column", acts_as="fixed-fixed", first=0, last=1, section="C40", along=(1.0, 0.0), count=4, axis="major",
    factor=0.7, shear=False, shear_factor=1.0, height=None, run=None, beam="", beam_below="", spans=(), beam_factor=1.0,
    ground="cracked",
)  # fmt: skip
HELD = replace(COLUMN, acts_as="beams", beam="B", beam_below="B", spans=(6.0,), beam_factor=0.5)
WALL = replace(COLUMN, name="W1", kind="wall", acts_as="cantilever", section="W", count=1, shear=True, shear_factor=0.7)


def cautions(*members, storeys=2, factors=(), direction=("x",), **more):
    levels = tuple(str(i + 1) for i in range(storeys))
    members = tuple(replace(m, last=storeys - 1) for m in members)
    given = Takeoff(levels, np.full(storeys, 3.2), direction, MATERIALS, SECTIONS, members, tuple(factors), **more)
    return {c.key: c for c in run(given).cautions}


# ---- in a job --------------------------------------------------------------------------------------------------------


def test_the_storey_table_takes_it_times_the_factor_of_each_set(members_folder):
    payloads = Job(members_folder()).payloads()
    assert {key: p["state"] for key, p in payloads.items()} == {"card": "ok", "storeys": "ok", STIFFNESSES: "ok"}
    taken = {d["direction"]: np.array(d["storey"]) for d in payloads[STIFFNESSES]["result"]["directions"]}
    for given in payloads["storeys"]["inputs"]["stiffness"]:
        factor = {"gross": {"x": 1.0, "y": 1.0}, "cracked": {"x": 0.6, "y": 0.5}}[given["name"]]
        for d, lateral in given["lateral"].items():
            assert lateral["storey"] == pytest.approx(factor[d] * taken[d], rel=1e-15)


def test_it_needs_no_stiffness_columns_then(members_folder):
    folder = members_folder()
    rows = [line.rsplit(",", 2)[0] for line in (folder / "storeys.csv").read_text().splitlines()]
    (folder / "storeys.csv").write_text("\n".join(rows))
    job = Job(folder)
    assert job.payload("storeys")["state"] == "ok", job.payload("storeys")["why"]


def test_it_stands_beside_the_table_where_it_does_not_feed_it(members_folder):
    job = Job(members_folder(feeds=False))
    assert set(job.payloads()) == {"card", "storeys"}
    assert job.payload("storeys")["inputs"]["stiffness"][0]["lateral"]["x"]["storey"][0] == 171000
    job.attach(STIFFNESSES, None)
    assert job.payload(STIFFNESSES)["state"] == "ok"


def test_without_its_files_it_is_refused_and_the_storeys_are_not(job_folder):
    job = Job(job_folder())
    job.attach(STIFFNESSES, None)
    assert (job.payload(STIFFNESSES)["state"], job.payload(STIFFNESSES)["why"]) == (
        "refused",
        "no members.csv in the job folder; the stiffness take-off needs it",
    )
    assert job.payload("storeys")["state"] == "ok"


@pytest.mark.parametrize("feeds", [True, False])
def test_what_is_wrong_in_it_holds_up_what_takes_it(members_folder, feeds):
    job = Job(members_folder([("Posts,all", "Posts,7")], feeds=feeds))
    job.attach(STIFFNESSES, None)
    assert job.payload(STIFFNESSES)["state"] == "refused"
    assert job.payload(STIFFNESSES)["why"].startswith(
        'members.csv, row 6, member "Posts": storeys "7"; must be a level'
    )
    assert job.payload("storeys")["state"] == ("refused" if feeds else "ok")
    assert job.payload("card")["state"] == "ok"


def test_a_storey_without_members_is_named(members_folder):
    gone = [
        ("Inner upper,4 to Roof", "Inner upper,4"),
        ("Outer,all", "Outer,1 to 4"),
        ("Rods,2 to Roof", "Rods,2 to 4"),
    ]
    job = Job(members_folder(gone))
    assert job.payload("storeys")["why"] == (
        'members.csv, stiffness x of the storey below level "Roof": no member acts; must have at least one that acts in x'
    )
    assert job.payload(STIFFNESSES)["state"] == "refused"


def test_a_missing_file_is_named(members_folder):
    folder = members_folder()
    (folder / "sections.csv").unlink()
    assert Job(folder).payload("storeys")["why"].startswith("no sections.csv in ")
    assert Job(folder).payload("card")["state"] == "ok"


@pytest.mark.parametrize(
    ("changes", "why"),
    [
        ([("members.csv", "only,,5.4", "only,,1e200")], "storeys.csv, storey stiffness [kN/m]"),
        (
            [("members.csv", "beams,,,0.7", "beams,,,1e-320"), ("materials.csv", "31.5", "1e-9")],
            "members.csv: can't be calculated (float division by zero); check the sizes and their units",
        ),
        (
            [("sections.csv", "550,450", "1e110,1e110")],
            'sections.csv, row 2, section "C55": sizes beyond what can be calculated; must be those of a section',
        ),
    ],
    ids=["run", "factor", "size"],
)
def test_numbers_out_of_range_are_refused_in_words(members_folder, changes, why):
    folder = members_folder()
    for file, old, new in changes:
        text = (folder / file).read_text()
        assert old in text
        (folder / file).write_text(text.replace(old, new, 1))
    job = Job(folder)
    assert {job.payload(key)["state"] for key in ("storeys", STIFFNESSES)} == {"refused"}
    assert job.payload("storeys")["why"].startswith(why)


def test_wrong_masses_do_not_hold_up_the_take_off(members_folder):
    folder = members_folder()
    table = (folder / "storeys.csv").read_text()
    (folder / "storeys.csv").write_text(table.replace("141.5", "abc"))
    job = Job(folder)
    assert (job.payload("storeys")["state"], job.payload(STIFFNESSES)["state"]) == ("refused", "ok")
    (folder / "storeys.csv").write_text(table.replace("2.95", "abc"))
    job.load()
    assert job.payload(STIFFNESSES)["why"] == (
        "storeys.csv: its levels and storey heights can't be read; the stiffness take-off needs them"
    )
    assert job.payload("storeys")["why"].startswith('storeys.csv, level "Roof": storey height "abc"')


def test_an_edit_of_a_height_goes_through_both(members_folder):
    job = Job(members_folder())
    before = job.payloads()
    path = job.folder.path / "members.csv"
    path.write_text(path.read_text().replace("C55,x,6", "C55,x,7"))
    assert job.folder.changed_on_disk(job.files) == ("members.csv",)
    job.load()
    after = job.payloads()
    for key, at in ((STIFFNESSES, "result"), ("storeys", "inputs")):
        assert before[key][at] != after[key][at]


def test_levels_at_the_base_and_below_are_no_storeys(members_folder):
    job = Job(members_folder(us=True))
    assert job.payload(STIFFNESSES)["inputs"]["level"] == ["2", "3", "4", "5", "Roof"]
    assert job.payload("storeys")["inputs"]["below"][0]["level"] == "Plaza"


@pytest.mark.parametrize("us", [False, True])
def test_replay_and_storage(members_folder, us):
    payloads = Job(members_folder(us=us)).payloads()
    assert replay(payloads) == []
    stored = json.loads(json.dumps(payloads))
    inputs = stored[STIFFNESSES]["inputs"]
    assert to_json(from_json(Takeoff, inputs)) == inputs
    stored[STIFFNESSES]["result"]["directions"][0]["storey"][1] *= 1.0001
    assert [d.field for d in replay(stored)] == ["result/directions/0/storey/1"]


def test_cards_that_contradict_it(members_folder):
    own = ("[stiffness.gross]\nfactor = 1.0", "[stiffness.gross]\nown = true")
    assert Job(members_folder(card=[own])).payload("card")["why"] == (
        "job.toml, stiffness.gross.own: got true; must be left out with model.members, which gives the stiffnesses of every set"
    )
    matrix = ('kind = "storey chain"', 'kind = "stiffness matrix"\nx = "k.csv"\ny = "k.csv"')
    assert Job(members_folder(card=[matrix], name="matrix")).payload("card")["why"] == (
        'job.toml, model.members: got "members.csv"; must be left out unless model.kind is "storey chain"'
    )


def test_what_was_given_goes_by_names_of_materials_sections_and_members(members_folder):
    payloads = Job(members_folder()).payloads()
    given = [g for g in inputs_of(payloads) if g.at.startswith(f"/{STIFFNESSES}/")]
    found = {g.label: g for g in given}
    assert len({g.key for g in given}) == len(given)
    for g in given:
        value = payloads[STIFFNESSES]
        for part in g.at.split("/")[2:]:
            value = value[int(part)] if isinstance(value, list) else value[part]
        assert g.number is None or g.number == value
    modulus, depth = found["material “Concrete”, modulus"], found["section “C55”, depth"]
    assert (modulus.number, modulus.quantity) == (31.5e6, "modulus")
    assert (depth.number, depth.quantity) == (0.55, "section size")
    assert found["section “W2”, second moment major"].quantity == "second moment"
    assert found["member “Inner”, count"].number == 6
    assert found["member “Inner”, storeys"].text == "1 to 3"
    assert found["member “Pier”, storeys"].text == "1"
    assert found["member “Ties”, direction"].text == "35° from x"
    assert (found["member “Inner”, stiffness factor"].number, found["member “Core”, shear"].text) == (0.7, "true")


def test_another_member_in_front_changes_no_other(members_folder):
    """What differs is told by member, section and material, whatever their rows."""
    more = ("Inner,1 to 3", "New,2,column,C40,y,1,fixed-fixed,,,,,,,,,,\nInner,1 to 3")
    before, after = (
        {g.key: (g.number, g.text) for g in inputs_of(Job(folder).payloads()) if g.at.startswith(f"/{STIFFNESSES}/")}
        for folder in (members_folder(), members_folder([more, ("C55,x,6", "C55,x,7")], name="after"))
    )
    assert before.keys() <= after.keys()
    assert all("member “New”" in key for key in after.keys() - before.keys())
    (changed,) = [key for key in before if before[key] != after[key]]
    assert "member “Inner”" in changed
    assert changed.endswith(".count")


# ---- cautions --------------------------------------------------------------------------------------------------------


def test_nothing_to_warn_of():
    assert cautions(replace(HELD, count=6)) == {}


def test_walls_that_bend_over_many_storeys():
    key = "walls-by-storey-x"
    assert key not in cautions(WALL, storeys=2)  # 6.4 m over 3 m
    found = cautions(WALL, storeys=3)[key]  # three storeys, 9.6/3 = 3.2 times as high as long
    assert found.answer
    assert [n.value for n in found.numbers] == pytest.approx([1.0, 3.2])
    assert key in cautions(WALL, storeys=4)
    # a wall of 530 000 kN/m beside columns of 16 400: less than half of the stiffness, and more
    assert key not in cautions(WALL, replace(COLUMN, count=75), storeys=4)
    assert key in cautions(WALL, replace(COLUMN, count=25), storeys=4)


def test_flexible_beams():
    flexible = replace(HELD, beam_factor=0.01)
    found = cautions(flexible)["flexible-beams-x"]
    # ρ = ½ · 0.01 · 108 000/6 over 0.7 · 64 000/3.2
    assert found.numbers[0].value == pytest.approx(90.0 / 14_000.0)
    assert "flexible-beams-x" not in cautions(HELD)


def test_rigid_beams_are_an_upper_bound():
    assert "C1; this is an upper bound" in cautions(COLUMN)["rigid-beams"].text
    assert "rigid-beams" not in cautions(HELD)


def test_d_values_of_one_storey():
    assert "d-values-one-storey" in cautions(HELD, storeys=1)
    assert "d-values-one-storey" not in cautions(replace(HELD, acts_as="beams on pinned base"), storeys=1)


@pytest.mark.parametrize(
    "member",
    [replace(COLUMN, factor=1.0), replace(HELD, beam_factor=1.0), replace(WALL, shear_factor=1.0)],
    ids=["column", "beam", "shear"],
)
def test_uncracked_concrete(member):
    assert "uncracked-members" in cautions(member)
    full, cut = SetFactor("full", "x", 1.0), SetFactor("cut", "x", 0.5)
    assert "stiffness sets that reduce nothing: full" in cautions(member, factors=[full, cut])["uncracked-members"].text
    assert "uncracked-members" not in cautions(member, factors=[cut])


def test_steel_does_not_crack():
    brace = replace(COLUMN, kind="brace", acts_as="single", section="D", factor=1.0, run=5.0, ground="")
    assert cautions(brace) == {}


def test_reduced_twice():
    found = cautions(COLUMN, factors=[SetFactor("cut", "x", 0.5)])["reduced-twice"]
    assert found.text == "Reduced twice: the stiffness factors of members (C1) and of stiffness sets (cut) multiply."
    assert "reduced-twice" not in cautions(COLUMN, factors=[SetFactor("full", "x", 1.0)])


def test_factors_without_a_ground_and_files_without_an_origin():
    found = cautions(replace(COLUMN, ground=" "), no_origin=("sections.csv",))
    assert found["no-ground-of-members"].answer
    assert found["no-origin-sections.csv"].answer


def test_skew_members():
    along = (np.cos(np.radians(30.0)), np.sin(np.radians(30.0)))
    skew = replace(HELD, along=tuple(map(float, along)))
    assert cautions(skew, direction=("x", "y"))["skew-members"].numbers[0].value == pytest.approx(1.0)
    square = replace(HELD, name="C2", along=(-float(along[1]), float(along[0])))
    assert "skew-members" not in cautions(skew, square, direction=("x", "y"))


def test_names_with_braces_are_only_names():
    found = cautions(replace(COLUMN, name="C{0}"))["rigid-beams"]
    assert "C{0}" in found.text.format()
