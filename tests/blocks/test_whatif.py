"""A question about the whole model: it changes nothing until it is adopted, and then in one step."""

from __future__ import annotations

import math
import re

import pytest

from calcsheet.core.scaled import scaled


@pytest.fixture
def sheet(shell, in_folder, cells):
    for name, source in zip(("imports", "card", "storeys", "modes"), cells, strict=False):
        shell.run(source, name)
    shell.run("from calcsheet import WhatIf\nWhatIf(modes)", "what if")
    return shell


@pytest.fixture
def link(sheet):
    return sheet.link("what if")


def columns(link):
    """Columns of the first table: mode, period as saved, period if, their ratio."""
    body = re.search("<tbody>(.*?)</tbody>", link.state["html"])[1]
    rows = [re.findall(r">([\d.]+)<", row) for row in body.split("</tr>") if row]
    return [[float(cell) for cell in column] for column in zip(*rows, strict=True)]


def test_periods_go_with_the_root_of_mass_over_stiffness(link, in_folder):
    before = {name: (in_folder / name).read_text() for name in ("job.toml", "storeys.csv")}
    assert link.say(op="factors", mass=1.21, stiffness=0.64)["ok"]
    _, saved, under, ratio = columns(link)
    assert ratio == [1.375] * 5  # √(1.21/0.64)
    assert under == pytest.approx([1.375 * period for period in saved], rel=2e-3)  # as printed
    assert {name: (in_folder / name).read_text() for name in before} == before


def test_masses_are_adopted_in_one_step(link, sheet, in_folder):
    before = (in_folder / "storeys.csv").read_text()
    link.say(op="factors", mass=1.1, stiffness=1.0)
    period = columns(link)[2][0]
    assert link.say(op="adopt", what="mass")["ok"]
    assert "Roof,2.95,155.65,88000,97000" in (in_folder / "storeys.csv").read_text()
    assert link.state["factors"] == {"mass": 1.0, "stiffness": 1.0}
    assert columns(link)[1][0] == period
    assert sheet.link("storeys").state["history"]["undo"] == "masses × 1.1"
    assert sheet.link("storeys").say(op="undo")["ok"]
    assert (in_folder / "storeys.csv").read_text() == before


def test_a_stiffness_factor_is_adopted_into_the_job_card(link, in_folder):
    link.say(op="factors", mass=1.0, stiffness=0.8)
    assert link.say(op="adopt", what="stiffness")["ok"]
    card = (in_folder / "job.toml").read_text()
    assert "factor_x = 0.48" in card  # the set that serves forces: 0.6 · 0.8
    assert "factor_y = 0.4" in card
    assert "factor = 1.0" in card  # the other set


def test_what_cannot_be_asked_is_refused_in_words(link):
    assert link.say(op="factors", mass=0.0, stiffness=1.0)["message"] == "factors must be from 0.5 to 2.0"
    assert link.say(op="factors", mass="heavy", stiffness=1.0)["ok"] is False
    assert link.say(op="adopt", what="height")["ok"] is False


def test_it_waits_with_the_modes_and_leaves_nothing_in_the_saved_notebook(link, sheet):
    sheet.run('storeys.set("3", "mass", -12)', "edit")
    assert link.state["html"] == ""
    assert link.state["note"].startswith("Waits: waits for storeys: ")
    assert [{*output["data"]} for output in sheet.outputs["what if"]] == [
        {"text/plain", "application/vnd.jupyter.widget-view+json"}
    ]


def test_every_kind_of_stiffness_is_multiplied(demand_job):
    storeys = demand_job("points").files.reading.storeys
    twice = scaled(storeys, 1.0, 2.0)
    lateral, doubled = (each.stiffness[0].lateral["x"] for each in (storeys, twice))
    assert doubled.storey.tolist() == [2.0 * k for k in lateral.storey]
    assert math.isclose(float(scaled(storeys, 3.0, 1.0).mass.sum()), 3.0 * float(storeys.mass.sum()))
