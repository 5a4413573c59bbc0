"""The report of a check."""

from __future__ import annotations

import json

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, PARTS, SHOWN, Finding, Report


def report(*findings):
    return Report("a.html", "LY-07 revision C", findings)


def test_parts_stand_in_their_order_and_what_differs_comes_first():
    made = report(
        Finding("replay", AGREES, "4 steps agree"),
        Finding("print", NOT_ASSESSED, "figures"),
        Finding("print", DIFFERS, 'printed "2", should be "1"', "Storeys, row 1"),
    )
    lines = made.words().splitlines()
    assert lines[0] == "a.html: LY-07 revision C"
    assert [line.partition(":")[0] for line in lines[1:-1] if not line.startswith(" ")] == list(PARTS)
    assert lines[2:5] == [
        "print: differs",
        '    differs: Storeys, row 1: printed "2", should be "1"',
        "    not assessed: figures",
    ]
    assert lines[-1] == "The record differs from itself; not everything was assessed."
    assert (made.differs, made.exit_code) == (True, 1)


def test_many_differences_are_counted():
    lines = report(*[Finding("data", DIFFERS, f"number {i}") for i in range(SHOWN + 5)]).words().splitlines()
    assert sum("number" in line for line in lines) == SHOWN
    assert f"    differs: and 5 more, {SHOWN + 5} in all" in lines


def test_what_is_not_assessed_is_no_difference_but_is_said():
    made = report(*(Finding(part, AGREES, "all") for part in PARTS))
    assert made.words().splitlines()[-1] == "Nothing differs."
    made = report(*made.findings, Finding("print", NOT_ASSESSED, "figures"))
    assert (made.exit_code, made.verdict_of("print")) == (0, AGREES)
    assert made.words().splitlines()[-1] == "Nothing differs; not everything was assessed."
    assert report().verdict_of("print") == NOT_ASSESSED


def test_the_json_is_plain():
    made = report(Finding("data", DIFFERS, "x", "/status")).as_json()
    assert json.loads(json.dumps(made)) == made
    assert made["verdict"] == DIFFERS
    assert made["parts"]["data"] == DIFFERS
    assert made["findings"] == [{"part": "data", "verdict": DIFFERS, "text": "x", "place": "/status"}]
