"""Rigid floors in the job folder: the plan's tables, and what resists along each line."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.model import models_of
from calcsheet.core.stick import Stick
from calcsheet.core.storeys import Storeys
from calcsheet.job.errors import InputError
from calcsheet.steps.serial import from_json, to_json

FLOORS_KIND = (('kind = "storey chain"', 'kind = "rigid floors"'),)
STOREYS = """\
level,storey height [m],mass [t],stiffness A [kN/m],stiffness B [MN/m],bending stiffness 1 [kN·m²],shear stiffness 1 [kN],remarks
Roof,3.1,180,61000,,4.2e7,1.5e6,
2,3.4,240,74000,81,5.5e7,1.9e6,
1,4.6,255,70000,78,5.5e7,1.9e6,
"""
FLOORS = """\
level,centre of mass x [m],centre of mass y [m],radius of gyration [m],plan x from [m],plan x to [m],plan y from [m],plan y to [m]
Roof,9.5,6.25,5.9,0,18,0,12
2,9.0,6.0,6.2,0,18,0,12
1,9.1,6.1,6.2,0,20,0,12
"""
LINES = """\
line,x [m],y [m],direction [°],file
A,0,0,90,
B,18,0,90,
1,0,0.5,0,
C,2,12,-30,core.csv
"""
CORE = "[kN/m],Roof,2,1\nRoof,60000,-60000,0\n2,-60000,130000,-70000\n1,0,-70000,150000\n"


@pytest.fixture
def of_plan(read):
    """The storey table of rigid floors, pieces of its four tables replaced."""

    def build(*changes: tuple[str, str, str], on: tuple[tuple[str, str], ...] = ()):
        files = {"storeys.csv": STOREYS, "plan.csv": FLOORS, "lines.csv": LINES, "core.csv": CORE}
        for file, old, new in changes:
            assert old in files[file]
            files[file] = files[file].replace(old, new, 1)
        text = files.pop("storeys.csv")
        return read(on=(*FLOORS_KIND, *on), matrices={name: content for name, content in files.items()}, text=text)

    return build


def test_the_plan_is_read_from_the_base_up(of_plan):
    got = of_plan()
    assert got.problems == ()
    plan = got.storeys.plan
    np.testing.assert_allclose(plan.centre, [[9.1, 6.1], [9.0, 6.0], [9.5, 6.25]])
    np.testing.assert_allclose(plan.gyration, [6.2, 6.2, 5.9])
    np.testing.assert_allclose(plan.extent[0], [0.0, 20.0, 0.0, 12.0])
    assert [line.name for line in plan.lines] == ["A", "B", "1", "C"]
    assert plan.lines[3].angle == pytest.approx(-np.pi / 6.0, rel=1e-14)


def test_what_resists_along_each_line(of_plan):
    uncracked, cracked = of_plan().storeys.stiffness
    assert [type(lateral) for lateral in uncracked.lateral.values()] == [Chain, Chain, Stick, StiffnessMatrix]
    np.testing.assert_allclose(uncracked.lateral["A"].storey, [70000.0, 74000.0, 61000.0])
    np.testing.assert_allclose(uncracked.lateral["B"].storey, [78000.0, 81000.0])  # it ends below the roof
    np.testing.assert_allclose(uncracked.lateral["C"].matrix[0], [150000.0, -70000.0, 0.0])
    np.testing.assert_allclose(cracked.lateral["1"].bending, 0.5 * uncracked.lateral["1"].bending)


def test_a_model_of_both_directions_at_once(of_plan):
    storeys = of_plan().storeys
    (model,) = models_of(storeys, "cracked")
    assert (model.direction, model.size, model.levels) == (("x", "y"), 9, 3)
    again = from_json(Storeys, to_json(storeys))
    (same,) = models_of(again, "cracked")
    np.testing.assert_array_equal(same.lateral.root, model.lateral.root)


@pytest.mark.parametrize(
    ("unit", "kind"), [("[kN/m]", StiffnessMatrix), ("[mm/kN]", FlexibilityMatrix), ("[mm]", FlexibilityMatrix)]
)
def test_a_files_unit_says_what_it_holds(of_plan, unit, kind):
    heading = f"{unit},2,1" if unit != "[mm]" else f"{unit},2 [10 kN],1 [10 kN]"
    small = (("core.csv", CORE, f"{heading}\n2,0.5,0.2\n1,0.2,0.3\n"),)
    lateral = of_plan(*small).storeys.stiffness[0].lateral["C"]
    assert isinstance(lateral, kind)
    assert lateral.size == 2


@pytest.mark.parametrize(
    ("file", "old", "new", "message"),
    [
        (
            "lines.csv",
            "B,18,0,90,",
            "A,18,0,90,",
            'lines.csv, line "A": named in more than one row; each line needs its own name',
        ),
        (
            "lines.csv",
            "[°]",
            "[m]",
            'lines.csv, heading "direction [m]": "m" is a unit of length, not of angle; must be °, deg or rad',
        ),
        ("lines.csv", "direction [°]", "way [°]", 'lines.csv: no column "direction"; must have one'),
        (
            "lines.csv",
            "A,0,0,90,",
            "A,0,,90,",
            'lines.csv, line "A": y is blank; must be a number in m, a finite number',
        ),
        ("plan.csv", "2,9.0", "3,9.0", 'plan.csv, level "2": no row; must have a row for each level of the model'),
        ("plan.csv", "6.0,6.2", "6.0,0", 'plan.csv, level "2": radius of gyration 0 m; must be above 0'),
        (
            "plan.csv",
            "plan y to [m]",
            "depth [m]",
            'plan.csv: no column "plan y to"; must have all four columns of the plan\'s extent, or none',
        ),
        (
            "plan.csv",
            "6.2,0,18,0,12\n1",
            "6.2,18,0,0,12\n1",
            'plan.csv, level "2": plan from 18 to 0 m in x and from 0 to 12 m in y; must run upwards in x and in y',
        ),
        (
            "storeys.csv",
            "stiffness A",
            "stiffness D",
            'storeys.csv, line "A": no column of its stiffness; must have one of "stiffness A" or "bending stiffness A", or a '
            "file in lines.csv",
        ),
        (
            "storeys.csv",
            "remarks",
            "bending stiffness A [kN·m²]",
            'storeys.csv, line "A": columns of two kinds of stiffness; must have one of "stiffness A" or "bending stiffness A", '
            "or a file in lines.csv",
        ),
        (
            "core.csv",
            "130000",
            "-130000",
            "core.csv, lateral stiffness matrix [kN/m], entry (2, 2) from the base: -130000",
        ),
    ],
)
def test_refusals(of_plan, file, old, new, message):
    reading = of_plan((file, old, new))
    assert reading.storeys is None
    assert reading.problems[0].message.startswith(message)


@pytest.mark.parametrize(
    ("old", "new"),
    [("4.2e7,1.5e6", ",1.5e6"), ("4.2e7,1.5e6", "4.2e7,"), ("5.5e7,1.9e6,\n1", "5.5e7,,\n1")],
)
def test_a_wall_whose_two_columns_end_apart_is_refused(of_plan, old, new):
    reading = of_plan(("storeys.csv", old, new))
    assert reading.storeys is None
    assert all("storeys in no such order; must be given from the lowest" in p.message for p in reading.problems)


def test_a_wall_that_ends_below_the_top(of_plan):
    wall = of_plan(("storeys.csv", "4.2e7,1.5e6", ",")).storeys.stiffness[0].lateral["1"]
    assert (wall.size, wall.shear.size, wall.storey_height.tolist()) == (2, 2, [4.6, 3.4])


def test_a_line_blank_in_a_lower_storey_is_refused_once_a_set(of_plan):
    reading = of_plan(("storeys.csv", "70000,78", "70000,"))
    assert {p.message for p in reading.problems} == {
        "storeys.csv, column stiffness B: 1 of 3 storeys in no such order; must be given from the lowest storey up, and be "
        "blank only above the level where the line ends"
    }


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (
            ('y = "y runs along grid A"\n', ""),
            'directions.y: missing; must have a sentence with model.kind "rigid floors"',
        ),
        (
            ("[model]", "[base]\nrocking_x = 1e6\n[model]"),
            'base: springs in x; must be left out with model.kind "rigid floors"',
        ),
        (
            ("factor = 0.5", "factor_x = 0.5\nfactor_y = 0.5"),
            'stiffness.cracked: has factor_x or factor_y; must have one factor for all lines with model.kind "rigid floors"',
        ),
    ],
)
def test_what_a_card_of_rigid_floors_cannot_have(card, change, message):
    with pytest.raises(InputError) as error:
        card(*FLOORS_KIND, change)
    assert str(error.value) == f"job.toml, {message}"


def test_one_lines_name_may_begin_with_anothers(of_plan):
    lines = LINES.replace("A,0,0,90,", "1 west,0,0,90,")
    got = of_plan(("lines.csv", LINES, lines), ("storeys.csv", "stiffness A", "stiffness 1 west"))
    assert got.problems == ()
    laterals = got.storeys.stiffness[0].lateral
    assert (type(laterals["1 west"]), type(laterals["1"])) == (Chain, Stick)


def test_lines_of_a_set_of_own_values(of_plan):
    text = STOREYS
    for heading in ("stiffness A", "stiffness B", "bending stiffness 1", "shear stiffness 1"):
        text = text.replace(f"{heading} [", f"{heading} cracked [", 1)
    gross = '[stiffness.uncracked]\nfactor = 1.0\nground = "gross sections"\n'
    on = ((gross, ""), ("factor = 0.5", "own = true"), ('forces = "uncracked"', 'forces = "cracked"'))
    got = of_plan(("storeys.csv", STOREYS, text), on=on)
    assert got.problems == ()
    (cracked,) = got.storeys.stiffness
    np.testing.assert_allclose(cracked.lateral["A"].storey, [70000.0, 74000.0, 61000.0])
    assert isinstance(cracked.lateral["1"], Stick)
