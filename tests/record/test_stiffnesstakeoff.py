"""A record with a stiffness take-off: what is printed of it, and what makes it stale."""

from __future__ import annotations

import json

import nbformat
import pytest

from calcsheet.record.collect import collect, refuse_stale
from calcsheet.record.equations import to_svg
from calcsheet.record.errors import RecordError
from calcsheet.record.issue import issue
from calcsheet.record.markdown import to_html
from calcsheet.steps.fromfiles import STIFFNESSES
from calcsheet.steps.replay import replay
from calcsheet.steps.stiffnesstakeoff import METHOD

CELLS = (
    "from calcsheet import JobCard, ModeSolver, StiffnessTakeoff, StoreyTable",
    'job = JobCard(".")\njob',
    "takeoff = StiffnessTakeoff(job)\ntakeoff",
    "storeys = StoreyTable(job)\nstoreys",
    "ModeSolver(storeys)",
)


@pytest.fixture
def folder(quick_kernel, members_folder, new_notebook):
    def write(cells=CELLS, **how):
        made = members_folder(**how)
        nbformat.write(new_notebook(cells), made / "calc.ipynb")
        return made

    return write


def test_it_is_printed_with_method_lines_and_inputs(folder, document):
    html, data = (path.read_text(encoding="utf-8") for path in issue(folder(), to=["html"]).files)
    seen, record = document(html), json.loads(data)
    assert seen.headings.count("Stiffness take-off") == 2  # where the notebook shows it, and among the inputs
    for words in ("Muto, Aseismic Design Analysis", "Beams over column, Inner", "Sections and their properties"):
        assert words in seen.words
    assert "taken off from members.csv, before the factors of the stiffness sets" in seen.words
    payloads = record["payloads"]
    assert replay(payloads) == []
    for pointer, _ in seen.numbers:
        found = payloads
        for part in pointer.removeprefix("/").split("/"):
            found = found[int(part)] if isinstance(found, list) else found[part]


def test_storeys_taken_from_members_carry_them_into_the_record_unasked(folder, document):
    cells = tuple(cell for cell in CELLS if "takeoff =" not in cell)
    html, data = (path.read_text(encoding="utf-8") for path in issue(folder(cells), to=["html"]).files)
    assert json.loads(data)["payloads"][STIFFNESSES]["state"] == "ok"
    assert "Sections and their properties" in document(html).words


@pytest.mark.parametrize("feeds", [True, False])
def test_members_changed_since_are_noticed(folder, static, feeds, monkeypatch):
    made = folder(feeds=feeds)
    monkeypatch.chdir(made)
    content = collect(static.executed(CELLS))
    refuse_stale(content, made)
    path = made / "members.csv"
    path.write_text(path.read_text().replace("Core,all,wall,W3,y,2", "Core,all,wall,W3,y,3"))
    with pytest.raises(RecordError, match=r"the notebook is stale: storeys\.csv or a table of the stiffness take-off"):
        refuse_stale(content, made)


def test_the_method_can_be_set_on_paper():
    assert "<svg" in to_html(METHOD, to_svg, top=4, prefix="m")
