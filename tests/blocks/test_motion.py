"""The block of moving mode shapes."""

from __future__ import annotations

import pytest

from calcsheet.blocks import ModeMotion, ModePlot
from calcsheet.record.collect import collect
from calcsheet.render.motion import motion

CELLS = ("from calcsheet import ModeMotion", "ModeMotion(modes)")


@pytest.fixture
def sheet(shell, in_folder, cells):
    for source in (*cells[:5], CELLS[0]):
        shell.run(source)
    shell.run(CELLS[1], "motion")
    return shell


def test_the_page_has_the_payloads_shapes_and_new_ones_after_an_edit(sheet):
    link = sheet.link("motion")
    assert link.state["motion"] == motion(sheet["job"].job.payloads(), "modes")
    before = link.state["motion"]["models"][0]["modes"][0]
    sheet.run('storeys.set("Roof", "mass", 320)', "edit")
    after = link.state["motion"]["models"][0]["modes"][0]
    assert after["period"] != before["period"]
    assert after["shape"] != before["shape"]
    assert link.state["revision"] == sheet["job"].job.revision


def test_nothing_old_moves_while_the_modes_wait(sheet):
    sheet.run('storeys.set("3", "mass", -12)', "edit")
    state = sheet.link("motion").state
    assert state["motion"] == {}
    assert state["note"]["kind"] == "waiting"
    assert "mass -12 t; must be above 0" in state["note"]["text"]
    sheet.run('storeys.set("3", "mass", 244.25)', "edit")
    assert state["note"] != (now := sheet.link("motion").state)["note"] == {}
    assert now["motion"]["models"]


def test_the_twin_says_where_the_still_shapes_are(sheet):
    html = sheet.twin("motion")["text/html"]
    assert "Mode shapes move on screen only: the record has the mode plot, as still shapes." in html
    assert "<svg" not in html
    assert "<img" not in html


def test_it_is_in_no_record(static, in_folder, cells):
    with_it, without = (collect(static.executed([*cells, *more])) for more in (CELLS, ()))
    assert with_it == without


def test_it_takes_modes_alone_and_knows_no_message(sheet):
    with pytest.raises(TypeError, match=r"^ModeMotion: got a ModePlot; must be a ModeSolver$"):
        ModeMotion(ModePlot(sheet["modes"]))
    assert sheet.link("motion").say(op="set")["message"] == "set: not known to this block"
