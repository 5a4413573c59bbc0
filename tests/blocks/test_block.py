"""Blocks in cells: live views, static twins, cells run again."""

from __future__ import annotations

import re
import threading

import pytest

from calcsheet.blocks import JobCard, ModePlot, ModeSolver, ParticipationSummary, StoreyTable
from calcsheet.blocks.twin import MIME
from calcsheet.steps.serial import fingerprint

PATIENCE = 30  # s
NAMES = ("imports", "card", "storeys", "modes", "plot", "participation")


@pytest.fixture
def sheet(shell, in_folder, cells):
    """A whole calculation, each cell run under the name of its block."""
    for name, source in zip(NAMES, cells, strict=True):
        shell.run(source, name)
    return shell


@pytest.fixture
def views(shell):
    """Links to the live widgets of the cells, by the block that they show."""

    def find():
        live = [link for link in shell.links if not link._closed]
        opened = {link.comm_id: link for link in live}
        return {w.block: opened[w.comm.comm_id] for w in widgets() if w.comm and w.comm.comm_id in opened}

    return find


def widgets():
    from ipywidgets.widgets.widget import _instances

    from calcsheet.blocks.widgets import LiveWidget

    return [w for w in list(_instances.values()) if isinstance(w, LiveWidget)]


def state(link):
    """A widget's traits as the page has them now."""
    seen = {}
    for message in link.sent:
        seen |= message.get("state", {}) if message.get("method", "update") == "update" else {}
    return seen


def words(html):
    return re.sub(r"<[^>]*>", " ", html)


def test_every_block_shows_a_live_view_and_a_twin(sheet):
    for name in NAMES[1:]:
        kinds = [{*output["data"]} for output in sheet.outputs[name]]
        assert len(kinds) == 2
        assert "application/vnd.jupyter.widget-view+json" in kinds[0]
        assert {"text/html", "text/plain", MIME} == kinds[1]
        assert sheet.twin(name)[MIME]["source"] == fingerprint(sheet_source(name))


def sheet_source(name):
    from conftest_cells import CELLS  # pragma: no cover

    return CELLS[NAMES.index(name)]
