"""JSON of unknown origin."""

from __future__ import annotations

import json

import pytest
import rfc8785
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.record import strictjson
from calcsheet.record.errors import RecordError
from calcsheet.record.strictjson import DEEPEST, parsed

PLAIN = st.recursive(
    st.none()
    | st.booleans()
    | st.integers(-(2**53) + 1, 2**53 - 1)
    | st.floats(allow_nan=False, allow_infinity=False)
    | st.text(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=4),
    max_leaves=20,
)


@given(PLAIN)
@settings(max_examples=150, deadline=None)
def test_what_json_can_hold_comes_back_and_can_be_fingerprinted(value):
    text = json.dumps(value)
    assert parsed(text.encode(), "a.json") == value
    rfc8785.dumps(parsed(text.encode(), "a.json"))


@given(st.binary(max_size=200))
@settings(max_examples=300, deadline=None)
def test_any_bytes_are_read_or_refused_in_one_sentence(data):
    said = "a.json: "
    try:
        rfc8785.dumps(parsed(data, "a.json"))
    except RecordError as error:
        said = str(error)
    assert said.startswith("a.json: ")
    assert "\n" not in said


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ('{"a": 1, "a": 2}', 'the key "a" stands twice'),
        ("[NaN]", "NaN; numbers must be finite"),
        ("[-Infinity]", "-Infinity; numbers must be finite"),
        ("[1e999]", "1e999; double precision"),
        (f"[{'9' * 400}]", "double precision"),
        ('["\\ud800"]', "not Unicode"),
        ('{"\\udfff": 1}', "not Unicode"),
        ("[" * (DEEPEST + 1) + "]" * (DEEPEST + 1), f"deeper than {DEEPEST}"),
        ("[" * 200_000, "deeper than"),
        ('{"a":' * 100_000, "deeper than"),
        ("{", "line 1, column 2"),
        ("", "no JSON"),
        ("[1,]", "no JSON"),
        ("{'a': 1}", "no JSON"),
    ],
)
def test_what_is_refused(text, said):
    with pytest.raises(RecordError, match=r"^a\.json: ") as caught:
        parsed(text.encode(), "a.json")
    assert said in str(caught.value)


def test_bytes_that_are_not_utf8_are_refused():
    with pytest.raises(RecordError, match="byte 2 of its data is not UTF-8"):
        parsed(b'["\xff"]', "a.json")


def test_size_is_bounded(monkeypatch):
    monkeypatch.setattr(strictjson, "LARGEST_JSON", 10)
    with pytest.raises(RecordError, match="its data are more than"):
        parsed(b"[" + b" " * 10 + b"]", "a.json")


def test_nesting_within_the_limit_is_read():
    value = parsed(("[" * (DEEPEST - 1) + "]" * (DEEPEST - 1)).encode(), "a.json")
    assert isinstance(value, list)


def test_integers_beyond_double_precision_are_held_as_other_programs_hold_them():
    """RFC 8785, 3.2.2.3: numbers are IEEE 754 doubles; 2⁵³ − 1 is the last integer of which all below are held."""
    assert parsed(b"[9007199254740991, 100000000000000000000]", "a") == [2**53 - 1, 1e20]
    assert type(parsed(b"[100000000000000000000]", "a")[0]) is float
