"""Members, sections and materials read from their files, and refused by row."""

from __future__ import annotations

import math
from contextlib import suppress

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcsheet.core.errors import ModelError
from calcsheet.core.stiffnesstakeoff import take_off
from calcsheet.job.card import parse_card
from calcsheet.job.errors import InputError
from calcsheet.job.memberfile import read_members
from calcsheet.job.storeycells import Frame
from calcsheet.job.table import parse_table
from calcsheet.job.textfile import Stamp, TextFile, decode

MATERIALS = """\
material,kind,modulus [GPa],shear modulus [GPa],Poisson ratio
C30,concrete,33,,0.2
S355,steel,210,81,
Brick,masonry,4.2,,
"""
SECTIONS = """\
section,material,shape,depth [mm],width [mm],thickness [mm],area [cm²],second moment major [cm⁴],second moment minor [cm⁴]
C500,C30,rectangle,500,400,,,,
B600,C30,rectangle,600,300,,,,
W4,C30,rectangle,4000,250,,,,
Own,S355,own,,,,76.8,9100,3090
Bar,S355,own,,,,12.5,,
Strut,Brick,rectangle,900,115,,,,
"""
MEMBERS = """\
member,storeys,kind,section,direction,count,acts as,axis,height [m],run [m],\
stiffness factor,shear,shear factor,beam,spans [m],beam factor,ground
C1,1 to 3,column,C500,x,6,beams,minor,,,0.7,,,B600,6.0 + 7.2,0.35,cracked
C2,all,column,Own,y,4,fixed-pinned,,2.9,,,,,,,,
W,Roof,wall,W4,30°,2,cantilever,,,,0.5,yes,0.4,,,,
X,2,brace,Bar,y,1,pair in tension only,,,5.5,,,,,,,
I,1,infill strut,Strut,x,3,,,,5.5,,,,,,,
"""
FRAME = Frame(("G", "1", "2", "3", "Roof"), 1, np.array([3.6, 4.4, 3.3, 3.3, 3.1]), None)
"""The level at the base is no storey of the model."""


def table(text, file):
    found, encoding = decode(text.encode(), file)
    return parse_table(TextFile(found, encoding, Stamp("0")), file)


@pytest.fixture
def read(card):
    def of(members=MEMBERS, sections=SECTIONS, materials=MATERIALS, changes=()):
        texts = {"members.csv": members, "sections.csv": sections, "materials.csv": materials}
        for file, old, new in changes:
            assert old in texts[file]
            texts[file] = texts[file].replace(old, new, 1)
        reading = read_members({file: table(t, file) for file, t in texts.items()}, card, FRAME)
        return reading.takeoff, list(reading.problems)

    return of


@pytest.fixture
def card():
    return parse_card(
        'format = 1\n[job]\nproject = "P"\ntitle = "T"\nnumber = "1"\nrevision = "A"\ndate = 2026-01-31\n'
        '[people.prepared]\nname = "A. Writer"\n[units]\nsystem = "SI"\n[levels]\nbase_elevation = 0\n'
        '[directions]\nx = "along 1"\ny = "along A"\n[model]\nkind = "storey chain"\n'
        "[stiffness.gross]\nfactor = 1.0\n[stiffness.cut]\nfactor_x = 0.5\nfactor_y = 0.6\n"
        '[serves]\nforces = "gross"\ndrifts = "cut"\n[origins]\n"members.csv" = { source = "take-off" }\n'
    )


def test_rows_become_members_in_core_units(read):
    takeoff, problems = read()
    assert problems == []
    c1, c2, wall, brace, infill = takeoff.members
    assert (c1.first, c1.last, c1.count, c1.axis, c1.factor) == (0, 2, 6, "minor", 0.7)
    assert (c1.beam, c1.beam_below, c1.spans, c1.beam_factor, c1.ground) == (
        "B600",
        "B600",
        (6.0, 7.2),
        0.35,
        "cracked",
    )
    assert (c1.shear, wall.shear, wall.shear_factor) == (False, True, 0.4)
    assert (c2.first, c2.last, c2.height, c2.along) == (0, 3, 2.9, (0.0, 1.0))
    assert wall.along == pytest.approx((math.sqrt(0.75), 0.5))
    assert (brace.acts_as, brace.run, infill.acts_as) == ("pair in tension only", 5.5, "single")
    concrete, steel, brick = takeoff.materials
    assert (concrete.modulus, concrete.shear_modulus) == pytest.approx((33e6, 33e6 / 2.4))
    assert (steel.shear_modulus, brick.shear_modulus) == (81e6, 0.0)
    own = takeoff.sections[3]
    assert (own.area, own.major, own.minor) == pytest.approx((76.8e-4, 9100e-8, 3090e-8))
    assert takeoff.storey_height.tolist() == [4.4, 3.3, 3.3, 3.1]
    assert [(f.name, f.direction, f.factor) for f in takeoff.factors] == [
        ("gross", "x", 1.0), ("gross", "y", 1.0), ("cut", "x", 0.5), ("cut", "y", 0.6)
    ]  # fmt: skip
    assert takeoff.no_origin == ("sections.csv", "materials.csv")


@pytest.mark.parametrize(("text", "run"), [("3", (2, 2)), ("Roof to 2", (1, 3)), ("ALL", (0, 3)), ("2 TO 3", (1, 2))])
def test_runs_of_storeys(read, text, run):
    takeoff, _ = read(changes=[("members.csv", "C2,all", f"C2,{text}")])
    assert (takeoff.members[1].first, takeoff.members[1].last) == run


@pytest.mark.parametrize(
    ("text", "along"), [("y", (0, 1)), ("X", (1, 0)), ("90", (0, 1)), ("-180°", (1, 0)), ("45.0", (0.5**0.5, 0.5**0.5))]
)
def test_directions(read, text, along):
    takeoff, _ = read(changes=[("members.csv", "Own,y", f"Own,{text}")])
    assert takeoff.members[1].along == pytest.approx(along, rel=1e-15, abs=0)


def test_units_of_the_us_and_a_decimal_comma(read):
    materials = "material;kind;modulus [ksi];shear modulus [ksi]\nA;steel;29000;11200\n"
    sections = "section;material;shape;area [in²];second moment major [in⁴]\nS;A;own;10,5;210,75\n"
    members = "member;storeys;kind;section;direction;count;acts as;run [ft]\nB;all;brace;S;x;1;single;20,5\n"
    members += "C;all;column;S;y;2;fixed-fixed;\n"
    takeoff, problems = read(members, sections, materials)
    assert problems == []
    kip, inch = 4.4482216152605, 0.0254  # exact by definition
    assert takeoff.materials[0].modulus == pytest.approx(29000 * kip / inch**2, rel=1e-12)
    assert takeoff.sections[0].major == pytest.approx(210.75 * inch**4, rel=1e-12)
    assert takeoff.members[0].run == pytest.approx(20.5 * 0.3048, rel=1e-12)


WRONG = (
    (
        "members.csv",
        "C2,all",
        "C2,5",
        'row 3, member "C2"',
        'storeys "5"; must be a level above the effective base, a run such as "2 to 5", or all: "1", "2", "3", "Roof"',
    ),
    (
        "members.csv",
        "column,Own",
        "pillar,Own",
        'row 3, member "C2"',
        'kind "pillar"; must be column or wall or brace or infill strut',
    ),
    (
        "members.csv",
        "column,Own",
        "column,Oak",
        'row 3, member "C2"',
        'section "Oak"; must be in sections.csv: "C500", "B600", "W4", "Own", "Bar", "Strut"',
    ),
    (
        "members.csv",
        "Own,y",
        "Own,z",
        'row 3, member "C2"',
        'direction "z"; must be x, y, or degrees from x towards y, from -180 to 180',
    ),
    ("members.csv", "y,4", "y,4.5", 'row 3, member "C2"', "count 4.5; must be a whole number"),
    ("members.csv", "y,4", "y,0", 'row 3, member "C2"', "count 0; must be above 0"),
    ("members.csv", "y,4", "y,", 'row 3, member "C2"', "count is blank; must be given"),
    ("members.csv", "y,4", "y,four", 'row 3, member "C2"', 'count "four"; must be a number'),
    (
        "members.csv",
        "fixed-pinned",
        "cantilever",
        'row 3, member "C2"',
        'acts as "cantilever"; must be fixed-fixed or fixed-pinned or beams or beams on pinned base for a column',
    ),
    (
        "members.csv",
        "cantilever",
        "",
        'row 4, member "W"',
        "acts as is blank; must be cantilever or fixed-fixed for a wall",
    ),
    (
        "members.csv",
        "fixed-pinned,,2.9,",
        "fixed-pinned,,2.9,6",
        'row 3, member "C2"',
        "run is given; must be blank for a column that acts as fixed-pinned",
    ),
    (
        "members.csv",
        "only,,,5.5",
        "only,,,",
        'row 5, member "X"',
        "run is blank; must be given for a brace that acts as pair in tension only",
    ),
    ("members.csv", "x,3,,,,5.5", "x,3,,,,", 'row 6, member "I"', "run is blank; must be given for an infill strut"),
    (
        "members.csv",
        "6.0 + 7.2",
        "",
        'row 2, member "C1"',
        "spans is blank; must be given for a column that acts as beams",
    ),
    (
        "members.csv",
        "6.0 + 7.2",
        "6.0 + 7.2 + 5",
        'row 2, member "C1"',
        "3 spans; must be one or two, those of the beams beside the column",
    ),
    ("members.csv", "6.0 + 7.2", "6.0 + x", 'row 2, member "C1"', 'spans "x"; must be a number in m'),
    (
        "members.csv",
        "0.7,,,B600",
        "0.7,,0.4,B600",
        'row 2, member "C1"',
        "shear factor is given; must be blank for a column that acts as beams without shear",
    ),
    (
        "members.csv",
        "W,Roof,wall,W4",
        "W,Roof,wall,Bar",
        'row 4, member "W"',
        'section "Bar" has no second moment major; must have one in sections.csv for this member',
    ),
    (
        "members.csv",
        "W,Roof,wall,W4",
        "W,Roof,wall,Strut",
        'row 4, member "W"',
        'the material of section "Strut" has no shear modulus; must have one, or a Poisson ratio, in materials.csv '
        "for this member",
    ),
    ("members.csv", "C2,all", "c1,all", 'row 3, member "c1"', "named in row 2 too; each needs its own name"),
    (
        "members.csv",
        "stiffness factor",
        "stifness factor",
        'heading "stifness factor"',
        "not known; must be member, storeys, kind, section, direction, count, acts as, axis, height, run, stiffness factor, "
        "shear, shear factor, beam, beam below, spans, beam factor, ground or note",
    ),
    (
        "members.csv",
        "run [m]",
        "run",
        'heading "run"',
        "no unit; must give its unit in square brackets: m, cm, mm, ft or in",
    ),
    ("members.csv", ",count", ",note", "", 'no column "count"; must have one'),
    (
        "sections.csv",
        "Bar,S355",
        "Bar,S235",
        'row 6, section "Bar"',
        'material "S235"; must be in materials.csv: "C30", "S355", "Brick"',
    ),
    ("sections.csv", "500,400", "500,", 'row 2, section "C500"', "width is blank; must be given for shape rectangle"),
    (
        "sections.csv",
        "own,,,,12.5",
        "own,60,,,12.5",
        'row 6, section "Bar"',
        "depth is given; must be blank for shape own",
    ),
    (
        "sections.csv",
        "own,,,,12.5",
        "own,,,,",
        'row 6, section "Bar"',
        "no property; must give area, second moment or both for shape own",
    ),
    (
        "sections.csv",
        "9100,3090",
        "3090,9100",
        'row 5, section "Own"',
        "second moment minor above the major; must be the smaller of the two",
    ),
    (
        "sections.csv",
        "rectangle,500,400,",
        "box,500,400,200",
        'row 2, section "C500"',
        "thickness of half the section or more; must leave a hollow",
    ),
    ("sections.csv", "rectangle,500", "rectangle,-500", 'row 2, section "C500"', "depth -500 mm; must be above 0"),
    (
        "sections.csv",
        "area [cm²]",
        "area [cm]",
        'heading "area [cm]"',
        '"cm" is a unit of length, not of section area; must be m², cm², mm², in² or ft²',
    ),
    ("materials.csv", "33,,0.2", "33,,0.6", 'row 2, material "C30"', "Poisson ratio 0.6; must be from 0 to 0.5"),
    (
        "materials.csv",
        "210,81,",
        "210,81,0.3",
        'row 3, material "S355"',
        "shear modulus and Poisson ratio; must have at most one of them",
    ),
    (
        "materials.csv",
        "concrete",
        "stone",
        'row 2, material "C30"',
        'kind "stone"; must be concrete or masonry or steel or timber or other',
    ),
    ("materials.csv", "33,,0.2", "33,,0.2,x", 'row 2, material "C30"', "6 cells; must be 5, one for each heading"),
)
"""File, what in it is replaced by what, the place of the problem, and the sentence."""


@pytest.mark.parametrize(("file", "old", "new", "place", "said"), WRONG)
def test_what_is_wrong_is_said_by_row(read, file, old, new, place, said):
    takeoff, problems = read(changes=[(file, old, new)])
    assert takeoff is None
    where = f"{file}, {place}" if place else file
    assert [str(error) for error in problems] == [f"{where}: {said}"]


def test_every_row_that_is_wrong_is_named(read):
    _, problems = read(changes=[("members.csv", "C2,all", "C2,9"), ("members.csv", "x,3,,,,5.5", "x,3,,,,")])
    assert [error.where for error in problems] == ['row 3, member "C2"', 'row 6, member "I"']


def test_an_empty_list_is_refused(read):
    _, problems = read(members=MEMBERS.splitlines()[0] + "\n")
    assert [str(error) for error in problems] == ["members.csv: no rows; must have a row for each member"]


CELLS = st.one_of(
    st.sampled_from(
        [
            "",
            "0",
            "-3",
            "1e400",
            "nan",
            "1e200",
            "1e-200",
            "1,250",
            "2 to 3",
            "Roof to",
            "all",
            "beams",
            "wall",
            "brace",
            "pair",
            "box",
            "own",
        ]
    ),
    st.sampled_from(
        ["C500", "Strut", "Bar", "x", "45°", "1e3°", "6 + ", "+", "minor", "yes", '"', "{0}", "steel", "0.5"]
    ),
    st.text(st.characters(blacklist_characters='\r\n,"', blacklist_categories=("Cs",)), max_size=6),
)


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    st.sampled_from(["members.csv", "sections.csv", "materials.csv"]),
    st.lists(st.tuples(st.integers(0, 99), CELLS), max_size=6),
)
def test_whatever_is_typed_is_read_or_refused_by_row(read, file, typed):
    texts = {"members.csv": MEMBERS, "sections.csv": SECTIONS, "materials.csv": MATERIALS}
    rows = [line.split(",") for line in texts[file].splitlines()]
    for place, cell in typed:
        quoted = cell.replace('"', '""')
        rows[1 + place % (len(rows) - 1)][place % len(rows[0])] = f'"{quoted}"'
    texts[file] = "\n".join(",".join(row) for row in rows) + "\n"
    takeoff, problems = read(texts["members.csv"], texts["sections.csv"], texts["materials.csv"])
    assert (takeoff is None) == bool(problems)
    assert all(isinstance(error, InputError) for error in problems)
    if takeoff is not None:
        with suppress(ModelError):  # a storey without members
            assert all((d.storey > 0.0).all() for d in take_off(takeoff).directions)
