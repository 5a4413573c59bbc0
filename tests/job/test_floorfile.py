"""The tables of the mass take-off read, and refused by file, row and heading."""

from __future__ import annotations

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcsheet.job.errors import InputError
from calcsheet.job.floorfile import read_floors
from calcsheet.job.storeycells import read_frame
from calcsheet.job.storeyfile import read_storeys

STOREYS = """\
level,storey height [m],stiffness x [kN/m],stiffness y [kN/m]
Roof,3.0,148000,131000
2,3.3,160000,150000
1,4.4,155000,140000
"""
FLOORS = """\
level,floor area [m²],plan x [m],plan y [m],slab [m²],offices [m²],façade [m],columns [m²],note
Roof,180,12,15,180,,54,1.6,
2,300,20,15,300,260,70,2.1,set back above
1,300,20,15,290,250,70,2.4,
"""
LOADS = """\
load,kind,place,load per area [kN/m²],unit weight [kN/m³]
slab,permanent,floor,7.2,
Offices,variable,floor,3.0,
façade,permanent,facade,0.9,
columns,permanent,columns,,25
"""
MASSES = "level,item,weight [kN],x [m],y [m],plan x [m],plan y [m]\nRoof,chiller,85,4,-3,3,2\nRoof,mast,4.5,0,6,,\n"
BASIS = '[[mass_basis]]\nload = "offices"\nshare = 0.3\nclause = "4.2.4"\n[answers]'
FROM = ("[answers]", '[masses]\nsource = "floors.csv"\n[answers]')
WITH_BASIS = ("[answers]", BASIS)


@pytest.fixture
def taken(card, table):
    """The take-off with pieces of its texts replaced; None leaves a file out."""

    def read(*changes, on=(WITH_BASIS,), storeys=STOREYS, **texts):
        texts = {"floors": FLOORS, "loads": LOADS, "masses": MASSES} | texts
        for old, new in changes:
            (name,) = (name for name, text in texts.items() if text is not None and old in text)
            texts[name] = texts[name].replace(old, new, 1)
        tables = {f"{name}.csv": table(text, f"{name}.csv") for name, text in texts.items() if text is not None}
        chosen = card(*on)
        return read_floors(tables, chosen, read_frame(table(storeys), chosen))

    return read


def test_a_takeoff_is_read_from_the_base_up(taken):
    reading = taken()
    assert reading.messages == ()
    assert reading.floors.unused == ('floors.csv, column "note" isn\'t known: not used, and kept',)
    floors = reading.floors
    assert floors.level == ("1", "2", "Roof")
    assert floors.storey_height.tolist() == [4.4, 3.3, 3.0]
    assert floors.area.tolist() == [300.0, 300.0, 180.0]
    assert floors.plan_x.tolist() == [20.0, 20.0, 12.0]
    assert floors.centre_x.tolist() == [0.0, 0.0, 0.0]
    assert floors.own_radius == (None, None, None)
    assert [(load.name, load.kind, load.place, load.value, load.share, load.clause) for load in floors.load] == [
        ("slab", "permanent", "floor", 7.2, 1.0, ""),
        ("Offices", "variable", "floor", 3.0, 0.3, "4.2.4"),
        ("façade", "permanent", "façade", 0.9, 1.0, ""),
        ("columns", "permanent", "columns", 25.0, 1.0, ""),
    ]
    assert floors.amount.tolist() == [[290, 250, 70, 2.4], [300, 260, 70, 2.1], [180, 0, 54, 1.6]]
    assert [(o.level, o.name, o.weight, o.x, o.y, o.plan_x) for o in floors.other] == [
        ("Roof", "chiller", 85.0, 4.0, -3.0, 3.0),
        ("Roof", "mast", 4.5, 0.0, 6.0, 0.0),
    ]
    assert floors.stated is None


def test_units_are_converted(taken):
    """By definition: 1 ft = 0.3048 m, 1 lbf = 4.4482216152605 N; 9.80665 kN weigh 1 t."""
    reading = taken(
        ("floor area [m²]", "floor area [ft2]"),
        ("[kN/m²]", "[psf]"),
        ("[kN/m³]", "[pcf]"),
        ("weight [kN]", "mass [kg]"),
        ("x [m],y", "x [ft],y"),
    )
    assert reading.messages == ()
    assert reading.floors.area[0] == pytest.approx(300.0 * 0.3048**2, rel=1e-15)
    assert reading.floors.load[0].value == pytest.approx(7.2 * 4.4482216152605e-3 / 0.3048**2, rel=1e-15)
    assert reading.floors.load[3].value == pytest.approx(25.0 * 4.4482216152605e-3 / 0.3048**3, rel=1e-15)
    assert reading.floors.other[0].weight == pytest.approx(0.085 * 9.80665, rel=1e-15)
    assert reading.floors.other[0].x == pytest.approx(4.0 * 0.3048, rel=1e-15)


def test_a_variable_load_without_a_share_has_none(taken):
    assert taken(on=()).floors.load[1].share is None


def test_a_share_that_is_stated_twice_is_refused(taken):
    twice = BASIS.replace("[answers]", '[[mass_basis]]\nload = " Offices"\nshare = 0.6\n[answers]')
    assert taken(on=(("[answers]", twice),)).messages == (
        'loads.csv, load "Offices": 2 entries of [[mass_basis]] in job.toml; must have one at most',
    )


def test_other_masses_may_be_left_out(taken):
    assert taken(masses=None).floors.other == ()


def test_centres_and_radii_are_read(taken):
    text = "level,floor area [m²],plan x [m],plan y [m],centre x [m],centre y [m],radius of gyration [m],slab [m²]\n"
    text += "Roof,180,12,15,-4,0.5,,180\n2,300,20,15,0,0,8.1,300\n1,300,20,15,0,0,,290\n"
    floors = taken(floors=text, loads="load,kind,place,load per area [kPa]\nslab,permanent,floor,7.2\n").floors
    assert floors.centre_x.tolist() == [0.0, 0.0, -4.0]
    assert floors.own_radius == (None, 8.1, None)


def test_files_as_spreadsheets_write_them(taken):
    def foreign(text):
        return "\ufeff" + text.replace(",", ";").replace(".", ",").replace("\n", "\r\n")

    assert taken(floors=foreign(FLOORS), loads=foreign(LOADS), masses=foreign(MASSES)).floors.amount[0, 3] == 2.4


def test_masses_that_the_storey_table_states(taken):
    stated = (
        STOREYS.replace("[m],", "[m],weight [kN],", 1).replace("3.0,", "3.0,1471,").replace("3.3,", "3.3,2451.6625,")
    )
    floors = taken(storeys=stated.replace("4.4,", "4.4,2500,")).floors
    assert floors.stated[1] == pytest.approx(250.0, rel=1e-15)
    assert taken(storeys=stated.replace("4.4,", "4.4,,")).floors.stated is None  # one is blank: none is known


ROWS = '"Roof", "2", "1"'


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("7.2", "-7.2", 'loads.csv, load "slab": load per area -7.2 kN/m²; must be 0 or above'),
        ("7.2,", ",", 'loads.csv, load "slab": load per area is blank; must be a number with place floor'),
        (
            "7.2,",
            "7.2,24",
            'loads.csv, load "slab": unit weight given with place floor; must be blank: a load '
            "with place floor is given by its load per area",
        ),
        (",,25", ",,", 'loads.csv, load "columns": unit weight is blank; must be a number with place columns'),
        ("slab,permanent", "slab,dead", 'loads.csv, load "slab": kind "dead"; must be permanent or variable'),
        (
            "slab,permanent,floor",
            "slab,permanent,",
            'loads.csv, load "slab": place is blank; must be floor, parapet, façade, walls or columns',
        ),
        ("slab,perm", "offices,perm", 'loads.csv, load "offices": another row has this name but for capitals'),
        ("slab,perm", "Offices,perm", 'loads.csv, row 2: load "Offices" stands in 2 rows; must stand in one'),
        ("slab,perm", "Plan x,perm", 'loads.csv, load "Plan x": this name; must be no other heading of floors.csv'),
        (
            "Offices,variable",
            "Offices,permanent",
            'loads.csv, load "Offices": permanent, with a share of 0.3 in [[mass_basis]] of job.toml; must have a share of 1',
        ),
        (
            "[kN/m²]",
            "[kN/m³]",
            'loads.csv, heading "load per area [kN/m³]": "kN/m³" is a unit of unit weight, not of pressure',
        ),
        ("kind,", "sort,", 'loads.csv: no column "kind"; must have one'),
        ("slab [m²]", "slabs [m²]", 'floors.csv: no column "slab [m²]"; must have one'),
        ("slab [m²]", "slab [m]", 'floors.csv, heading "slab [m]": "m" is a unit of length, not of area'),
        ("note", "slab [m²]", 'floors.csv, heading "slab [m²]": given in columns 5 and 9; must be given once'),
        ("Roof,180,12", "Roof,0,12", 'floors.csv, level "Roof": floor area 0 m²; must be above 0'),
        ("2,300,20", "2,300,", 'floors.csv, level "2": plan x is blank; must be a number in m, above 0'),
        ("260", "26o", 'floors.csv, level "2": Offices "26o"; must be a number in m²'),
        ("2,300,20", "2a,300,20", f'floors.csv, level "2a": not in storeys.csv; must be one of {ROWS}'),
        ("2,300,20", ",300,20", "floors.csv, row 3: level is blank; must have a name"),
        ("2,300,20", "1,300,20", 'floors.csv, row 3: level "1" stands in 2 rows; must stand in one'),
        ("set back above", "set back,above", "floors.csv, row 3: 10 cells; must be 9, one for each heading"),
        ("plan y [m],slab", "centre y [m],slab", "floors.csv: only centre y is given; must have centre x and centre y"),
        ("Roof,chiller", "Attic,chiller", f'masses.csv, row 2: level "Attic"; must be one of {ROWS}'),
        ("weight [kN],x", "weight [t],x", 'masses.csv, heading "weight [t]": "t" is a unit of mass, not of weight'),
        (
            "plan y [m]\nRoof,ch",
            "mass [t]\nRoof,ch",
            "masses.csv: columns mass and weight; must have exactly one of them",
        ),
        ("85,4", "85,", "masses.csv, row 2: x is blank; must be a number in m, a finite number"),
    ],
)
def test_refusals(taken, old, new, message):
    reading = taken((old, new))
    assert reading.floors is None
    assert any(found.startswith(message) for found in reading.messages), reading.messages


def test_levels_are_those_of_the_storey_table_in_its_order(taken):
    rows = FLOORS.splitlines()
    missing = taken(floors="\n".join(rows[:-1]))
    assert missing.messages == ('floors.csv: no row for level "1"; must have a row for each level of storeys.csv',)
    turned = taken(floors="\n".join([rows[0], *rows[:0:-1]]))
    assert turned.messages == (
        f'floors.csv: levels in the order "1", "2", "Roof"; must be in that of storeys.csv, {ROWS}',
    )


@pytest.mark.parametrize("name", ["floors", "loads"])
def test_a_file_that_is_missing_is_named(taken, name):
    (message,) = taken(**{name: None}).messages
    assert message.startswith(f"no {name}.csv in the job folder; the mass take-off needs one with a row for each ")


def test_a_file_that_is_no_table_is_named(card):
    wrong = InputError("loads.csv", "", "the file is empty", "must have a line of headings")
    messages = read_floors({"loads.csv": wrong}, card(), None).messages
    assert messages[1] == "loads.csv: the file is empty; must have a line of headings"


def test_a_storey_table_without_heights_is_named(taken):
    reading = taken(storeys=STOREYS.replace("storey height [m]", "storey height"))
    assert reading.messages == (
        "storeys.csv: its levels and storey heights can't be read; the mass take-off needs them",
    )


def test_storeys_take_masses_and_areas_from_it(taken, card, table):
    reading = taken(on=(WITH_BASIS, FROM), loads=LOADS, masses=None)
    storeys = read_storeys(table(STOREYS), card(WITH_BASIS, FROM), {}, reading).storeys
    # by hand, roof: 180·7.2 + ½·3.0·54·0.9 + ½·3.0·1.6·25 = 1296 + 72.9 + 60
    assert storeys.mass[-1] == pytest.approx(1428.9 / 9.80665, rel=1e-14)
    assert storeys.area.tolist() == [300.0, 300.0, 180.0]
    assert storeys.given == "take-off"


def test_a_mass_column_beside_the_takeoff_is_refused(taken, card, table):
    text = STOREYS.replace("level,", "level,mass [t],").replace("\n1,", "\n1,200,").replace("\n2,", "\n2,200,")
    reading = read_storeys(table(text.replace("Roof,", "Roof,90,")), card(WITH_BASIS, FROM), {}, taken())
    assert [p.message for p in reading.problems] == [
        'storeys.csv: column "mass"; must be left out, since the masses come from floors.csv (job.toml, masses.source)'
    ]


def test_problems_of_the_takeoff_keep_the_storeys_back(taken, card, table):
    on = (WITH_BASIS, FROM)
    wrong = read_storeys(table(STOREYS), card(*on), {}, taken(("7.2", "x")))
    assert [p.message for p in wrong.problems] == [
        'loads.csv, load "slab": load per area "x"; must be a number in kN/m²'
    ]
    weightless = FLOORS.replace("180,,54,1.6", ",,,")
    bare = read_storeys(table(STOREYS), card(*on), {}, taken(floors=weightless, masses=None))
    assert [p.message for p in bare.problems] == [
        'mass take-off, weight of level "Roof": 0 kN; must be above 0 above the effective base'
    ]
    unread = read_storeys(table(STOREYS), card(*on))
    assert unread.storeys is None
    assert unread.problems[0].message.startswith("no floors.csv in the job folder")


cells = st.text(st.sampled_from("0123456789.,;-+eE \"'[]²³mkNRof12\n\t\r"), max_size=12)


@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None, max_examples=100)
@given(st.sampled_from(["floors", "loads", "masses"]), st.data())
def test_any_text_is_read_or_refused(card, table, name, data):
    """A piece of a table replaced by anything: floors, or at least one problem; never an error."""
    texts = {"floors": FLOORS, "loads": LOADS, "masses": MASSES}
    text = texts[name]
    start = data.draw(st.integers(0, len(text)))
    end = data.draw(st.integers(start, min(len(text), start + 40)))
    texts[name] = text[:start] + data.draw(cells) + text[end:]
    tables = {}
    for key, content in texts.items():
        try:
            tables[f"{key}.csv"] = table(content, f"{key}.csv")
        except InputError as error:
            tables[f"{key}.csv"] = error
    chosen = card(WITH_BASIS, FROM)
    storeys = table(STOREYS)
    reading = read_floors(tables, chosen, read_frame(storeys, chosen))
    assert (reading.floors is None) == bool(reading.messages)
    assert all(message.strip() for message in reading.messages)
    whole = read_storeys(storeys, chosen, {}, reading)
    assert (whole.storeys is None) == bool(whole.problems)
