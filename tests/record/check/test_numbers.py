"""Printed numbers held against the data one by one."""

from __future__ import annotations

import dataclasses
import re

import pytest

from calcsheet.record.check.numbers import FACTORS, LATER, MISSING, active, differing, printed, resolved, wrong_with
from calcsheet.render.numbers import exponent, number
from calcsheet.units import DISPLAY


@pytest.fixture(scope="module")
def numbers(html):
    return list(printed(html))


def test_numbers_are_those_of_an_independent_parser(html, numbers, document):
    assert [(n.pointer, n.text) for n in numbers] == document(html).numbers


def test_every_number_of_a_record_holds(html, record, numbers):
    count, wrong = differing(html, record["payloads"], units_said=True)
    assert count == len(numbers) > 500
    assert wrong == []


@pytest.mark.parametrize("units_said", [True, False])
def test_each_number_changed_in_turn_is_found(record, numbers, units_said):
    for n in numbers:
        for i in [i for i, c in enumerate(n.text) if c.isdigit()][-1:]:
            text = f"{n.text[:i]}{(int(n.text[i]) + 1) % 10}{n.text[i + 1 :]}"
            value = resolved(record["payloads"], n.pointer)
            assert text in wrong_with(dataclasses.replace(n, text=text), value, units_said=units_said), n


def test_a_pointer_that_leads_nowhere_is_a_difference(record, numbers):
    for pointer in (
        "/storeys/inputs/mass/99",
        "/nothing",
        "mass",
        "",
        "/storeys/../card",
        "/storeys/inputs/mass/-1",
        "/~2",
    ):
        value = resolved(record["payloads"], pointer)
        assert value is MISSING
        assert "leads nowhere" in wrong_with(dataclasses.replace(numbers[0], pointer=pointer), value, units_said=True)
    level = resolved(record["payloads"], "/storeys/inputs/level/0")
    assert "leads to no number" in wrong_with(numbers[0], level, units_said=True)


def test_pointers_follow_rfc_6901():
    """The examples of RFC 6901, section 5."""
    data = {"foo": ["bar", "baz"], "": 0, "a/b": 1, "m~n": 8}
    assert resolved(data, "/foo/1") == "baz"
    assert [resolved(data, p) for p in ("/", "/a~1b", "/m~0n")] == [0, 1, 8]


@pytest.mark.parametrize("system", ["SI", "US"])
@pytest.mark.parametrize("quantity", sorted(DISPLAY))
def test_what_is_printed_by_quantity_and_system_holds(quantity, system):
    for value in (0.0, 1.0 / 7.0, -1234.5678, 98765.4321):
        (shown,) = printed(f"<p>{number(value, quantity, system, '/a')}</p>")
        assert wrong_with(shown, value, units_said=True) == ""
        if quantity not in LATER:
            assert wrong_with(shown, value, units_said=False) == ""


def test_a_unit_has_one_meaning():
    for pair in DISPLAY.values():
        for how in pair.values():
            assert FACTORS[how.symbol] == how.factor


def test_the_unit_beside_a_number_and_in_its_column_is_read():
    (shown,) = printed("<p>" + number(0.5, "period", "SI", "/a").replace("\u00a0s", "\u00a0min") + "</p>")
    assert wrong_with(shown, 0.5, units_said=True) == 'printed "0.5000" with unit "min", should be s'
    cell = number(3.2, "length", "SI", "/a", unit=False)
    head = "<table><thead><tr><th>level</th><th>height [ft]</th></tr></thead><tbody>"
    (shown,) = printed(f"{head}<tr><th>1</th><td>{cell}</td></tr></tbody></table>")
    assert "should be m" in wrong_with(shown, 3.2, units_said=True)


@pytest.mark.parametrize("value", [3.14e-15, 1e-10, 0.0, 6.6e-9])
def test_powers_of_ten(value):
    (shown,) = printed(exponent(value, "/modes/evidence/3/value"))
    assert wrong_with(shown, value, units_said=True) == ""
    assert wrong_with(shown, value * 1.2 + 1e-9, units_said=True)


@pytest.mark.parametrize("text", ["", "1e3", "0x10", "12,5", "1 000", "١٢", "<b>1</b>", "1.0 passes", "--1", "1" * 50])
def test_what_is_no_number_is_said_to_be_none(numbers, text):
    said = wrong_with(dataclasses.replace(numbers[0], text=text), 1000.0, units_said=True)
    assert re.search("no number of a record|should be", said)


def test_scripts_and_handlers_are_named(html):
    assert active(html) == []
    assert "2 script elements" in active(html + "<ſcript><SCRIPT/>")[0]
    assert "onload" in active(html + "<img onload=x>")[0]
