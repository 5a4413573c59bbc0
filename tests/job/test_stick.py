"""Cantilever sticks in the storey table, springs at the base and gravity loads in the stiffness."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.stick import Stick
from calcsheet.core.storeys import Storeys
from calcsheet.steps.serial import from_json, to_json

WALLS = (('kind = "storey chain"', 'kind = "cantilever stick"'),)
OWN = (*WALLS, ("factor = 0.5", "own = true"))
TEXT = """\
level,storey height [m],mass [t],bending stiffness x [kN.m2],shear stiffness x [kN],bending stiffness y [MN·m²]
Roof,3.1,180,4.2e7,1.5e6,31000
2,3.4,240,5.5e7,1.9e6,44000
1,4.6,255,5.5e7,1.9e6,47500
"""
FOOT, KIP = 0.3048, 4.4482216152605  # m and kN, exact by definition


def one(reading) -> str:
    (problem,) = reading.problems
    return problem.message


def test_sticks_from_the_base_up(read):
    got = read(on=WALLS, text=TEXT).storeys
    uncracked, cracked = got.stiffness
    x, y = uncracked.lateral["x"], uncracked.lateral["y"]
    assert isinstance(x, Stick)
    np.testing.assert_allclose(x.bending, [5.5e7, 5.5e7, 4.2e7])
    np.testing.assert_allclose(x.shear, [1.9e6, 1.9e6, 1.5e6])
    np.testing.assert_allclose(x.storey_height, [4.6, 3.4, 3.1])
    np.testing.assert_allclose(y.bending, [4.75e7, 4.4e7, 3.1e7])
    assert y.shear is None
    np.testing.assert_allclose(cracked.lateral["x"].bending, 0.5 * x.bending)
    np.testing.assert_allclose(cracked.lateral["x"].shear, 0.5 * x.shear)


def test_sticks_survive_json(read):
    got = read(on=WALLS, text=TEXT).storeys
    again = from_json(Storeys, to_json(got))
    stick = again.stiffness[0].lateral["x"]
    assert isinstance(stick, Stick)
    np.testing.assert_array_equal(stick.root, got.stiffness[0].lateral["x"].root)
    assert again.stiffness[0].lateral["y"].shear is None


def test_us_units(read):
    headings = (
        ("bending stiffness x [kN.m2]", "bending stiffness x [kip ft^2]"),
        ("shear stiffness x [kN]", "shear stiffness x [kips]"),
    )
    got = read(*headings, on=WALLS, text=TEXT).storeys.stiffness[0].lateral["x"]
    np.testing.assert_allclose(got.bending[0], 5.5e7 * KIP * FOOT**2, rtol=1e-12)
    np.testing.assert_allclose(got.shear[0], 1.9e6 * KIP, rtol=1e-12)


def test_sets_of_own_values(read):
    text = TEXT.replace(
        "bending stiffness y [MN·m²]", "bending stiffness y [MN·m²],bending stiffness x cracked [kN·m²]"
    )
    text = text.replace(
        "bending stiffness x cracked", "bending stiffness y cracked [kN·m²],bending stiffness x cracked"
    )
    rows = text.splitlines()
    text = "\n".join([rows[0], *(f"{row},1e7,2e7" for row in rows[1:])]) + "\n"
    cracked = read(on=OWN, text=text).storeys.stiffness[1]
    np.testing.assert_allclose(cracked.lateral["x"].bending, 2e7)
    np.testing.assert_allclose(cracked.lateral["y"].bending, 1e7)
    assert cracked.lateral["x"].shear is None


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "bending stiffness x [kN.m2]",
            "bending [kN.m2]",
            'storeys.csv: no column "bending stiffness x [kN·m²]"; must have it, since x is analysed (job.toml)',
        ),
        (
            "[kN.m2]",
            "[kN/m]",
            'storeys.csv, heading "bending stiffness x [kN/m]": "kN/m" is a unit of stiffness, not of bending stiffness; '
            "must be kN·m², MN·m², GN·m², kip·ft² or kip·in²",
        ),
        (
            "5.5e7,1.9e6,44000",
            "0,1.9e6,44000",
            'storeys.csv, level "2": bending stiffness x 0 kN·m²; must be above 0',
        ),
        (
            "5.5e7,1.9e6,44000",
            "5.5e7,,44000",
            'storeys.csv, level "2": shear stiffness x is blank; must be given for each level above the effective base, '
            "or for none",
        ),
    ],
)
def test_refusals(read, old, new, message):
    assert one(read((old, new), on=WALLS, text=TEXT)) == message


def test_columns_of_another_model_are_kept(read):
    text = TEXT.replace("mass [t],", "mass [t],stiffness x [kN/m],")
    for mass in ("180,", "240,", "255,"):
        text = text.replace(mass, f"{mass}9e4,")
    got = read(on=WALLS, text=text)
    assert got.notices == ('storeys.csv, column "stiffness x [kN/m]" isn\'t used by this model, and is kept',)


def test_levels_below_the_base_need_no_stiffness(read):
    text = TEXT + "Cellar,3.5,300,,,\n"
    got = read(on=(*WALLS, ('effective_base = ""', 'effective_base = "Cellar"')), text=text).storeys
    assert got.level == ("1", "2", "Roof")
    np.testing.assert_allclose(got.stiffness[0].lateral["x"].storey_height, [4.6, 3.4, 3.1])


@pytest.mark.parametrize(("system", "units"), [("SI", (1.0, 1.0)), ("US", (KIP / (FOOT / 12.0), KIP * FOOT))])
def test_springs_at_the_base(read, system, units):
    springs = "[base]\ntranslation_x = 3000\nrocking_x = 5e6\ndamping_x = 0.07\nrocking_y = 4e6\n[model]"
    got = read(on=(("[model]", springs), ('"SI"', f'"{system}"'))).storeys.springs
    assert got["x"].translation == pytest.approx(3000 * units[0], rel=1e-12)
    assert got["x"].rocking == pytest.approx(5e6 * units[1], rel=1e-12)
    assert got["x"].damping == 0.07
    assert (got["y"].translation, got["y"].damping) == (None, None)
    assert read().storeys.springs == {}


IN_STIFFNESS = (("[answers]", "[basis]\nsecond_order_in_stiffness = true\n[answers]"),)


def test_gravity_loads_in_the_stiffness(read):
    given = {"remarks": "gravity load [kN]", "plant": "2100", "150000,": "150000,2400", "152500,": "152500,2500"}
    loads = (*given.items(), ("lobby", "2600"))
    got = read(*loads, on=IN_STIFFNESS).storeys
    assert got.second_order is True
    np.testing.assert_allclose(got.gravity, [2600.0, 2500.0, 2400.0, 2100.0])
    assert read(*loads).storeys.second_order is False


@pytest.mark.parametrize("column", ["remarks", "gravity load [kN]"])
def test_gravity_loads_in_the_stiffness_that_are_not_given(read, column):
    blank = (("remarks", column), ("plant", ""), ("lobby", ""))
    assert one(read(*blank, on=IN_STIFFNESS)) == (
        "job.toml, basis.second_order_in_stiffness: got true without gravity loads; must be false, or storeys.csv must "
        'have a column "gravity load"'
    )
