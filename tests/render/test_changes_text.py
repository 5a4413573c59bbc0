"""What changed, in a terminal."""

from __future__ import annotations

import pytest

from calcsheet.render.changes_text import as_text
from calcsheet.steps.compare import compared, facts_of

TABLE = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,3,1000,50000,80000,950
1,4,2000,100000,160000,1950
"""


@pytest.fixture
def said(demand_job):
    def build(storeys=TABLE, before=TABLE, **how):
        sides = (demand_job("EN", storeys=s, name=n, **how) for s, n in ((before, "before"), (storeys, "now")))
        return as_text(compared(*(facts_of(job.payloads()) for job in sides)), "SI", title="A → B").splitlines()

    return build


def test_nothing_changed(said):
    assert said() == ["A → B", "No conclusion flipped.", "No headline result changed.", "No input changed."]


def test_numbers_and_units(said):
    lines = said(TABLE.replace("2000", "2150.5"))
    assert "  level 1: mass 2 000.0 t → 2 150.5 t" in lines
    mass = next(line for line in lines if "Mass above the effective base" in line)
    assert mass.split("base")[1].split("→") == [mass.split("base")[1].split("→")[0], mass.split("→")[1]]
    assert mass.endswith("3 150 t  +5.0 %") or "+5.0 %" in mass  # 150.5/3000
    assert not any("Height above" in line for line in lines)  # what did not change is left out


def test_levels_and_columns(said):
    lines = said(TABLE + "0,2.5,900,110000,170000,1000\n")
    assert "  Level added: 0." in lines
    (level,) = (line for line in lines if line.startswith("  level "))
    assert level.startswith(
        "  level 0: storey height 2.5 m; mass 900 t; gravity load 1 000 kN; stiffness x, gross 110 000 kN/m"
    )


def test_no_character_steers_the_terminal(said):
    lines = said(TABLE.replace("Roof", "Ro\u202eof\u00ad"))
    assert all(line.isprintable() for line in lines)
    assert "  level Ro?of?: " in "\n".join(lines)
