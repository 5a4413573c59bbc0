from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.job.numbers import decimal_mark, format_number, is_ambiguous, parse_number, readings

finite = st.floats(allow_nan=False, allow_infinity=False)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("1,250", {".": 1250.0, ",": 1.25}),
        ("1.250", {".": 1.25, ",": 1250.0}),
        ("0.250", {".": 0.25}),
        ("1,25", {",": 1.25}),
        ("1,250.5", {".": 1250.5}),
        ("1.250.000", {",": 1250000.0}),
        ("1250.125", {".": 1250.125}),
        ("12 500", {".": 12500.0, ",": 12500.0}),
        ("12\u202f500,5", {",": 12500.5}),
        ("12'500", {".": 12500.0, ",": 12500.0}),
        (" −12 ", {".": -12.0, ",": -12.0}),
        ("1.25e3", {".": 1250.0}),
        ("1,250 000", {}),
        ("12 in", {}),
        ("abc", {}),
        ("", {}),
        ("nan", {}),
        ("1_000", {}),
        ("٣", {}),
    ],
)
def test_readings(text, expected):
    assert readings(text) == expected


def test_not_a_number_is_refused():
    with pytest.raises(ValueError) as refusal:  # noqa: PT011
        parse_number("1,2.3", ".")
    assert str(refusal.value) == '"1,2.3" is no number with the decimal mark "."'


@pytest.mark.parametrize(
    ("cells", "delimiter", "mark"),
    [
        (["1,250", "1,25"], ";", ","),
        (["1,250", "12,5"], ",", ","),
        (["1,250", "1,250.5"], ";", "."),
        (["1,250", "2,500"], ";", None),
        (["1.250", "2.500"], ";", None),
        (["1.250", "2.500"], ",", "."),
        (["1.250", "2,500"], ",", None),
        (["1250", "abc", ""], ";", None),
        (["1.5", "2.5", "2,5"], ";", "."),
        (["1.5", "2,5"], ",", "."),
    ],
)
def test_a_column_tells_its_decimal_mark_or_not(cells, delimiter, mark):
    assert decimal_mark(cells, delimiter) == mark


@given(finite, st.sampled_from(".,"))
def test_format_and_parse_are_inverse(value, mark):
    text = format_number(value, mark)
    assert parse_number(text, mark) == value
    assert not is_ambiguous(text)


@given(st.text())
def test_any_text_is_a_number_or_not(text):
    assert all(isinstance(value, float) for value in readings(text).values())


@pytest.mark.parametrize(("value", "text"), [(1.125, "1.1250"), (3.4, "3.4"), (148000, "148000"), (0.125, "0.125")])
def test_three_decimals_get_a_fourth_where_they_look_like_thousands(value, text):
    assert format_number(value, ".") == text
