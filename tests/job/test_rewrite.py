from __future__ import annotations

import datetime as dt
import difflib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.job.card import parse_card, parse_toml
from calcsheet.job.errors import InputError
from calcsheet.job.rewrite import with_value


def changes(before: str, after: str) -> list[str]:
    lines = difflib.unified_diff(before.splitlines(keepends=True), after.splitlines(keepends=True), n=0)
    return [line for line in lines if line[0] in "+-" and line[:3] not in ("+++", "---")]


@pytest.mark.parametrize(
    ("key", "value", "expected"),
    [
        (
            "job.project",
            'Larch "Yard" II',
            [
                '-project = "Larch Yard"   # as on the drawings\n',
                '+project = "Larch \\"Yard\\" II"   # as on the drawings\n',
            ],
        ),
        ("job.date", dt.date(2026, 3, 1), ["-date = 2026-01-31\n", "+date = 2026-03-01\n"]),
        (
            "levels.base_elevation",
            1.5,
            ["-base_elevation = 0   # top of raft\n", "+base_elevation = 1.5   # top of raft\n"],
        ),
        ("job.purpose", "tender", ['+purpose = "tender"\n']),
        ("job.reason", None, ['-reason = "first issue"\n']),
        ("job.purpose", None, []),
        ('stiffness."half cracked".factor', 0.7, ['+[stiffness."half cracked"]\n', "+factor = 0.7\n"]),
        (("stiffness", "half cracked", "factor"), 0.7, ['+[stiffness."half cracked"]\n', "+factor = 0.7\n"]),
        (
            ("answers", "light roof"),
            {"text": "kept", "date": dt.date(2026, 3, 1)},
            ['+[answers."light roof"]\n', '+text = "kept"\n', "+date = 2026-03-01\n"],
        ),
        ("assumptions.0.ground", "test pits", ['-ground = "ground report"\n', '+ground = "test pits"\n']),
        ("people.approved.name", "B. Signer", ["+[people.approved]\n", '+name = "B. Signer"\n']),
    ],
)
def test_only_the_changed_line_differs(card_text, key, value, expected):
    after = with_value(card_text, key, value)
    assert changes(card_text, after) == expected
    parse_card(after)


def test_a_value_in_an_inline_table(card_text):
    after = with_value(card_text, 'origins."storeys.csv".source', "sheet 4")
    assert parse_card(after).origins["storeys.csv"].source == "sheet 4"
    removed, added = changes(card_text, after)
    assert removed.startswith('-"storeys.csv"')
    assert added.startswith('+"storeys.csv"')
    assert added.endswith("# by hand\n")


def test_line_endings_are_kept(card_text):
    text = card_text.replace("\n", "\r\n")
    after = with_value(with_value(text, "job.purpose", "tender"), "people.approved.name", "B. Signer")
    assert after.count("\n") == after.count("\r\n") == text.count("\n") + 3


@pytest.mark.parametrize(
    ("text", "key", "message"),
    [
        ("a = ", "a", "job.toml, line 1: invalid value; must be TOML"),
        ("a = 1", "a.b", "job.toml, a: is no table; must be a table to hold a value"),
        ("a = 1", "a.b.c", "job.toml, a: is no table; must be a table to hold a value"),
        ("[[a]]\nb = 1", "a.1.b", "job.toml, a.1: is not in the list; must be a number from 0 to 0"),
        ("[[a]]\nb = 1", "a.c.b", "job.toml, a.c: is not in the list; must be a number from 0 to 0"),
        ("a = 1", "a b", "job.toml, a b: is no dotted key; must be written as in TOML, such as job.revision"),
    ],
)
def test_refusals(text, key, message):
    with pytest.raises(InputError) as caught:
        with_value(text, key, "x")
    assert str(caught.value) == message


@given(st.text(st.characters(exclude_categories=["Cs"])), st.text(st.characters(exclude_categories=["Cs"])))
def test_any_text_is_read_back(card_text, key, value):
    after = with_value(card_text, ("answers", key), {"text": value})
    assert parse_toml(after) == parse_toml(card_text) | {"answers": {key: {"text": value}}}
