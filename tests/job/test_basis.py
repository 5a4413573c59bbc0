from __future__ import annotations

import json
from dataclasses import fields

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.core.basis import Basis, MassShare, SecondModel
from calcsheet.core.codes.registry import EDITIONS
from calcsheet.job.basis import SETTINGS, read_basis, spectrum_files
from calcsheet.job.card import card_of, parse_toml
from calcsheet.job.errors import InputError
from calcsheet.resources import folder
from calcsheet.steps.serial import from_json, to_json

EN = """\
edition = "EN 1998-1:2004"
ground_acceleration = 0.21
spectrum = 1
ground = "B"
importance_class = "II"
q_x = 3
q_y = 2.5
system_x = "concrete moment frame"
system_y = "other"
elements = "brittle"
"""
ASCE = """\
edition = "ASCE/SEI 7-16"
s_ds = 1.1
s_d1 = 0.55
s_1 = 0.4
t_l = 8
site_class = "C"
risk_category = "II"
r_x = 8
r_y = 5
c_d_x = 5.5
c_d_y = 5
system_x = "steel moment frame"
system_y = "other"
"""
ASCE_22 = ASCE.replace("7-16", "7-22") + 'points = "sa.csv"\n'
IS = """\
edition = "IS 1893 (Part 1):2016"
zone = "IV"
soil = "medium"
importance_value = 1.2
r_x = 5
r_y = 4
system_x = "concrete moment frame"
system_y = "other"
base_y = 18
"""
POINTS = 'edition = "given points"\npoints = "sa.csv"\n'
GIVEN = {"EN": EN, "7-16": ASCE, "7-22": ASCE_22, "IS": IS, "points": POINTS}

SPECTRUM = "period [s],ordinate [g]\n0,0.3\n0.1,0.75\n0.6,0.75\n4,0.1\n"


@pytest.fixture
def basis(card, table):
    """The basis that lines of a table [basis] give, under a card with pieces of its text replaced."""

    def build(lines: str, *on: tuple[str, str], more: str = "", spectrum: str = SPECTRUM) -> Basis:
        chosen = card(*on, ("[answers]", f"[basis]\n{lines}\n{more}\n[answers]"))
        tables = {key: table(spectrum, name) for key, name in spectrum_files(chosen).items()}
        return read_basis(chosen, tables)

    return build


US = ('"SI"', '"US"')


def changed(lines: str, old: str, new: str) -> str:
    assert old in lines
    return lines.replace(old, new, 1)


def refusal(build, *args, **kwargs) -> str:
    with pytest.raises(InputError) as caught:
        build(*args, **kwargs)
    return str(caught.value)


def test_every_edition_is_tried_here():
    assert {lines.split('"')[1] for lines in GIVEN.values()} == set(EDITIONS)


def test_a_basis_is_read(basis):
    got = basis(EN)
    assert (got.combination, got.residual, got.mass_basis, got.second_model) == ("CQC", "last ordinate", (), ())
    edition = got.edition
    assert type(edition) is EDITIONS["EN 1998-1:2004"]
    assert (edition.q_x, edition.q_y, edition.spectrum, edition.ground, edition.beta) == (3.0, 2.5, 1, "B", 0.2)
    assert type(edition.q_x) is float
    assert edition.corners == ()
    assert edition.importance_factor is None


def test_what_may_be_left_out_is_read_where_given(basis):
    lines = changed(EN, 'ground = "B"', 'ground = "own"\ncorners = [1, 0.1, 0.45, 2]')
    lines += 'importance_factor = 1.1\ncombination = "SRSS"\nresidual = "none"\nsecond_order_in_stiffness = false\n'
    got = basis(lines)
    assert got.edition.corners == (1.0, 0.1, 0.45, 2.0)
    assert got.edition.importance_factor == 1.1
    assert (got.combination, got.residual) == ("SRSS", "none")


def test_a_whole_number_may_be_written_with_decimals(basis):
    spectrum = basis(changed(EN, "spectrum = 1", "spectrum = 2.0")).edition.spectrum
    assert (spectrum, type(spectrum)) == (2, int)


@pytest.mark.parametrize(("on", "unit"), [((), "m"), ((US,), "ft")])
def test_the_height_of_a_formula_follows_the_jobs_units(basis, on, unit):
    assert basis(ASCE, *on).edition.height_unit == unit
    assert basis(ASCE + 'height_unit = "m"\n', *on).edition.height_unit == "m"


def test_lengths_are_in_the_jobs_units(basis):
    assert basis(IS).edition.base_y == 18.0
    assert basis(IS, US).edition.base_y == pytest.approx(18.0 * 0.3048, rel=1e-15)
    assert basis(IS).edition.base_x is None


@pytest.mark.parametrize("lines", [POINTS, ASCE_22], ids=["points", "7-22"])
def test_points_are_read_from_their_file(basis, lines):
    assert basis(lines).edition.points == ((0.0, 0.3), (0.1, 0.75), (0.6, 0.75), (4.0, 0.1))


def test_points_have_settings_of_their_own(basis):
    lines = POINTS + 'between = "log-log"\nhold_below = true\ndamping_ratio = 0.03\ncombination = "absolute"\n'
    got = basis(lines, spectrum=SPECTRUM.replace("0,0.3", "0.02,0.3"))
    assert (got.edition.between, got.edition.hold_below, got.edition.damping_ratio) == ("log-log", True, 0.03)
    assert got.combination == "absolute"


MORE = """\
[[mass_basis]]
load = "imposed load on floors"
share = 0.3
clause = "EN 1998-1:2004, 4.2.4"

[[mass_basis]]
load = "snow"
share = 0

[[second_model]]
quantity = "period"
direction = "x"
value = 1.12
origin = "hand calculation, sheet 4"

[[second_model]]
quantity = "weight"
value = 2500
origin = "another office's model"

[[second_model]]
quantity = "base shear"
direction = "y"
value = 300
origin = "another office's model"
"""


@pytest.mark.parametrize(("on", "kip"), [((), 1.0), ((US,), 4.4482216152605)])
def test_masses_declared_and_another_model(basis, on, kip):
    got = basis(EN, *on, more=MORE)
    assert got.mass_basis == (
        MassShare("imposed load on floors", 0.3, "EN 1998-1:2004, 4.2.4"),
        MassShare("snow", 0.0, ""),
    )
    first, second, third = got.second_model
    assert first == SecondModel("period", "x", 1.12, "hand calculation, sheet 4")
    assert second == SecondModel("weight", "", pytest.approx(2500 * kip), "another office's model")
    assert third == SecondModel("base shear", "y", pytest.approx(300 * kip), "another office's model")


OWN = EN.replace('ground = "B"', 'ground = "own"\ncorners = [1.2, 0.15, 0.5, 2]')


@pytest.mark.parametrize("lines", [*GIVEN.values(), OWN], ids=[*GIVEN, "own corners"])
def test_a_basis_survives_json(basis, lines):
    got = basis(lines, more=MORE)
    stored = json.loads(json.dumps(to_json(got)))
    assert stored["edition"]["kind"] == got.edition.name
    assert from_json(Basis, stored) == got


def test_no_basis(card):
    with pytest.raises(InputError) as caught:
        read_basis(card(), {})
    assert str(caught.value) == ("job.toml, basis: missing; must be a table [basis] where a design demand is asked for")
    assert spectrum_files(card()) == {}


NAMES = '"EN 1998-1:2004", "ASCE/SEI 7-16", "ASCE/SEI 7-22", "IS 1893 (Part 1):2016" or "given points"'
DAMPING = "stands for its own damping and takes no other"
CORNERS = "must be a list of 4 numbers above 0 (own S, T_B, T_C, T_D)"


@pytest.mark.parametrize(
    ("edition", "old", "new", "message"),
    [
        ("EN", 'edition = "EN 1998-1:2004"', "", f"edition: missing; must be {NAMES}"),
        ("EN", "EN 1998-1:2004", "EN 1998", f'edition: got "EN 1998"; must be {NAMES}'),
        ("EN", '"EN 1998-1:2004"', "[1]", f"edition: got a list; must be {NAMES}"),
        ("EN", '"B"', '"F"', 'ground: got "F"; must be "A", "B", "C", "D", "E" or "own"'),
        ("EN", 'ground = "B"', "", 'ground: missing; must be "A", "B", "C", "D", "E" or "own"'),
        ("EN", "spectrum = 1", "spectrum = 3", "spectrum: got 3; must be 1 or 2"),
        ("EN", "spectrum = 1", "spectrum = true", "spectrum: got true; must be 1 or 2"),
        ("EN", "q_x = 3", "q_x = 0.9", "q_x: got 0.9; must be a number 1 or above (behaviour factor in x)"),
        ("EN", "q_x = 3", "q_x = true", "q_x: got true; must be a number 1 or above (behaviour factor in x)"),
        ("EN", "q_x = 3", "q_x = inf", 'q_x: got "inf"; must be a number 1 or above (behaviour factor in x)'),
        ("EN", "q_y = 2.5", "", "q_y: missing; must be a number 1 or above (behaviour factor in y)"),
        (
            "EN",
            "= 0.21",
            '= "0.21"',
            'ground_acceleration: got "0.21"; must be a number above 0 and up to 2 (a_gR over g)',
        ),
        (
            "EN",
            "= 0.21",
            "= 1970-01-01",
            'ground_acceleration: got "1970-01-01"; must be a number above 0 and up to 2 (a_gR over g)',
        ),
        (
            "EN",
            "q_x = 3",
            "q_x = 3\nbeta = 0",
            "beta: got 0; must be a number above 0 and up to 1 (lower bound factor)",
        ),
        ("EN", "q_x = 3", "q_x = 3\ncorners = 4", f"corners: got 4; {CORNERS}"),
        ("EN", "q_x = 3", 'q_x = 3\ncorners = "abcd"', f'corners: got "abcd"; {CORNERS}'),
        ("EN", "q_x = 3", "q_x = 3\ncorners = [1, 2]", f"corners: got a list of 2; {CORNERS}"),
        ("EN", "q_x = 3", "q_x = 3\ncorners = [1, -2, 3, 4]", "corners.1: got -2; must be a number above 0"),
        (
            "EN",
            '"B"',
            '"own"\ncorners = [1, 0.6, 0.5, 2]',
            "corners: got (1.0, 0.6, 0.5, 2.0); must rise from T_B to T_C to T_D",
        ),
        ("EN", '"B"', '"own"', 'corners: 0 values with ground "own"; go with ground "own"'),
        (
            "EN",
            "q_x = 3",
            "q_x = 3\ns_ds = 1",
            's_ds: a parameter of ASCE/SEI 7-16 and ASCE/SEI 7-22; must be left out with edition "EN 1998-1:2004"',
        ),
        (
            "EN",
            "q_x = 3",
            "q_x = 3\ndamping = 0.05",
            f"damping: got 0.05; must be left out: the design spectrum of EN 1998-1:2004 {DAMPING}",
        ),
        (
            "EN",
            "q_x = 3",
            'q_x = 3\ncombination = "absolute"',
            'combination: got "absolute"; must be "CQC" or "SRSS" with edition "EN 1998-1:2004"',
        ),
        (
            "EN",
            "q_x = 3",
            'q_x = 3\nresidual = "all"',
            'residual: got "all"; must be "last ordinate", "zero period" or "none"',
        ),
        (
            "EN",
            "q_x = 3",
            'q_x = 3\nsecond_order_in_stiffness = "yes"',
            'second_order_in_stiffness: got "yes"; must be true or false',
        ),
        ("7-16", "s_ds = 1.1", "s_ds = 0", "s_ds: got 0; must be a number above 0 and up to 5 (S_DS over g)"),
        ("7-16", "s_1 = 0.4", "s_1 = -0.1", "s_1: got -0.1; must be a number from 0 to 5 (S_1 over g)"),
        ("7-16", "t_l = 8", "", "t_l: missing; must be a number above 0 and up to 20 (T_L in s)"),
        ("7-16", "r_y = 5", "r_y = 5\nrho = 1.2", "rho: got 1.2; must be 1.0 or 1.3"),
        ("7-16", "r_y = 5", 'r_y = 5\nheight_unit = "cm"', 'height_unit: got "cm"; must be "ft" or "m"'),
        (
            "7-16",
            "r_y = 5",
            'r_y = 5\npoints = "sa.csv"',
            'points: a parameter of ASCE/SEI 7-22 and given points; must be left out with edition "ASCE/SEI 7-16"',
        ),
        (
            "7-22",
            "r_y = 5",
            "r_y = 5\ndamping = 0.02",
            f"damping: got 0.02; must be left out: the design spectrum of ASCE/SEI 7-22 {DAMPING}",
        ),
        (
            "7-22",
            '"sa.csv"',
            "0.4",
            'points: got 0.4; must be the name of a file in the job folder, such as "spectrum.csv" (multi-period points)',
        ),
        ("7-16", "t_l = 8", "t_l = 0.4", "t_l: got 0.4 s with T_S = 0.5 s; must be above T_S = S_D1/S_DS"),
        ("IS", "base_y = 18", "", 'base_y: missing; must be given with system_y "other"'),
        ("IS", '"IV"', '"VI"', 'zone: got "VI"; must be "II", "III", "IV" or "V"'),
        ("IS", "= 1.2", "= 1.1", "importance_value: got 1.1; must be 1.0, 1.2 or 1.5"),
        (
            "IS",
            "base_y = 18",
            "base_y = 0",
            "base_y: got 0; must be a number above 0, in m (base dimension along y)",
        ),
        (
            "IS",
            "r_x = 5",
            "r_x = 5\nq_x = 3",
            'q_x: a parameter of EN 1998-1:2004; must be left out with edition "IS 1893 (Part 1):2016"',
        ),
        (
            "IS",
            "r_x = 5",
            "r_x = 5\ndamping = 0.02",
            f"damping: got 0.02; must be left out: the design spectrum of IS 1893 (Part 1):2016 {DAMPING}",
        ),
        (
            "points",
            'points = "sa.csv"',
            "",
            'points: missing; must be the name of a file in the job folder, such as "spectrum.csv" '
            "(period in s, ordinate over g)",
        ),
        (
            "points",
            '"sa.csv"',
            '"../sa.csv"',
            'points: got "../sa.csv"; must be the name of a file in the job folder, such as "spectrum.csv" '
            "(period in s, ordinate over g)",
        ),
        (
            "points",
            "points =",
            "damping = 0.05\npoints =",
            'damping: got 0.05; must be left out: with edition "given points" its name is damping_ratio',
        ),
        (
            "points",
            "points =",
            "damping_ratio = 1\npoints =",
            "damping_ratio: got 1; must be a number above 0 and below 1 (damping ratio)",
        ),
        (
            "points",
            "points =",
            "damping_ratio = 0\npoints =",
            "damping_ratio: got 0; must be a number above 0 and below 1 (damping ratio)",
        ),
        (
            "points",
            "points =",
            'hold_below = "no"\npoints =',
            'hold_below: got "no"; must be true or false (hold the first ordinate below the first period)',
        ),
    ],
)
def test_refusals(basis, edition, old, new, message):
    assert refusal(basis, changed(GIVEN[edition], old, new)) == f"job.toml, basis.{message}"


def test_an_unknown_key_is_told_which_there_are(basis):
    keys = ", ".join(f.name for f in fields(EDITIONS["EN 1998-1:2004"]))
    assert refusal(basis, changed(EN, "q_x =", "q =")) == (
        "job.toml, basis.q: unknown key; must be one of edition, combination, residual, second_order_in_stiffness, "
        f"{keys}"
    )


def test_lengths_are_asked_for_in_the_jobs_units(basis):
    assert refusal(basis, changed(IS, "base_y = 18", 'base_y = "18"'), US) == (
        'job.toml, basis.base_y: got "18"; must be a number above 0, in ft (base dimension along y)'
    )


@pytest.mark.parametrize("number", ["9" * 400, "0x" + "f" * 5000], ids=["decimal", "hexadecimal"])
def test_whole_numbers_beyond_all_bounds(basis, number):
    message = 'job.toml, basis.q_x: got "inf"; must be a number 1 or above (behaviour factor in x)'
    assert refusal(basis, changed(EN, "q_x = 3", f"q_x = {number}")) == message


VALUES = st.recursive(
    st.booleans() | st.integers() | st.floats() | st.text() | st.dates(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=2),
    max_leaves=4,
)


@given(st.sampled_from(list(GIVEN)), st.data(), VALUES)
def test_a_key_of_any_value_is_read_or_refused(card_text, table, edition, data, value):
    toml = parse_toml(card_text)
    toml["basis"] = parse_toml(GIVEN[edition])
    known = [f.name for f in fields(EDITIONS[toml["basis"]["edition"]])]
    toml["basis"][data.draw(st.sampled_from([*SETTINGS, *known]) | st.text())] = value
    chosen = card_of(toml)
    tables = {key: table(SPECTRUM, "sa.csv") for key in spectrum_files(chosen)}
    refused = ""
    try:
        got = read_basis(chosen, tables)
        assert from_json(Basis, to_json(got)) == got
    except InputError as error:
        refused = str(error)
    assert not refused or refused.startswith(("job.toml, basis.", "sa.csv: "))


def test_what_is_wrong_in_the_spectrums_file_names_it(basis):
    assert refusal(basis, POINTS, spectrum=SPECTRUM.replace("0.6,", "0.05,")) == (
        "sa.csv, row 4: period 0.05 s; must be above 0.1 s, that of row 3"
    )
    assert refusal(basis, POINTS + 'between = "log-log"\n') == (
        "sa.csv: a period or an ordinate of 0; must be above 0 for log-log interpolation"
    )


def test_a_change_of_edition_is_told_all_its_keys_at_once(basis):
    assert refusal(basis, changed(EN, "EN 1998-1:2004", "ASCE/SEI 7-16")) == (
        'job.toml, basis: with edition "ASCE/SEI 7-16", 7 keys belong to other editions (ground_acceleration, spectrum, '
        "ground, importance_class, q_x, q_y, elements): take them out; missing: s_ds (S_DS over g), s_d1 (S_D1 over g), "
        "s_1 (S_1 over g), t_l (T_L in s), site_class (site class), risk_category (risk category), r_x (R in x), "
        "r_y (R in y), c_d_x (C_d in x), c_d_y (C_d in y)"
    )


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("q_x = 3", "q_x = 3\nr_x = 8\nzone = 4", ", 2 keys belong to other editions (r_x, zone); take them out"),
        ("q_x = 3\nq_y = 2.5\n", "", "; missing: q_x (behaviour factor in x), q_y (behaviour factor in y)"),
        (
            "q_x = 3",
            "r_x = 3",
            ", 1 key belongs to other editions (r_x): take it out; missing: q_x (behaviour factor in x)",
        ),
    ],
)
def test_several_keys_are_reported_together(basis, old, new, message):
    assert refusal(basis, changed(EN, old, new)) == f'job.toml, basis: with edition "EN 1998-1:2004"{message}'


TEMPLATE = (folder("templates/seismic") / "job.toml").read_text(encoding="utf-8")
COMMENTED = [
    "\n".join(line.removeprefix("# ") for line in block.splitlines())
    for block in TEMPLATE.split("\n\n")
    if block.startswith("# edition = ")
]


def test_the_template_holds_a_block_for_every_edition():
    live = [parse_toml(TEMPLATE)["basis"]["edition"]]
    assert sorted(live + [parse_toml(block)["edition"] for block in COMMENTED]) == sorted(EDITIONS)


@pytest.mark.parametrize("block", COMMENTED, ids=lambda block: block.split('"')[1])
def test_a_block_of_the_template_is_valid_when_uncommented(basis, block):
    got = basis(block)
    assert type(got.edition) is EDITIONS[parse_toml(block)["edition"]]
