"""Views of jobs whose model is a stick, stands on springs, or holds its gravity loads."""

from __future__ import annotations

import re

STICK = ('kind = "storey chain"', 'kind = "cantilever stick"')
SPRINGS = ("[stiffness.gross]", "[base]\ntranslation_x = 8e5\nrocking_y = 6e7\ndamping_y = 0.05\n[stiffness.gross]")
WALLS = """\
level,storey height [m],mass [t],bending stiffness x [kN·m²],shear stiffness x [kN],bending stiffness y [MN·m²],gravity load [kN]
Roof,3.2,180,2.2e7,9e5,14000,1900
1,4.1,255,2.9e7,1.2e6,19500,2700
"""
IN_STIFFNESS = ("edition =", "second_order_in_stiffness = true\nedition =")


def words(html: str) -> str:
    return re.sub(r"\s+", " ", re.sub(r"<[^>]+>", " ", html.replace("\u2009", "").replace("\u00a0", " ")))


def pointers(html: str) -> set[str]:
    return set(re.findall(r'<data value="([^"]+)"', html))


def test_what_a_stick_is_given_stands_in_the_storey_table(demand_job, rendered):
    html = rendered(demand_job("7-16", IN_STIFFNESS, card=(STICK, SPRINGS), storeys=WALLS), "storeys")
    said = words(html)
    for heading in ("bending stiffness x, gross", "shear stiffness x, gross", "bending stiffness y, gross"):
        assert heading in said
    assert "shear stiffness y" not in said
    at = "/storeys/inputs/stiffness/0/lateral"
    assert {f"{at}/x/bending/0", f"{at}/x/shear/1", f"{at}/y/bending/1"} <= pointers(html)
    assert "/storeys/inputs/springs/x/translation" in pointers(html)
    assert "second-order effects in the stiffness, by the gravity loads" in said
    assert re.search(r"base springs x translation .*kN/m\s*; rocking fixed", said)
    assert re.search(r"base springs y translation fixed; rocking .*kN·m/rad\s*; damping 5.00 %\s*, not used", said)


def test_springs_and_critical_load_stand_under_the_periods(demand_job, rendered):
    job = demand_job("7-16", card=(STICK, SPRINGS), storeys=WALLS)
    html = rendered(job, "modes")
    assert {"/modes/result/models/0/fixed/lengthening", "/modes/result/models/1/critical/factor"} <= pointers(html)
    assert "storey below level 1." in words(html)
    assert "Elastic critical load factor" not in words(rendered(demand_job("7-16", storeys=WALLS.replace(
        ",gravity load [kN]", "").replace(",1900", "").replace(",2700", ""), card=(STICK,), name="bare"), "modes"))  # fmt: skip
