"""The what-if block: asked on the page, adopted into the files, in no record."""

from __future__ import annotations

import math
import re
import threading

import nbformat
import pytest

from calcsheet.blocks import ModeSolver, WhatIf
from calcsheet.job import textfile
from calcsheet.job.errors import NotSavedError
from calcsheet.record.collect import collect
from calcsheet.record.issue import issue

NOTICE = "A what-if is not part of the record."
CELLS = ("from calcsheet import WhatIf", "WhatIf(modes)")
PATIENCE = 30  # s


@pytest.fixture
def sheet(shell, in_folder, cells):
    for source in (*cells[:4], CELLS[0]):
        shell.run(source)
    shell.run(CELLS[1], "what if")
    return shell


@pytest.fixture
def link(sheet):
    return sheet.link("what if")


def texts(folder):
    return {name: (folder / name).read_text(encoding="utf-8") for name in ("job.toml", "storeys.csv")}


def first_periods(link):
    """First periods in x and y that the block shows, and those of the saved model."""
    found = re.findall(r"([\d.]+) s in . \(saved: ([\d.]+) s\)", link.state["short"])
    return [[float(new), float(old)] for new, old in found]


def test_it_starts_at_the_saved_model(link):
    assert link.state["factors"] == {"mass": 1.0, "x": 1.0, "y": 1.0}
    assert [f["label"] for f in link.state["fields"]] == ["mass factor", "stiffness factor x", "stiffness factor y"]
    assert all(new == old for new, old in first_periods(link))
    assert link.state["adopting"] == ""
    assert link.state["notice"] == NOTICE


def test_factors_are_answered_and_touch_no_file_and_no_payload(sheet, link, in_folder):
    before, held, revision = texts(in_folder), sheet["job"].job.payloads(), sheet["job"].job.revision
    assert link.say(op="factors", mass=1.21, x=1.0, y=0.81)["ok"]
    (x, x0), (y, y0) = first_periods(link)
    assert x == pytest.approx(1.1 * x0, rel=2e-3)  # √1.21, of numbers as shown
    assert y == pytest.approx(math.sqrt(1.21 / 0.81) * y0, rel=2e-3)
    assert "masses × 1.21, stiffnesses × 0.81" in link.state["html"]
    assert texts(in_folder) == before
    assert sheet["job"].job.revision == revision
    assert all(sheet["job"].job.payload(key) is payload for key, payload in held.items())


@pytest.mark.parametrize("bad", [5, 0.1, "2", None])
def test_a_factor_out_of_range_is_refused_in_words_and_nothing_moves(link, bad):
    before = link.state["html"]
    reply = link.say(op="factors", mass=bad, x=1.0, y=1.0)
    assert not reply["ok"]
    assert reply["message"] == f"mass factor: got {bad!r}; must be a number from 0.25 to 4"
    assert link.state["html"] == before


def test_adopting_writes_both_files_in_one_revision_and_puts_the_factors_back(sheet, link, in_folder):
    before, revision = texts(in_folder), sheet["job"].job.revision
    link.say(op="factors", mass=1.1, x=0.9, y=1.0)
    asked = first_periods(link)
    sentence = link.state["adopting"]
    assert sentence == (
        'Adopting changes column "mass [t]" of storeys.csv by a factor of 1.1 and stiffness.cracked.factor_x of job.toml '
        "from 0.6 to 0.54."
    )
    assert link.say(op="adopt", sentence=sentence)["ok"]
    after = texts(in_folder)
    masses = [float(line.split(",")[2]) for line in after["storeys.csv"].splitlines()[1:]]
    assert masses == pytest.approx([1.1 * m for m in (141.5, 236.0, 244.25, 251.0, 268.75)], rel=1e-9)
    assert after["job.toml"] == before["job.toml"].replace("factor_x = 0.6", "factor_x = 0.54")
    assert sheet["job"].job.revision == revision + 1
    assert link.state["factors"] == {"mass": 1.0, "x": 1.0, "y": 1.0}
    assert link.state["adopting"] == ""
    assert link.state["done"].startswith('Adopted: column "mass [t]" of storeys.csv by a factor of 1.1')
    assert [new for new, _ in first_periods(link)] == [old for _, old in first_periods(link)]
    assert [old for _, old in first_periods(link)] == [new for new, _ in asked]
    modes = sheet["modes"].payload["result"]["models"]
    assert modes[0]["modes"]["period"][0] == pytest.approx(asked[0][0], rel=2e-3)


def test_only_what_was_said_is_adopted(sheet, link, in_folder):
    link.say(op="factors", mass=1.1, x=1.0, y=1.0)
    sentence, before = link.state["adopting"], texts(in_folder)
    link.say(op="factors", mass=1.2, x=1.0, y=1.0)
    for said in (sentence, ""):
        reply = link.say(op="adopt", sentence=said)
        assert not reply["ok"]
        assert "what would change is no longer what was said" in reply["message"]
    assert texts(in_folder) == before
    assert link.state["factors"]["mass"] == 1.2


def test_a_file_changed_elsewhere_is_not_overwritten(sheet, link, in_folder):
    link.say(op="factors", mass=1.1, x=0.9, y=0.9)
    text = texts(in_folder)["storeys.csv"].replace("141.5", "150")
    (in_folder / "storeys.csv").write_text(text, encoding="utf-8")
    before = texts(in_folder)
    reply = link.say(op="adopt", sentence=link.state["adopting"])
    assert not reply["ok"]
    assert "changed on disk" in reply["message"]
    assert texts(in_folder) == before
    assert link.state["factors"]["mass"] == 1.1


def test_both_files_or_neither(sheet, link, in_folder, monkeypatch):
    before, write = texts(in_folder), textfile.write

    def failing(path, *args):
        if path.name == "job.toml":
            raise NotSavedError("job.toml", "", "not saved, the file is read-only", "close it there and save again")
        return write(path, *args)

    monkeypatch.setattr(textfile, "write", failing)
    link.say(op="factors", mass=1.1, x=0.9, y=0.9)
    reply = link.say(op="adopt", sentence=link.state["adopting"])
    assert reply["message"].startswith("job.toml: not saved, the file is read-only")
    assert texts(in_folder) == before
    assert link.state["factors"] == {"mass": 1.1, "x": 0.9, "y": 0.9}
    monkeypatch.undo()
    sheet.run('storeys.set("Roof", "mass", 150)', "edit")  # the job goes on from the files as they are
    assert "Roof,2.95,150," in texts(in_folder)["storeys.csv"]


def test_an_edit_elsewhere_is_answered_with_the_factors_kept(sheet, link):
    link.say(op="factors", mass=1.5, x=1.0, y=1.0)
    before = first_periods(link)
    sheet.run('storeys.set("Roof", "mass", 320)', "edit")
    assert link.state["factors"]["mass"] == 1.5
    assert all(now > was for now, was in zip(first_periods(link)[0], before[0], strict=True))


def test_it_waits_with_what_is_above_it_and_adopts_nothing_then(sheet, link, in_folder):
    link.say(op="factors", mass=1.1, x=1.0, y=1.0)
    sentence = link.state["adopting"]
    sheet.run('storeys.set("3", "mass", -12)', "edit")
    assert link.state["note"]["kind"] == "waiting"
    assert link.state["html"] == link.state["short"] == link.state["adopting"] == ""
    before = texts(in_folder)
    assert link.say(op="adopt", sentence=sentence)["message"].startswith("nothing adopted: waits for storeys")
    assert texts(in_folder) == before
    assert NOTICE in sheet.twin("what if")["text/html"]
    assert "Waits" not in sheet.twin("what if")["text/html"]


def test_a_base_shear_stands_there_once_a_demand_does(shell, demand_job, monkeypatch):
    folder = demand_job("EN").folder.path
    monkeypatch.chdir(folder)
    shell.run('from calcsheet import *\njob = JobCard(".")\nstoreys = StoreyTable(job)\nmodes = ModeSolver(storeys)')
    shell.run("WhatIf(modes)", "what if")
    link = shell.link("what if")
    assert "base shear" not in link.state["html"]
    shell.run("demand = DemandSpectrum(ParticipationSummary(modes))")
    assert "modal base shear, what if" in link.state["html"]


def test_a_period_that_the_spectrum_does_not_reach_is_said_in_place_of_numbers(shell, demand_job, monkeypatch):
    points = "period [s],ordinate [g]\n0,0.4\n0.1,1.0\n0.6,0.3\n"
    monkeypatch.chdir(demand_job("points", points=points).folder.path)
    shell.run('from calcsheet import *\njob = JobCard(".")\nstoreys = StoreyTable(job)\nmodes = ModeSolver(storeys)')
    shell.run("demand = DemandSpectrum(ParticipationSummary(modes))")
    shell.run("WhatIf(modes)", "what if")
    link = shell.link("what if")
    assert link.state["note"] == {}
    assert link.say(op="factors", mass=4.0, x=0.25, y=1.0)["ok"]
    assert link.state["note"]["text"].startswith("With these factors: ")
    assert link.state["html"] == link.state["adopting"] == ""
    link.say(op="factors", mass=1.0, x=1.0, y=1.0)
    assert link.state["note"] == {}


def test_the_newest_factors_stand_whatever_comes_in_between(sheet, link):
    """Messages may come on several threads, beside edits."""

    def edits():
        for mass in (150, 160, 170):
            sheet["storeys"].set("Roof", "mass", mass)

    other = threading.Thread(target=edits)
    other.start()
    for i in range(1, 21):
        assert link.say(op="factors", mass=1.0 + i / 20, x=1.0, y=1.0)["ok"]
    other.join(PATIENCE)
    assert not other.is_alive()
    assert link.state["factors"]["mass"] == 2.0
    assert "masses × 2," in link.state["html"]
    saved = sheet["modes"].payload["result"]["models"][0]["modes"]["period"][0]
    assert first_periods(link)[0] == pytest.approx([math.sqrt(2.0) * saved, saved], rel=1e-3)


def test_it_is_in_no_record_and_issuing_goes_on(quick_kernel, in_folder, cells, new_notebook):
    with_it, without = (collect(quick_kernel.executed([*cells, *more])) for more in (CELLS, ()))
    assert with_it == without
    nbformat.write(new_notebook([*cells, *CELLS]), in_folder / "calc.ipynb")
    issue(in_folder, to=("html",))
    pages = [p for p in (in_folder / "issued").rglob("*.*") if p.suffix in (".html", ".json")]
    assert len(pages) == 2
    assert not any(re.search("what.?if", p.read_text(encoding="utf-8"), re.IGNORECASE) for p in pages)


def test_a_changed_cell_or_an_old_twin_of_it_refuses_no_record(static, in_folder, cells):
    notebook = static.executed([*cells, *CELLS])
    notebook.cells[-1].source = "WhatIf(modes)  # looked at"
    assert collect(notebook) == collect(static.executed(cells))


def test_a_cell_that_prints_beside_it_is_kept_as_the_engineers_own(static, in_folder, cells):
    content = collect(static.executed([*cells, CELLS[0], 'print("looked at")\nWhatIf(modes)']))
    assert content.parts[-1].outputs[0]["text/plain"] == "looked at\n"


def test_it_takes_modes_alone(sheet):
    with pytest.raises(TypeError, match=r"^WhatIf: got a StoreyTable; must be a ModeSolver$"):
        WhatIf(sheet["storeys"])
    assert sheet.link("what if").say(op="set")["message"] == "set: not known to this block"


def test_modes_of_another_set_adopt_that_set(sheet, in_folder):
    gross = ModeSolver(sheet["storeys"], stiffness="gross", name="gross modes")
    shown = WhatIf(gross).shown()
    shown.open()
    shown.answer({"op": "factors", "mass": 1.0, "x": 0.9, "y": 0.9})
    assert shown.widget.adopting == "Adopting changes stiffness.gross.factor of job.toml from 1 to 0.9."
    shown.close()
