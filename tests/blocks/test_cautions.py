"""The cautions as a block, and answers given in a notebook."""

from __future__ import annotations

import datetime as dt
import re
import tomllib

import pytest

from calcsheet.job.errors import InputError
from calcsheet.record.collect import collect
from calcsheet.record.errors import RecordError

IMPORT = "from calcsheet import *"
CELLS = (
    IMPORT,
    'job = JobCard(".")\njob',
    "Cautions(job)",
    "storeys = StoreyTable(job)\nstoreys",
    "modes = ModeSolver(storeys, keep=1)\nmodes",
    "ParticipationSummary(modes)",
)
KEY = "target-not-reached-x"


@pytest.fixture
def sheet(shell, in_folder):
    for i, source in enumerate(CELLS):
        shell.run(source, str(i))
    return shell


def said(html):
    return " ".join(re.sub(r"<[^>]*>", "", html).split())


def test_it_shows_what_steps_below_it_raise(sheet):
    for html in (sheet.link("2").state["html"], sheet.twin("2")["text/html"]):
        assert f"To be answered under answers.{KEY}, finding " in said(html)


def test_an_edit_upstream_changes_finding_and_state(sheet):
    sheet.run(f'job.answer("{KEY}", "A first look.", by="O. Quist")', "answer")
    assert "Answer: A first look. (O. Quist, " in said(sheet.link("2").state["html"])
    assert "has lapsed" not in said(sheet.twin("2")["text/html"])
    sheet.run('storeys.set("Roof", "mass", 320)', "edit")
    for html in (sheet.link("2").state["html"], sheet.twin("2")["text/html"]):
        assert "Needs an answer; the one given has lapsed" in said(html)


def test_an_answer_is_kept_in_the_card_with_its_finding(sheet, in_folder):
    before = (in_folder / "job.toml").read_text(encoding="utf-8")
    sheet.run(f'job.answer("{KEY}", "A first look.", by="O. Quist")', "answer")
    after = (in_folder / "job.toml").read_text(encoding="utf-8")
    assert after.startswith(before.rstrip("\n"))
    table = tomllib.loads(after)["answers"][KEY]
    assert table | {"finding": ""} == {
        "text": "A first look.",
        "by": "O. Quist",
        "date": dt.date.today(),
        "finding": "",
    }
    assert re.fullmatch("[0-9a-f]{8}", table["finding"])
    sheet.run(f'job.answer("{KEY}", "A first look.", by="O. Quist")', "answer")  # all cells run again
    assert (in_folder / "job.toml").read_text(encoding="utf-8") == after
    sheet.run('storeys.set("Roof", "mass", 320)', "edit")
    with pytest.raises(InputError, match="these words answer an earlier finding"):
        sheet.run(f'job.answer("{KEY}", "A first look.", by="O. Quist")', "answer")


def test_a_twin_of_older_cautions_is_stale(static, in_folder):
    notebook = static.executed(CELLS)
    collect(notebook)
    old = notebook.cells[2].outputs
    run = static.executed((*CELLS[:4], CELLS[4].replace("keep=1", "keep=2"), CELLS[5]))
    collect(run)
    run.cells[2].outputs = old
    with pytest.raises(
        RecordError, match=r"^the notebook is stale: cell 3 shows older results than the job card holds"
    ):
        collect(run)
