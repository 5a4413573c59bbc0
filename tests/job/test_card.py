from __future__ import annotations

import datetime as dt
import json
from typing import get_args

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.core.lateral import KINDS
from calcsheet.job.card import Card, card_of, parse_card, parse_toml
from calcsheet.job.cardtables import ModelChoice
from calcsheet.job.errors import InputError
from calcsheet.job.wording import dotted
from calcsheet.steps.serial import fingerprint, from_json, to_json

MATRIX = ('"storey chain"', '"stiffness matrix"\nx = "kx.csv"\ny = "ky.csv"')


def refusal(card, *changes: tuple[str, str]) -> str:
    with pytest.raises(InputError) as caught:
        card(*changes)
    return str(caught.value)


def test_the_card_is_read(card):
    got = card()
    assert got.job.project == "Larch Yard"
    assert got.job.date == dt.date(2026, 1, 31)
    assert got.people.prepared.initials == "AW"
    assert got.people.approved.name == ""
    assert got.levels.base_elevation == 0.0
    assert got.directions.analysed == ("x", "y")
    assert [basis.factor_of("x") for basis in got.stiffness.values()] == [1.0, 0.5]
    assert got.assumptions[0].confirm_by == ""
    assert got.origins["storeys.csv"].date == dt.date(2026, 1, 2)
    assert got.model.files == {}


def test_a_card_of_matrices_and_factors_by_direction(card):
    got = card(MATRIX, ("factor = 0.5", "factor_x = 0.5\nfactor_y = 0.7"))
    assert got.model.files == {"x": "kx.csv", "y": "ky.csv"}
    assert got.stiffness["cracked"].factor_of("y") == 0.7


def test_one_direction_alone(card):
    got = card(('y = "y runs along grid A"\n', ""), ("factor = 0.5", "factor_x = 0.5"))
    assert got.directions.analysed == ("x",)


def test_a_card_does_not_change(card):
    with pytest.raises(ValueError, match="frozen"):
        card().job.title = "other"


REVISION = "must be a text of letters, digits, points, hyphens, underscores, spaces: it names a folder"
DATE = "must be a date without quotation marks, such as 2026-01-31"
BASIS = "must have one of: factor, factor_x and factor_y, own = true"
FILE = 'must be the name of a file in the job folder, such as "stiffness_x.csv"'


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('"SI"', '"metric"', 'units.system: got "metric"; must be "SI" or "US"'),
        ('system = "SI"', "", 'units.system: missing; must be "SI" or "US"'),
        ('[units]\nsystem = "SI"\n', "", "units: missing; must be a table [units]"),
        ("[job]", "[[job]]", "job: got a list; must be a table [job]"),
        ("format = 1", "format = 2", "format: got 2; must be 1, the format that this version reads"),
        ("format = 1", "format = true", "format: got true; must be 1, the format that this version reads"),
        ("title =", "titel =", "job.title: missing; must be a text that is not blank"),
        (
            "reason =",
            "raeson =",
            "job.raeson: unknown key; must be one of project, title, number, revision, date, reason, purpose",
        ),
        ("2026-01-31", '"2026-01-31"', f'job.date: got "2026-01-31"; {DATE}'),
        ("2026-01-31", "2026-01-31T10:00:00", f"job.date: got 2026-01-31 10:00:00; {DATE}"),
        ('revision = "1"', "revision = 1", f"job.revision: got 1; {REVISION}"),
        ('revision = "1"', 'revision = "a/b"', f'job.revision: got "a/b"; {REVISION}'),
        ('revision = "1"', 'revision = ".."', f'job.revision: got ".."; {REVISION}'),
        ('"A. Writer"', '" "', 'people.prepared.name: got " "; must be a text that is not blank'),
        (
            'name = ""',
            'name = "a. writer"',
            'people.checked.name: got "a. writer", who prepared it; must be another person, or '
            "people.same_person_may_check = true",
        ),
        (
            "base_elevation = 0",
            "base_elevation = inf",
            "levels.base_elevation: got inf; must be a number, in m (SI) or ft (US)",
        ),
        (
            "base_elevation = 0",
            'base_elevation = "0"',
            'levels.base_elevation: got "0"; must be a number, in m (SI) or ft (US)',
        ),
        (
            'x = "x runs along grid 1"\ny = "y runs along grid A"',
            "",
            "directions: neither x nor y; must have a sentence for x, y or both",
        ),
        (
            '"x runs along grid 1"',
            '""',
            'directions.x: got ""; must be a sentence that ties this direction to the drawings\' grid',
        ),
        (
            '"storey chain"',
            '"stick"',
            'model.kind: got "stick"; must be "storey chain", "cantilever stick", "stiffness matrix", "flexibility matrix" or '
            '"rigid floors"',
        ),
        (
            '"storey chain"',
            '"storey chain"\nx = "k.csv"',
            'model.x: got "k.csv"; must be left out with kind "storey chain"',
        ),
        ('"storey chain"', '"stiffness matrix"', f"model.x: missing; {FILE}"),
        ('"storey chain"', '"stiffness matrix"\nx = "../k.csv"', f'model.x: got "../k.csv"; {FILE}'),
        ("factor = 0.5", "factor = -1", "stiffness.cracked.factor: got -1; must be a number above 0"),
        ("factor = 0.5", "factor = nan", "stiffness.cracked.factor: got nan; must be a number above 0"),
        ("factor = 0.5", "", f"stiffness.cracked: has no factor; {BASIS}"),
        ("factor = 0.5", "factor = 1\nown = true", f"stiffness.cracked: has factor and own; {BASIS}"),
        ("factor = 0.5", "factor_x = 0.5", "stiffness.cracked.factor_y: missing; must be a number above 0"),
        (
            "factor = 0.5",
            "fcator = 0.5",
            "stiffness.cracked.fcator: unknown key; must be one of ground, factor, factor_x, factor_y, own",
        ),
        (
            "[stiffness.cracked]",
            '[stiffness."x [m]"]',
            'stiffness."x [m]": got the name "x [m]"; must be a name without square brackets',
        ),
        (
            'drifts = "cracked"',
            'drifts = "c"',
            'serves.drifts: got "c"; must name a set under [stiffness]: "uncracked" or "cracked"',
        ),
        (
            'text = "Fixed at the raft"',
            "text = 3",
            "assumptions.0.text: got 3; must be a text that is not blank",
        ),
        ("[[assumptions]]", "[assumptions]", "assumptions: got a table; must be tables [[assumptions]]"),
        ('source = "mass take-off"', "source = 3", 'origins."storeys.csv".source: got 3; must be a text'),
        (
            "[answers]",
            '[answers]\n"light roof" = "kept"',
            'answers."light roof": got "kept"; must be a table with text, by, date and finding, such as { text = "…", by = "…", '
            'date = 2026-01-31, finding = "0a1b2c3d" }; `calcsheet answer` writes it',
        ),
        (
            "[answers]",
            '[answers."light roof"]\nfinding = "0A1B"',
            'answers."light roof".finding: got "0A1B"; must be the 8 characters that stand beside the finding in the record',
        ),
        (
            "[answers]",
            '[answers."light roof"]\ndate = "2026-01-31"',
            'answers."light roof".date: got "2026-01-31"; must be a date without quotation marks, such as 2026-01-31',
        ),
        ("[answers]", "[answers", "line 52: expected ']' at the end of a table declaration; must be TOML"),
        ("[serves]", "[serves", "line 41: expected ']' at the end of a table declaration; must be TOML"),
        ("2026-01-31", "2026-02-30", "line 9: invalid date or datetime; must be TOML"),
    ],
)
def test_refusals(card, old, new, message):
    assert refusal(card, (old, new)) == f"job.toml, {message}"


SHARE = '[[mass_basis]]\nload = "snow"\nshare = 0.2\n'
OTHER = '[[second_model]]\nquantity = "period"\ndirection = "x"\nvalue = 1.2\norigin = "sheet 4"\n'


@pytest.mark.parametrize(
    ("text", "old", "new", "message"),
    [
        ("[[basis]]\nedition = 1\n", "", "", "basis: got a list; must be a table [basis]"),
        (SHARE, "[[mass_basis]]", "[mass_basis]", "mass_basis: got a table; must be tables [[mass_basis]]"),
        (SHARE, '"snow"', '" "', 'mass_basis.0.load: got " "; must be a text that is not blank'),
        (SHARE, "share = 0.2", "", "mass_basis.0.share: missing; must be a number from 0 to 1"),
        (SHARE, "share = 0.2", "share = 20", "mass_basis.0.share: got 20; must be a number from 0 to 1"),
        (SHARE, "share", "clause = 4\nshare", "mass_basis.0.clause: got 4; must be a text"),
        (
            OTHER,
            '"period"',
            '"mass"',
            'second_model.0.quantity: got "mass"; must be "period", "weight" or "base shear"',
        ),
        (
            OTHER,
            "value = 1.2",
            "value = 0",
            "second_model.0.value: got 0; must be a number above 0, in s, or in kN (SI) or kip (US)",
        ),
        (OTHER, 'origin = "sheet 4"', "", "second_model.0.origin: missing; must be a text that is not blank"),
        (OTHER, '"x"', '"z"', 'second_model.0.direction: got "z"; must be "x", "y" or ""'),
        (OTHER, 'direction = "x"', "", 'second_model.0.direction: got ""; must be "x" or "y" for a period'),
        (OTHER, '"period"', '"weight"', 'second_model.0.direction: got "x"; must be "" for a weight'),
    ],
)
def test_refusals_beside_the_basis(card, text, old, new, message):
    assert old in text
    assert refusal(card, ("[answers]", text.replace(old, new, 1) + "[answers]")) == f"job.toml, {message}"


def test_another_model_has_the_directions_that_are_analysed(card):
    message = refusal(
        card, ('y = "y runs along grid A"\n', ""), ("[answers]", OTHER.replace('"x"', '"y"') + "[answers]")
    )
    assert message == 'job.toml, second_model.0.direction: got "y"; must be "x" for a period'


def test_a_basis_is_kept_as_given_and_survives_json(card):
    given = "[basis]\nq_x = 3\nq_y = nan\nbig = 99999999999999999999\nday = 2026-01-31\nlist = [1, [2], inf]\nt.a = 1\n"
    got = card(("[answers]", given + SHARE + OTHER + "[answers]"))
    assert got.basis == {
        "q_x": 3,
        "q_y": "nan",
        "big": "1e+20",
        "day": "2026-01-31",
        "list": [1, [], "inf"],
        "t": {},
    }
    stored = to_json(got)
    assert fingerprint(stored)
    assert from_json(Card, json.loads(json.dumps(stored))) == got


def test_a_card_without_a_basis(card):
    got = card()
    assert (got.basis, got.mass_basis, got.second_model) == (None, (), ())


def test_matrices_have_no_sets_of_own_values(card):
    message = refusal(card, MATRIX, ("factor = 0.5", "own = true"))
    assert message == (
        "job.toml, stiffness.cracked.own: got true; must be left out unless model.kind is "
        '"storey chain" or "cantilever stick"'
    )


def test_the_kinds_of_the_card_are_those_of_the_core():
    kinds = {*get_args(ModelChoice.model_fields["kind"].annotation)}
    assert {kind for kind in kinds if ModelChoice(kind=kind).lateral} == set(KINDS)
    assert kinds - {*KINDS} == {"rigid floors"}


def test_springs_at_the_base(card):
    got = card(("[model]", "[base]\ntranslation_x = 4.5e5\nrocking_x = 6e7\ndamping_x = 0.04\n[model]"))
    assert got.base.of("x") == (4.5e5, 6e7, 0.04)
    assert got.base.of("y") == (None, None, None)
    assert card().base.of("x") == (None, None, None)


@pytest.mark.parametrize(
    ("given", "message"),
    [
        ("rocking_x = 0", "base.rocking_x: got 0; must be a number above 0"),
        ("damping_y = 1.5\nrocking_y = 1", "base.damping_y: got 1.5; must be a number above 0 and below 1"),
        ("damping_y = 0.1", "base.damping_y: got 0.1; must go with base.translation_y or base.rocking_y"),
        (
            "spring = 1",
            "base.spring: unknown key; must be one of translation_x, translation_y, rocking_x, rocking_y, damping_x, "
            "damping_y",
        ),
    ],
)
def test_springs_that_cannot_be(card, given, message):
    assert refusal(card, ("[model]", f"[base]\n{given}\n[model]")) == f"job.toml, {message}"


def test_springs_of_a_direction_that_is_not_analysed(card):
    message = refusal(card, ('y = "y runs along grid A"\n', ""), ("[model]", "[base]\nrocking_y = 2.0\n[model]"))
    assert message == "job.toml, base.rocking_y: got 2.0; must be left out: y is not analysed"


def test_long_values_are_cut_in_messages(card):
    assert refusal(card, ('"SI"', f'"{"S" * 500}"')) == (
        f'job.toml, units.system: got "{"S" * 59}…"; must be "SI" or "US"'
    )


@pytest.mark.parametrize("text", ["a = " + "[" * 5000, "a = " + "1" * 5000])
def test_hostile_text_is_refused(text):
    with pytest.raises(InputError, match=r"^job\.toml: .*; must be TOML$"):
        parse_toml(text)


def test_dotted_keys_are_quoted_where_needed():
    assert dotted(["origins", "storeys.csv", 0, "a-b_c"]) == 'origins."storeys.csv".0.a-b_c'


@given(st.text(max_size=80))
def test_any_text_is_refused_in_one_sentence(text):
    with pytest.raises(InputError, match=r"^job\.toml"):
        parse_card(text)


values = st.recursive(
    st.booleans() | st.integers() | st.floats() | st.text() | st.dates() | st.datetimes() | st.times(),
    lambda inner: st.lists(inner, max_size=2) | st.dictionaries(st.text(), inner, max_size=2),
    max_leaves=4,
)


@given(st.data(), values)
def test_a_key_of_any_type_is_read_or_refused(card_text, data, value):
    table = card = parse_toml(card_text)
    key = data.draw(st.sampled_from(sorted(table)))
    while isinstance(table[key], dict) and table[key] and data.draw(st.booleans()):
        table = table[key]
        key = data.draw(st.sampled_from(sorted(table)))
    table[data.draw(st.sampled_from([key, "other"]))] = value
    refused = ""
    try:
        card_of(card)
    except InputError as error:
        refused = str(error)
    assert not refused or refused.startswith("job.toml, ")
