from __future__ import annotations

import codecs

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from calcsheet.core.storeys import Storeys
from calcsheet.job.errors import InputError
from calcsheet.job.storeyfile import read_storeys
from calcsheet.steps.serial import from_json, to_json
from calcsheet.units import STANDARD_GRAVITY

ON_1 = (('effective_base = ""', 'effective_base = "1"'),)
OWN = (("factor = 0.5", "own = true"),)
NOT_KNOWN = 'storeys.csv, column "remarks" isn\'t known: not used, and kept'


def messages(reading) -> list[str]:
    return [problem.message for problem in reading.problems]


def one(reading):
    (problem,) = reading.problems
    assert reading.storeys is None
    return problem


def test_the_table_is_read_from_the_base_up(read):
    got = read().storeys
    assert (got.base, got.base_elevation) == ("base", 0.0)
    assert got.level == ("1", "2", "3, upper", "Roof")
    np.testing.assert_allclose(got.storey_height, [4.75, 3.6, 3.6, 3.4])
    np.testing.assert_allclose(got.elevation, [4.75, 8.35, 11.95, 15.35])
    np.testing.assert_allclose(got.mass, [260, 251.25, 240, 212.5])
    assert (got.below, got.forces, got.drifts) == ((), "uncracked", "cracked")
    uncracked, cracked = got.stiffness
    np.testing.assert_allclose(uncracked.lateral["x"].storey, [155000, 163000, 160000, 148000])
    np.testing.assert_allclose(cracked.lateral["y"].storey, [70000, 76250, 75000, 65500])
    assert cracked.ground == "half the uncracked"


def test_unknown_columns_are_named(read):
    got = read()
    assert got.notices == (NOT_KNOWN,)
    assert [column.key for column in got.columns] == [
        "level",
        "storey height",
        "mass",
        "stiffness x",
        "stiffness y",
        "column 6",
    ]
    assert got.levels == ("Roof", "3, upper", "2", "1")
    assert got.rows[0] == ("Roof", "3.40", "212.5", "148000", "131000", "plant")


def test_units_of_both_systems_give_the_same_storeys(read):
    us = read(
        ("storey height [m]", "storey height [ft]"),
        ("mass [t]", "weight [kip]"),
        ("stiffness x [kN/m]", "stiffness x [kip/in]"),
        on=(('"SI"', '"US"'), ("base_elevation = 0", "base_elevation = 10")),
    ).storeys
    si = read().storeys
    np.testing.assert_allclose(us.storey_height, si.storey_height * 0.3048)
    np.testing.assert_allclose(us.mass, si.mass * 4.4482216152605 / STANDARD_GRAVITY)
    np.testing.assert_allclose(
        us.stiffness[0].lateral["x"].storey, si.stiffness[0].lateral["x"].storey * 4.4482216152605 / 0.0254
    )
    np.testing.assert_allclose(us.elevation, 3.048 + si.elevation * 0.3048)
    assert us.base_elevation == pytest.approx(3.048)


def test_elevations_and_storey_heights_say_the_same(read):
    text = "level,elevation [m],mass [t],stiffness x [kN/m]\nRoof,16.35,1,5\n2,12.95,2,6\n1,8.5,3,7\n"
    on = (("base_elevation = 0", "base_elevation = 4"), ('y = "y runs along grid A"\n', ""))
    by_elevation = read(text=text, on=on).storeys
    heights = text.replace("elevation", "storey height").replace("16.35", "3.4").replace("12.95", "4.45")
    by_height = read(text=heights.replace("8.5", "4.5"), on=on).storeys
    np.testing.assert_allclose(by_elevation.storey_height, by_height.storey_height)
    np.testing.assert_allclose(by_elevation.elevation, by_height.elevation)
    assert list(by_height.stiffness[0].lateral) == ["x"]


def test_levels_at_and_below_the_effective_base(read):
    got = read(("155000,140000", ","), ("1,4.75,260", "1,4.75,0"), on=ON_1).storeys
    assert (got.base, got.base_elevation) == ("1", 4.75)
    assert got.level == ("2", "3, upper", "Roof")
    assert [(b.level, b.elevation, b.mass) for b in got.below] == [("1", 4.75, 0.0)]
    np.testing.assert_allclose(got.stiffness[0].lateral["x"].storey, [163000, 160000, 148000])


def test_a_set_of_own_values(read):
    text = (
        "level,storey height [m],mass [t],"
        "Stiffness X cracked [MN/m],stiffness  y  CRACKED [kN/m],stiffness x [kN/m],"
        "stiffness y [kN/m]\nRoof,3,1,5,6,7,8\n1,3,1,9,10,11,12\n"
    )
    _, cracked = read(text=text, on=OWN).storeys.stiffness
    np.testing.assert_allclose(cracked.lateral["x"].storey, [9000, 5000])
    np.testing.assert_allclose(cracked.lateral["y"].storey, [10, 6])


@pytest.mark.parametrize("mark", [b"", codecs.BOM_UTF8])
@pytest.mark.parametrize("delimiter", [";", "\t"])
def test_files_as_spreadsheets_write_them(table, card, mark, delimiter):
    text = (
        "level;storey height [m];mass [t];stiffness x [kN/m];stiffness y [kN/m];\r\n"
        '"Dach; hinten";3,40;1.212,5;148 000;131000;\r\n'
        "Ebene Ä;3,6;1.250;150000;131000;\r\n;;;;;\r\n\r\n\r\n"
    ).replace(";", delimiter)
    got = read_storeys(table(mark + text.encode()), card())
    assert messages(got) == []
    assert got.storeys.level == ("Ebene Ä", " ".join(f"Dach{delimiter} hinten".split()))
    np.testing.assert_allclose(got.storeys.mass, [1250, 1212.5])
    np.testing.assert_allclose(got.storeys.storey_height, [3.6, 3.4])
    assert got.notices == ("storeys.csv, row 4: blank, not a level, and kept",)


MASS = "t, kg, kip·s²/ft or kip·s²/in"


@pytest.mark.parametrize(
    ("old", "new", "row", "column", "message"),
    [
        ("212.5", "-12", 0, "mass", 'level "Roof": mass -12 t; must be above 0'),
        ("212.5", "0", 0, "mass", 'level "Roof": mass 0 t; must be above 0'),
        ("212.5", "", 0, "mass", 'level "Roof": mass is blank; must be a number in t, above 0'),
        ("212.5", "abc", 0, "mass", 'level "Roof": mass "abc"; must be a number in t'),
        ("212.5", "nan", 0, "mass", 'level "Roof": mass "nan"; must be a number in t'),
        ("212.5", "1e999", 0, "mass", 'level "Roof": mass 1e999 t; must be a finite number'),
        (
            "3.40",
            "12 in",
            0,
            "storey height",
            'level "Roof": storey height "12 in"; '
            "must be a number in m, the heading's unit, without a unit of its own",
        ),
        (
            "212.5",
            '"212,5"',
            0,
            "mass",
            'level "Roof": mass "212,5"; must be a number in t with the decimal mark ".", as in the other cells',
        ),
        ("3.40", "0", 0, "storey height", 'level "Roof": storey height 0 m; must be above 0'),
        ("163000", "-1", 2, "stiffness x", 'level "2": stiffness x -1 kN/m; must be above 0'),
        (
            "152500",
            "",
            2,
            "stiffness y",
            'level "2": stiffness y is blank; must be a number in kN/m, above 0',
        ),
        ("2,3.6", "1,3.6", 3, "level", 'level "1": named in rows 4 and 5; each level needs its own name'),
        ("2,3.6", " ,3.6", 2, "level", "row 4: level is blank; must have a name"),
        ("plant", "plant,4", 0, None, "row 2: 7 cells; must be 6, one for each heading"),
        ("3.40", "3,40", 0, None, "row 2: 7 cells; must be 6, one for each heading"),
        (
            "mass [t]",
            "mass [kN]",
            None,
            "mass",
            f'heading "mass [kN]": "kN" is a unit of weight, not of mass; must be {MASS}',
        ),
        (
            "mass [t]",
            "mass [slug]",
            None,
            "mass",
            f'heading "mass [slug]": "slug" is no unit of mass; must be {MASS}',
        ),
        (
            "mass [t]",
            "mass",
            None,
            "mass",
            f'heading "mass": no unit; must give its unit in square brackets: {MASS}',
        ),
        (
            "mass [t]",
            "mass []",
            None,
            "mass",
            f'heading "mass []": no unit; must give its unit in square brackets: {MASS}',
        ),
        ("level", "level [m]", None, "level", 'heading "level [m]": a unit, [m]; must be "level" alone'),
        (
            "remarks",
            "Mass [kg]",
            None,
            "column 6",
            'heading "Mass [kg]": given in columns 3 and 6; must be given once',
        ),
    ],
)
def test_one_thing_wrong(read, old, new, row, column, message):
    problem = one(read((old, new)))
    assert (problem.row, problem.column) == (row, column)
    assert problem.message == f"storeys.csv, {message}"


def test_three_levels_of_one_name(read):
    got = read(("2,3.6", "1,3.6"), ('"3, upper"', "1"))
    message = 'storeys.csv, level "1": named in rows 3, 4 and 5; each level needs its own name'
    assert [(p.row, p.message) for p in got.problems] == [(2, message), (3, message)]


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("level", "storey", 'no column "level"; must have one'),
        (
            "storey height",
            "height",
            'no column "storey height [m]" or "elevation [m]"; must have exactly one of them',
        ),
        (
            "remarks",
            "elevation [m]",
            'columns "storey height [m]" and "elevation [m]"; must have exactly one of them',
        ),
        ("mass", "masses", 'no column "mass [t]" or "weight [kN]"; must have exactly one of them'),
        ("remarks", "weight [kN]", 'columns "mass [t]" and "weight [kN]"; must have exactly one of them'),
        (
            "stiffness y",
            "stiffness z",
            'no column "stiffness y [kN/m]"; must have it, since y is analysed (job.toml)',
        ),
    ],
)
def test_columns_missing_or_contradictory(read, old, new, message):
    assert f"storeys.csv: {message}" in messages(read((old, new)))


def test_columns_of_own_values_missing(read):
    assert messages(read(on=OWN)) == [
        f'storeys.csv: no column "stiffness {d} cracked [kN/m]"; '
        f"must have it, since {d} is analysed and stiffness.cracked has own values (job.toml)"
        for d in "xy"
    ]


def test_every_wrong_cell_is_named(read):
    got = read(("212.5", "-1"), ("148000", "x"), ("251.25", ""), ("4.75", "0"))
    assert [(p.row, p.column) for p in got.problems] == [
        (3, "storey height"),
        (0, "mass"),
        (2, "mass"),
        (0, "stiffness x"),
    ]


def test_ambiguous_cells_are_refused_one_by_one(read):
    text = "level;storey height [m];mass [t];stiffness x [kN/m];stiffness y [kN/m]\nRoof;3;1,250;5;5\n1;3;2.500;5;5\n"
    assert messages(read(text=text)) == [
        'storeys.csv, level "Roof": mass 1,250 t can be read as 1250 or 1,25; '
        "must be written so that it can be read in one way",
        'storeys.csv, level "1": mass 2.500 t can be read as 2.5 or 2500; '
        "must be written so that it can be read in one way",
    ]
    got = read(("2.500", "2,51"), text=text)
    np.testing.assert_allclose(got.storeys.mass, [2.51, 1.25])


def test_elevations_must_fall_to_above_the_base(read):
    text = "level,elevation [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]\nRoof,9,1,5,5\n2,9.5,1,5,5\n1,2,1,5,5\n"
    assert messages(read(text=text, on=(("base_elevation = 0", "base_elevation = 2"),))) == [
        'storeys.csv, level "2": elevation 9.5 m; must be below 9 m, that of level "Roof" above it',
        'storeys.csv, level "1": elevation 2 m; must be above 2 m, levels.base_elevation in job.toml',
    ]


@pytest.mark.parametrize(
    ("base", "message"),
    [
        ("G", 'got "G"; must be "" or a level of storeys.csv: "Roof", "3, upper", "2", "1"'),
        ("Roof", 'got "Roof", the top level; must have at least one level above it'),
    ],
)
def test_effective_bases_refused(read, base, message):
    problem = one(read(on=(('effective_base = ""', f'effective_base = "{base}"'),)))
    assert problem.message == f"job.toml, levels.effective_base: {message}"


def test_below_the_base_a_mass_may_be_zero_but_not_less(read):
    problem = one(read(("1,4.75,260", "1,4.75,-1"), on=ON_1))
    assert problem.message == 'storeys.csv, level "1": mass -1 t; must be 0 or above'
    problem = one(read(("155000", "x"), on=ON_1))
    assert problem.message == 'storeys.csv, level "1": stiffness x "x"; must be a number in kN/m'


LOADED = (
    ("remarks", "gravity load [kN],floor area [m²]"),
    (",plant", ",1900,410.5"),
    ("152500,", "152500,2600,420"),
    ("150000,", "150000,0,420"),
    (",lobby", ",2700,450"),
)
WHOLE = "must be given for each level above the effective base, or for none"


def test_gravity_loads_and_floor_areas(read):
    got = read(*LOADED)
    assert got.notices == ()
    np.testing.assert_allclose(got.storeys.gravity, [2700, 2600, 0, 1900])
    np.testing.assert_allclose(got.storeys.area, [450, 420, 420, 410.5])
    us = read(*LOADED, ("gravity load [kN]", "gravity load [kip]"), ("floor area [m²]", "floor area [ft2]")).storeys
    np.testing.assert_allclose(us.gravity, got.storeys.gravity * 4.4482216152605)
    np.testing.assert_allclose(us.area, got.storeys.area * 0.3048**2)
    for storeys in (got.storeys, read().storeys):
        back = from_json(Storeys, to_json(storeys))
        for name in ("gravity", "area"):
            np.testing.assert_array_equal(getattr(back, name), getattr(storeys, name))


def test_without_their_columns_there_are_none(read):
    assert (read().storeys.gravity, read().storeys.area) == (None, None)


def test_a_blank_column_is_none_and_said_so(read):
    got = read(("remarks", "floor area [m²]"), ("plant", ""), ("lobby", ""))
    assert got.storeys.area is None
    assert got.notices == ('storeys.csv, column "floor area [m²]" is blank: not used, and kept',)


def test_levels_below_the_base_need_no_gravity_load(read):
    got = read(*LOADED, (",2700,450", ",,"), on=ON_1).storeys
    np.testing.assert_allclose(got.gravity, [2600, 0, 1900])
    np.testing.assert_allclose(got.area, [420, 420, 410.5])
    alone = read(("remarks", "gravity load [kN]"), ("plant", ""), ("lobby", "9"), on=ON_1)
    assert alone.storeys.gravity is None
    assert alone.notices == ('storeys.csv, column "gravity load [kN]" is blank: not used, and kept',)


@pytest.mark.parametrize(
    ("old", "new", "row", "column", "message"),
    [
        ("1900", "-1", 0, "gravity load", 'level "Roof": gravity load -1 kN; must be 0 or above'),
        ("2600", "", 2, "gravity load", f'level "2": gravity load is blank; {WHOLE}'),
        ("2700", "a", 3, "gravity load", 'level "1": gravity load "a"; must be a number in kN'),
        ("410.5", "0", 0, "floor area", 'level "Roof": floor area 0 m²; must be above 0'),
        ("450", "", 3, "floor area", f'level "1": floor area is blank; {WHOLE}'),
        (
            "[m²]",
            "[m]",
            None,
            "floor area",
            'heading "floor area [m]": "m" is a unit of length, not of area; must be m² or ft²',
        ),
    ],
)
def test_gravity_loads_and_floor_areas_refused(read, old, new, row, column, message):
    problem = one(read(*LOADED, (old, new)))
    assert (problem.row, problem.column, problem.message) == (row, column, f"storeys.csv, {message}")


def test_no_levels(read):
    text = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]\n"
    assert one(read(text=text)).message == "storeys.csv: no levels; must have a row for each level, roof first"


def test_a_blank_row_is_no_level(read):
    got = read(("2,3.6,251.25,163000,152500,\n", ",,,,,\n\n,,,,,\n"))
    assert got.storeys.level == ("1", "3, upper", "Roof")
    assert got.notices[-1] == "storeys.csv, rows 4 and 6: blank, not a level, and kept"


def test_a_direction_that_is_not_analysed_is_not_read(read):
    got = read(("152500", "abc"), on=(('y = "y runs along grid A"\n', ""),))
    assert got.notices == (
        'storeys.csv, column "stiffness y [kN/m]" isn\'t used by this model, and is kept',
        NOT_KNOWN,
    )
    assert list(got.storeys.stiffness[0].lateral) == ["x"]


def test_a_stiffness_too_large_once_factored(read):
    got = read(("148000", "1e308"), on=(("factor = 0.5", "factor = 10"),))
    assert one(got).message.startswith("storeys.csv, storey stiffness [kN/m]")


cells = st.sampled_from(
    ["", "a", "1", "1,250", "1.250", "-3", "3", "level", "mass [t]", "mass", "elevation [m]", "[", "]"]
)
junk = st.lists(st.lists(st.one_of(cells, st.text(max_size=4)), max_size=6), min_size=1, max_size=5)


@given(junk, st.sampled_from([",", ";", "\t"]), st.booleans())
def test_junk_is_read_or_refused(read, table, card, rows, delimiter, with_headings):
    import csv
    import io

    assume(with_headings or any(cell.strip() for cells in rows for cell in cells))  # a blank file is no table
    if with_headings:
        rows = [["level", "storey height [m]", "mass [t]", "stiffness x [kN/m]", "stiffness y [kN/m]"], *rows]
    out = io.StringIO()
    csv.writer(out, delimiter=delimiter).writerows(rows)
    text = out.getvalue().encode("utf-8", "replace")
    try:
        got = read_storeys(table(text), card())
    except InputError:  # no table at all: quotation marks that don't pair under the delimiter sniffed
        assert not with_headings
        return
    assert (got.storeys is None) == bool(got.problems)
    assert all(problem.row is None or 0 <= problem.row < len(got.rows) for problem in got.problems)
