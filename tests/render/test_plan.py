"""Views of rigid floors: what is given, centres and shares, edges; shapes drawn in both directions."""

from __future__ import annotations

import re

import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.steps.plan import PlanOptions
from calcsheet.steps.step import key_of
from calcsheet.steps.torsion import TorsionOptions

CARD = (('kind = "storey chain"', 'kind = "rigid floors"'), ("factor_x = 0.6\nfactor_y = 0.5", "factor = 0.6"))
STOREYS = """\
level,storey height [m],mass [t],gravity load [kN],stiffness A [kN/m],stiffness B [kN/m],stiffness 1 [kN/m]
Roof,3.1,180,1900,38000,,60000
1,4.2,255,2700,50000,24000,80000
"""
FILES = {
    "plan.csv": "level,centre of mass x [m],centre of mass y [m],radius of gyration [m],plan x from [m],plan x to [m],"
    "plan y from [m],plan y to [m]\nRoof,8,6,6.1,0,18,0,12\n1,8.5,6,6.1,0,18,0,12\n",
    "lines.csv": "line,x [m],y [m],direction [°],file\nA,0,0,90,\nB,18,0,90,\n1,0,0,0,\nC,3,12,-15,c.csv\n",
    "c.csv": "[kN/m],Roof,1\nRoof,50000,-50000\n1,-50000,120000\n",
}


def key(caution):
    return key_of(caution["kind"], caution["subject"])


@pytest.fixture
def job(demand_job):
    def build(bending: bool = True):
        files = dict(FILES)
        if not bending:
            files["lines.csv"] = files["lines.csv"].replace("C,3,12,-15,c.csv", "2,0,12,0,")
            del files["c.csv"]
        storeys = (
            STOREYS if bending else STOREYS.replace("\n", ",stiffness 2 [kN/m]\n", 1).replace("000\n", "000,70000\n")
        )
        built = demand_job("7-16", card=CARD, storeys=storeys, more=files)
        built.attach("plan", PlanOptions())
        built.attach("torsion", TorsionOptions())
        return built

    return build


def holds(html: str, payloads) -> set[str]:
    """Pointers printed, each of which leads to a number."""
    pointers = set(re.findall(r'<data value="([^"]+)"', html))
    for pointer in pointers:
        found = payloads
        for part in pointer.removeprefix("/").split("/"):
            found = found[int(part)] if isinstance(found, list) else found[part]
        assert isinstance(found, float | int), pointer
    return pointers


def test_all_that_is_given_is_printed(job, rendered):
    built = job()
    found = holds(rendered(built, "storeys"), built.payloads())
    at = "/storeys/inputs"
    wanted = {f"{at}/plan/centre/1/0", f"{at}/plan/gyration/0", f"{at}/plan/extent/0/3", f"{at}/plan/lines/3/angle"}
    wanted |= {f"{at}/stiffness/0/lateral/B/storey/0", f"{at}/stiffness/0/lateral/C/matrix/1/0"}
    assert wanted <= found
    assert f"{at}/stiffness/0/lateral/B/storey/1" not in found


def test_centres_and_shares(job, rendered):
    built = job(bending=False)
    found = holds(rendered(built, "plan"), built.payloads())
    wanted = {"centres/centre/0/0", "centres/radius/1/1", "centres/torsion/0", "shares/2/5", "uncoupled/rotation"}
    assert {f"/plan/result/{place}" for place in wanted} <= found


def test_lines_that_bend_leave_centres_out(job, rendered):
    built = job()
    found = holds(rendered(built, "plan"), built.payloads())
    assert not any("centres" in pointer for pointer in found)
    assert "no-centres-of-stiffness" in {key(c) for c in built.payload("plan")["cautions"]}


def test_edges(job, rendered):
    built = job()
    found = holds(rendered(built, "torsion"), built.payloads())
    at = "/torsion/result/directions/1"
    assert {f"{at}/design/0/1", f"{at}/both/drift/1/0", f"{at}/static/amplification/1", f"{at}/share/0/0"} <= found
    assert {"/torsion/result/lines/0/x/1", "/torsion/result/lines/1/y/0", "/torsion/result/lines/3/both/0"} <= found
    assert "/torsion/result/lines/1/y/1" not in found  # line B ends below the roof


@pytest.mark.parametrize("normalise", ["largest", "roof", "mass"])
def test_shapes_are_drawn_in_both_directions(job, normalise):
    built = job()
    view = VIEWS["mode plot"]
    made = view.render(built.payloads(), "modes", view.chosen({"normalise": normalise}))
    found = holds(made.html, built.payloads())
    assert {"/modes/result/models/0/modes/psi/0/0", "/modes/result/models/0/modes/psi/4/0"} <= found
    assert not {"/modes/result/models/0/modes/psi/2/0", "/modes/result/models/0/modes/psi/5/0"} & found
    drawings = made.draw()
    assert [d.name for d in drawings] == ["shapes-x", "shapes-y"]


@pytest.mark.parametrize("name", ["modes", "participation", "demand", "peaks", "drift", "actions", "comparison"])
def test_other_views_take_the_model(job, rendered, name):
    built = job()
    assert holds(rendered(built, name), built.payloads())
