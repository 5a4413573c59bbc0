"""A job that takes both masses and stiffnesses off: storeys.csv holds levels and heights alone."""

from __future__ import annotations

import copy
import json

import nbformat
import numpy as np
import pytest
from click.testing import CliRunner

from calcsheet.blocks import JobCard, MassTakeoff, StiffnessTakeoff
from calcsheet.cli import main
from calcsheet.job.adopt import adoption
from calcsheet.job.edits import set_number
from calcsheet.job.errors import InputError
from calcsheet.record.check.finding import AGREES, DIFFERS
from calcsheet.record.check.given import said_twice
from calcsheet.record.collect import collect, refuse_stale
from calcsheet.record.errors import RecordError
from calcsheet.record.issue import issue
from calcsheet.steps.fromfiles import MASSES, STIFFNESSES
from calcsheet.steps.graph import Job
from calcsheet.steps.replay import replay

FILES = {
    "storeys.csv": "level,storey height [m]\nRoof,2.9\n2,3.2\n1,4.1\n",
    "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²],offices [m²]\n"
    "Roof,180,15,12,180,\n2,240,20,12,240,200\n1,240,20,12,240,210\n",
    "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,7.5\noffices,variable,floor,3\n",
    "members.csv": "member,storeys,kind,section,direction,count,acts as,stiffness factor,ground\n"
    "Long,all,column,C,x,9,fixed-fixed,0.7,cracked\nShort,all,column,C,y,8,fixed-fixed,0.7,cracked\n",
    "sections.csv": "section,material,shape,depth [mm],width [mm]\nC,Concrete,rectangle,400,400\n",
    "materials.csv": "material,kind,modulus [GPa],Poisson ratio\nConcrete,concrete,30,0.2\n",
}
SHARE = ("[answers]", '[[mass_basis]]\nload = "offices"\nshare = 0.3\n[answers]')
FROM_FLOORS = ("[answers]", '[masses]\nsource = "floors.csv"\n[answers]')
FROM_MEMBERS = ('kind = "storey chain"', 'kind = "storey chain"\nmembers = "members.csv"')
CELLS = (
    "from calcsheet import JobCard, MassTakeoff, ModeSolver, StiffnessTakeoff, StoreyTable",
    'job = JobCard(".")\njob',
    "MassTakeoff(job)",
    "StiffnessTakeoff(job)",
    "storeys = StoreyTable(job)\nstoreys",
    "ModeSolver(storeys)",
)
# by hand: W = 7.5·A + 0.3·3·offices over g; k = n·0.7·12EI/h³ with EI = 30e6·0.4⁴/12 = 64 000 kN·m²
WEIGHT = np.array([7.5 * 240 + 0.9 * 210, 7.5 * 240 + 0.9 * 200, 7.5 * 180])
COLUMN = 0.7 * 12 * 64_000 / np.array([4.1, 3.2, 2.9]) ** 3


@pytest.fixture
def both(job_folder):
    """The folder of the job, with files changed."""

    def write(card=(SHARE, FROM_FLOORS, FROM_MEMBERS), name="both", **changes):
        return job_folder(card, files=FILES | changes, name=name)

    return write


@pytest.fixture
def with_notebook(quick_kernel, both, new_notebook):
    def write(cells=CELLS, **how):
        folder = both(**how)
        nbformat.write(new_notebook(cells), folder / "calc.ipynb")
        return folder

    return write


def test_storeys_of_levels_and_heights_alone(both):
    payloads = Job(both()).payloads()
    assert {key: p["state"] for key, p in payloads.items()} == dict.fromkeys(
        ("card", "storeys", MASSES, STIFFNESSES), "ok"
    )
    storeys = payloads["storeys"]["inputs"]
    assert storeys["mass"] == pytest.approx(WEIGHT / 9.80665, rel=1e-14)
    for given, factor in zip(storeys["stiffness"], ({"x": 1.0, "y": 1.0}, {"x": 0.6, "y": 0.5}), strict=True):
        for d, count in (("x", 9), ("y", 8)):
            assert given["lateral"][d]["storey"] == pytest.approx(factor[d] * count * COLUMN, rel=1e-13)
    assert replay(payloads) == []
    assert [f.verdict for f in said_twice(payloads)] == [AGREES]


def test_it_is_issued_and_checked(with_notebook, document):
    files = issue(with_notebook(), to=["html"]).files
    html, data = (path.read_text(encoding="utf-8") for path in files)
    seen = document(html)
    for title in ("Mass take-off", "Stiffness take-off"):
        assert seen.headings.count(title) == 2  # where the notebook shows it, and among the inputs
    for words in ("mass by take-off", "taken off from members.csv, before the factors of the stiffness sets"):
        assert words in seen.words
    assert replay(json.loads(data)["payloads"]) == []
    result = CliRunner().invoke(main, ["check", str(files[0])], prog_name="calcsheet")
    assert result.exit_code == 0, result.output


def test_both_stand_in_the_record_though_no_cell_shows_them(with_notebook, document):
    cells = tuple(cell for cell in CELLS if "Takeoff(job)" not in cell)
    html, data = (path.read_text(encoding="utf-8") for path in issue(with_notebook(cells), to=["html"]).files)
    assert {MASSES, STIFFNESSES} <= json.loads(data)["payloads"].keys()
    seen = document(html)
    for words in ("Weights by level and load", "Sections and their properties"):
        assert words in seen.words


@pytest.mark.parametrize(
    ("file", "old", "new", "said"),
    [
        ("loads.csv", "7.5", "7.6", "storeys.csv or a table of the mass take-off"),
        ("sections.csv", "400,400", "410,400", "storeys.csv or a table of the stiffness take-off"),
    ],
)
def test_a_table_changed_since_makes_the_notebook_stale(both, static, monkeypatch, file, old, new, said):
    folder = both()
    monkeypatch.chdir(folder)
    content = collect(static.executed(CELLS))
    refuse_stale(content, folder)
    text = (folder / file).read_text(encoding="utf-8")
    (folder / file).write_text(text.replace(old, new, 1), encoding="utf-8")
    with pytest.raises(RecordError, match=f"the notebook is stale: {said} in this folder isn't what it shows"):
        refuse_stale(content, folder)


@pytest.mark.parametrize(
    ("path", "at"),
    [
        (("storeys", "inputs", "mass", 0), "/storeys/inputs/mass/0"),
        (("storeys", "inputs", "storey_height", 1), "/storeys/inputs/storey_height/1"),
        (
            ("storeys", "inputs", "stiffness", 1, "lateral", "y", "storey", 2),
            "/storeys/inputs/stiffness/1/lateral/y/storey/2",
        ),
        (
            (STIFFNESSES, "result", "directions", 0, "storey", 0),
            "/storeys/inputs/stiffness/0/lateral/x/storey/0",
        ),
        ((STIFFNESSES, "inputs", "factors", 3, "factor"), f"/{STIFFNESSES}/inputs/factors/3/factor"),
        (("card", "inputs", "stiffness", "cracked", "factor_x"), f"/{STIFFNESSES}/inputs/factors/2/factor"),
    ],
)
def test_what_record_and_take_offs_say_differently_is_found(both, path, at):
    payloads = copy.deepcopy(Job(both()).payloads())
    *way, last = path
    place = payloads
    for step in way:
        place = place[step]
    place[last] *= 1.001
    assert at in [f.place for f in said_twice(payloads) if f.verdict == DIFFERS]


def test_take_offs_that_the_record_lacks_are_found(both):
    payloads = copy.deepcopy(Job(both()).payloads())
    del payloads[MASSES], payloads[STIFFNESSES]
    assert [f.place for f in said_twice(payloads)] == ["/card/inputs/model/members", "/storeys/inputs/given"]


def test_levels_other_than_the_storeys_are_found(both):
    payloads = copy.deepcopy(Job(both()).payloads())
    payloads[STIFFNESSES]["inputs"]["level"][0] = "G"
    assert [f.place for f in said_twice(payloads)] == [f"/{STIFFNESSES}/inputs/level"]


def test_without_heights_both_say_so_and_the_storeys_say_why(both):
    job = Job(both(**{"storeys.csv": FILES["storeys.csv"].replace("3.2", "3.2 m")}))
    for key, words in ((MASSES, "mass take-off"), (STIFFNESSES, "stiffness take-off")):
        said = f"storeys.csv: its levels and storey heights can't be read; the {words} needs them"
        assert job.payload(key)["why"] == said
    assert job.payload("storeys")["why"].startswith('storeys.csv, level "2": storey height "3.2 m"')


def test_a_height_changes_both_at_once(both):
    job = Job(both())
    before = job.payload("storeys")["inputs"]["stiffness"][0]["lateral"]["x"]["storey"]
    job.edit(lambda reading: set_number(reading, "2", "storey height", 3.5))
    after = job.payload("storeys")["inputs"]["stiffness"][0]["lateral"]["x"]["storey"]
    assert [a / b for a, b in zip(after, before, strict=True)] == pytest.approx([1.0, (3.2 / 3.5) ** 3, 1.0], rel=1e-13)
    assert job.payload(MASSES)["inputs"]["storey_height"] == [4.1, 3.5, 2.9]


def test_both_are_adopted_once_into_one_table(both):
    blank = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]\nRoof,2.9,,,\n2,3.2,,,\n1,4.1,,,\n"
    card = JobCard(both((SHARE,), **{"storeys.csv": blank}))
    assert card.job.payload("storeys")["state"] == "refused"
    MassTakeoff(card).adopt()
    StiffnessTakeoff(card).adopt()
    storeys = card.job.payload("storeys")["inputs"]
    assert storeys["mass"] == pytest.approx(WEIGHT / 9.80665, rel=5e-6)
    assert storeys["stiffness"][0]["lateral"]["y"]["storey"] == pytest.approx(8 * COLUMN, rel=5e-6)


def test_neither_is_adopted_where_it_feeds_the_table(both):
    card = JobCard(both())
    for block, said in ((MassTakeoff, "masses.source"), (StiffnessTakeoff, "model.members")):
        with pytest.raises(InputError, match=f"^job.toml, {said}: "):
            block(card).adopt()


def test_factors_are_adopted_on_the_set_and_never_on_masses_taken_off(both):
    files = Job(both()).files
    assert adoption(files, "cracked", 1.0, {"x": 0.5, "y": 0.5}).values == {
        ("stiffness", "cracked", "factor_x"): 0.3,
        ("stiffness", "cracked", "factor_y"): 0.25,
    }
    with pytest.raises(
        InputError, match=r"^job\.toml, masses\.source: the masses come from floors\.csv; must be changed"
    ):
        adoption(files, "cracked", 1.1, {"x": 0.5, "y": 0.5})


def test_a_what_if_on_masses_taken_off_is_answered_and_not_adopted(shell, both, monkeypatch):
    folder = both()
    monkeypatch.chdir(folder)
    before = {name: (folder / name).read_bytes() for name in ("job.toml", "storeys.csv")}
    shell.run("from calcsheet import JobCard, ModeSolver, StoreyTable, WhatIf")
    shell.run('job = JobCard(".")\nmodes = ModeSolver(StoreyTable(job))')
    shell.run("WhatIf(modes)", "what if")
    link = shell.link("what if")
    assert link.say(op="factors", mass=1.21, x=0.9, y=1.0)["ok"]
    assert "masses × 1.21" in link.state["html"]
    assert link.state["adopting"] == ""
    assert link.state["note"]["text"].startswith("job.toml, masses.source: the masses come from floors.csv")
    assert not link.say(op="adopt", sentence="")["ok"]
    assert {name: (folder / name).read_bytes() for name in before} == before
