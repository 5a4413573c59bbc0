"""Numbers as printed."""

from __future__ import annotations

import re

import pytest

from calcsheet.render.numbers import decimals_for, decimals_given, exponent, heading, number, text

APART = "\u202f"  # between thousands: narrow, and never at a line's end


@pytest.mark.parametrize(
    ("values", "digits", "decimals"),
    [
        ([0.4712], 4, 4),
        ([4.712], 4, 3),
        ([47.12], 4, 2),
        ([4712.0], 4, 0),
        ([47123.0], 4, 0),  # never rounded before the point
        ([9.9996], 4, 2),  # rounds up to 10.00
        ([9.9994], 4, 3),
        ([0.01, -47.12], 4, 2),  # the largest decides, whatever its sign
        ([0.0, 0.0], 4, 0),
        ([], 4, 0),
        ([1e-7], 3, 9),
    ],
)
def test_decimals_by_significant_digits_of_the_largest(values, digits, decimals):
    assert decimals_for(values, digits) == decimals


@pytest.mark.parametrize(
    ("values", "decimals"),
    [
        ([1.0, 2.0], 0),
        ([3.4, 2.95], 2),
        ([0.1 + 0.2], 1),
        ([1 / 3], 6),
        ([212.5, 240, 251.25], 2),
        ([], 0),
        ([1e-7], 6),
    ],
)
def test_decimals_that_show_what_was_given(values, decimals):
    assert decimals_given(values) == decimals


@pytest.mark.parametrize(
    ("value", "decimals", "shown"),
    [
        (1234567.891, 2, f"1{APART}234{APART}567.89"),
        (999.5, 0, f"1{APART}000"),
        (-12.345, 1, "\u221212.3"),
        (-0.0, 2, "0.00"),
        (-0.004, 2, "0.00"),  # no sign on what is shown as nought
        (-0.006, 2, "\u22120.01"),
        (0.5, 0, "0"),  # ties to even
        (1.5, 0, "2"),
        (-1234.5, 1, f"\u22121{APART}234.5"),
    ],
)
def test_text(value, decimals, shown):
    assert text(value, decimals) == shown


def test_a_number_carries_its_place_and_its_unit():
    assert (
        number(0.47123, "period", "SI", "/modes/result/0")
        == '<data value="/modes/result/0" data-unit="s">0.4712</data>\u00a0s'
    )
    assert number(0.0254, "displacement", "US", "/a") == '<data value="/a" data-unit="in">1.00</data>\u00a0in'
    assert number(0.934, "share", "SI", "/a", unit=False) == '<data value="/a" data-unit="%">93.4</data>'
    assert number(1.25, "ratio", "SI", "/a") == '<data value="/a">1.250</data>'
    assert number(2.0, "length", "SI", "/a", decimals=1) == '<data value="/a" data-unit="m">2.0</data>\u00a0m'


def test_a_place_cannot_close_its_quotes():
    shown = number(1.0, "mass", "SI", '/"><b>')
    assert "<b>" not in shown
    assert re.match(r'<data value="/&quot;&gt;&lt;b&gt;"', shown)


def test_exponents():
    assert exponent(3.14e-15, "/a") == '<data value="/a">3.1\u00b710<sup>\u221215</sup></data>'
    assert exponent(0.0, "/a") == '<data value="/a">0</data>'
    assert exponent(1e-10, "/a") == '<data value="/a">1.0\u00b710<sup>\u221210</sup></data>'


def test_a_minus_sign_in_the_place_stays_a_hyphen():
    assert 'value="/stiff-modes/value"' in exponent(1e-3, "/stiff-modes/value")


def test_headings_carry_units():
    assert heading("mass", "mass", "SI") == "mass [t]"
    assert heading("mass", "mass", "US") == "mass [kip·s²/ft]"
    assert heading("Γ", "ratio", "SI") == "Γ"
