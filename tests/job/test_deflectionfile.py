"""Flexibilities from deflections under one load at a time."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.job.deflectionfile import holds_deflections, read_deflections
from calcsheet.job.matrixfile import read_matrix

LEVELS = ("1", "2", "Roof, top")
# springs of 20, 10 and 5 kN/mm in a chain (statics), in mm/kN
F = np.array([[0.05, 0.05, 0.05], [0.05, 0.15, 0.15], [0.05, 0.15, 0.35]])
TEXT = """\
deflection [mm],"Roof, top [100 kN]",2 [50 kN],1 [20 kN]
"Roof, top",35,7.5,1
2,15,7.5,1
1,5,2.5,1
"""


def test_deflections_are_divided_by_their_loads(table):
    given = table(TEXT, "fx.csv")
    assert holds_deflections(given)
    found, problems = read_deflections(given, LEVELS)
    assert problems == []
    np.testing.assert_allclose(found, F / 1000.0, rtol=1e-14)
    assert not holds_deflections(table("[mm/kN],1\n1,2\n"))
    assert not holds_deflections(table("level,1\n1,2\n"))


def test_us_units_and_the_other_order(table):
    text = "[in];1 [10 kip];2 [10 kip];Roof, top [1,5 kips]\n1;1;1;0,15\n2;1;3;0,45\nRoof, top;1;3;1,05\n"
    found, problems = read_deflections(table(text, "fx.csv"), LEVELS)
    assert problems == []
    np.testing.assert_allclose(found, F * 2.0 * 0.0254 / 4.4482216152605, rtol=1e-12)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("2 [50 kN]", "2", 'heading "2": no load; must give its load in square brackets, such as "Roof [100 kN]"'),
        (
            "[50 kN]",
            "[kN]",
            'heading "2 [kN]": load "kN"; must give its load in square brackets, such as "Roof [100 kN]"',
        ),
        ("[50 kN]", "[0 kN]", 'heading "2 [0 kN]": load "0 kN"; must be finite and above 0'),
        (
            "[50 kN]",
            "[50 mm]",
            'heading "2 [50 mm]": "mm" is a unit of length, not of weight; must be kN, MN, N, kip or lbf',
        ),
        ("2 [50", "3 [50", "columns: named "),
        ("2,15,7.5", "2,15,x", 'row "2", column "2": length "x"; must be a number in mm'),
    ],
)
def test_refusals(table, old, new, message):
    found, problems = read_deflections(table(TEXT.replace(old, new, 1), "fx.csv"), LEVELS)
    assert str(problems[0]).startswith(f"fx.csv, {message}")
    assert len(problems) == 1
    assert (found == 0.0).any()


FLEXIBLE = (('kind = "storey chain"', 'kind = "flexibility matrix"\nx = "x.csv"\ny = "y.csv"'),)
STOREYS = "level,storey height [m],mass [t]\nRoof,3,100\n2,3,150\n1,4,160\n"
SMALL = TEXT.replace('"Roof, top', '"Roof')


def test_a_job_of_deflections(read):
    matrix = "[mm/kN],Roof,2,1\nRoof,0.35,0.15,0.05\n2,0.15,0.15,0.05\n1,0.05,0.05,0.05\n"
    got = read(on=FLEXIBLE, text=STOREYS, matrices={"x": SMALL, "y": matrix}).storeys
    x, y = (got.stiffness[0].lateral[d] for d in ("x", "y"))
    np.testing.assert_allclose(x.matrix, y.matrix, rtol=1e-13)
    np.testing.assert_allclose(got.stiffness[1].lateral["x"].matrix, 2.0 * x.matrix, rtol=1e-13)


def test_how_unsymmetric_they_are_is_kept(read):
    slip = SMALL.replace("2,15,7.5", "2,15.01,7.5")
    got = read(on=FLEXIBLE, text=STOREYS, matrices={"x": slip, "y": SMALL}).storeys
    assert got.stiffness[0].lateral["x"].asymmetry == pytest.approx(0.0001 / 0.35, rel=1e-9)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "2,15,7.5",
            "2,15,-7.5",
            "x.csv, lateral flexibility matrix [m/kN], entry (2, 2) from the base: -0.00015; must be above 0: a force moves "
            "its own level its own way",
        ),
        (
            "2,15,7.5",
            "2,16,7.5",
            "x.csv, lateral flexibility matrix [m/kN], entries (2, 3) and (3, 2) from the base: 0.00016 and 0.00015; must be "
            "equal within 0.001 of the largest entry",
        ),
    ],
)
def test_deflections_that_no_building_has(read, old, new, message):
    reading = read(on=FLEXIBLE, text=STOREYS, matrices={"x": SMALL.replace(old, new), "y": SMALL})
    assert {problem.message for problem in reading.problems} == {message}


def test_a_length_is_no_stiffness(table):
    _, problems = read_matrix(table("[mm],1\n1,2\n", "kx.csv"), ("1",), "stiffness")
    assert "is a unit of length, not of stiffness" in str(problems[0])
