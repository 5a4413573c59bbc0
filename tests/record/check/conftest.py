"""A small invented record, and its files."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest

from calcsheet.record.collect import Content
from calcsheet.record.document import record_of
from calcsheet.record.files import html_of, json_of, paged
from calcsheet.record.parts import Own, Shown, Words
from calcsheet.record.pdf import NoEngine, choose_engine
from calcsheet.render.registry import VIEWS
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.peaks import PeaksOptions

CARD = """\
format = 1
[job]
project = "Linnet Yard <script>alert(1)</script>"
title = "Sway of the workshop & stores"
number = "LY-07"
revision = "C"
date = 2026-04-21
reason = "Roof plant added"
purpose = "Periods and storey forces."
[people.prepared]
name = "Maud Ferreira"
initials = "MF"
date = 2026-04-21
[people.checked]
name = "Ilse Brandt"
initials = "IB"
[units]
system = "SI"
[levels]
base_elevation = 0.4
effective_base = ""
[directions]
x = "Along grids 1 to 3."
y = "Along grids A to D."
[model]
kind = "storey chain"
[stiffness.gross]
factor = 1.0
ground = "steel, gross"
[stiffness.soft]
factor_x = 0.8
factor_y = 0.7
ground = "slip of the joints"
[serves]
forces = "gross"
drifts = "gross"
[basis]
edition = "EN 1998-1:2004"
ground_acceleration = 0.18
spectrum = 1
ground = "C"
importance_class = "II"
q_x = 2
q_y = 3
system_x = "other"
system_y = "steel moment frame"
elements = "ductile"
[[mass_basis]]
load = "permanent"
share = 1.0
clause = "EN 1998-1:2004, 3.2.4"
[[assumptions]]
text = "Floors are rigid."
ground = "composite slabs"
[origins]
"storeys.csv" = { source = "take-off", revision = "B", date = 2026-02-27 }
[answers]
"""
STOREYS = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
<script>alert(2)</script>,3.1,96.5,61000,44500,930
2,3.4,188,97500,71000,1850
1,4.2,203.75,88500,69000,1990
"""
WORDS = "# Scope\n\nSway alone, $T_1 = 2\\pi/\\omega_1$; a level is called `<script>`."


VIEWED = ("storeys", "modes", "participation", "demand", "peaks", "drift", "actions")


@pytest.fixture(scope="session")
def payloads(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    """Every step up to the storey actions."""
    folder = tmp_path_factory.mktemp("linnet") / "yard"
    folder.mkdir()
    (folder / "job.toml").write_text(CARD, encoding="utf-8")
    (folder / "storeys.csv").write_text(STOREYS, encoding="utf-8")
    job = Job(folder)
    for kind, options in (
        ("modes", ModesOptions()),
        ("participation", ParticipationOptions()),
        ("demand", DemandOptions()),
        ("peaks", PeaksOptions()),
        ("drift", DriftOptions()),
        ("actions", ActionsOptions()),
    ):
        job.attach(kind, options)
    assert {key: p["why"] for key, p in job.payloads().items() if p["state"] != "ok"} == {}
    return job.payloads()


def recorded(payloads: dict[str, Any], views: Sequence[str], engine: str = "") -> dict[str, Any]:
    """A record that shows these views, as a file holds it."""
    parts = (
        Words(WORDS),
        *(Shown(name, name, VIEWS[name].chosen({})) for name in views),
        Own("print(2 + 2)", ({"text/plain": "4"},)),
    )
    return json.loads(json_of(record_of(Content(parts, payloads), "a4", engine)))


@pytest.fixture(scope="session")
def record(payloads: dict[str, Any]) -> dict[str, Any]:
    return recorded(payloads, VIEWED)


@pytest.fixture(scope="session")
def html(record: dict[str, Any]) -> str:
    return html_of(record)


@pytest.fixture(scope="session")
def paged_record(payloads: dict[str, Any]) -> dict[str, Any]:
    """A shorter record, of the modes alone, that has a PDF."""
    try:
        engine = str(choose_engine("WeasyPrint"))
    except NoEngine:
        pytest.skip("WeasyPrint doesn't load here")
    return recorded({key: payloads[key] for key in ("card", "storeys", "modes")}, VIEWED[:2], engine)


@pytest.fixture(scope="session")
def pdf(paged_record: dict[str, Any]) -> bytes:
    return paged(paged_record, "LY-07-rev-C.json", json_of(paged_record))


@pytest.fixture
def written(tmp_path: Path) -> Callable[[str, bytes | str], Path]:
    """Writes a file; its path."""

    def write(name: str, content: bytes | str) -> Path:
        path = tmp_path / name
        path.write_bytes(content.encode() if isinstance(content, str) else content)
        return path

    return write
