"""Vertical irregularities of ASCE/SEI 7 and their exceptions (12.3.2.2, from memory)."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.asce7_screens import vertical

STEEP = (0.02, 0.01, 0.01, 0.01)  # 0.02 > 1.3 × 0.01: no exception


def screens(facts, stiffness, ratio=STEEP, category="D", mass=True):
    return {s.name: s for s in vertical(facts, np.array(stiffness), np.array(ratio), category, mass)}


@pytest.fixture
def four(building):
    return building(height=(4.0, 7.0, 10.0, 13.0), weight=(2000.0, 2000.0, 2000.0, 900.0))


@pytest.mark.parametrize(
    ("lowest", "soft", "extreme"),
    [
        # above it 100, 100, 100: 70 % and 60 % of the next, 80 % and 70 % of the mean of three, so that the mean decides
        (80.0, "passes", "passes"),
        (79.9, "exceeds", "passes"),
        (70.0, "exceeds", "passes"),
        (69.9, "exceeds", "exceeds"),
    ],
)
def test_soft_storeys(four, lowest, soft, extreme):
    found = screens(four, (lowest, 100.0, 100.0, 100.0))
    assert (found["soft storey"].verdict, found["extreme soft storey"].verdict) == (soft, extreme)


@pytest.mark.parametrize(
    ("second", "soft", "extreme"),
    # two storeys above: the next alone decides
    [(70.0, "passes", "passes"), (69.9, "exceeds", "passes"), (59.9, "exceeds", "exceeds")],
)
def test_soft_storeys_near_the_top(four, second, soft, extreme):
    found = screens(four, (100.0, second, 100.0, 100.0))
    assert (found["soft storey"].verdict, found["extreme soft storey"].verdict) == (soft, extreme)


def test_weight(building, four):
    heavy = building(height=(4.0, 7.0, 10.0, 13.0), weight=(2000.0, 3001.0, 2000.0, 900.0))
    even = (100.0, 100.0, 100.0, 100.0)
    assert screens(four, even)["weight"].verdict == "passes"  # 2000 over a roof of 900
    assert screens(heavy, even)["weight"].verdict == "exceeds"
    assert "weight" not in screens(heavy, even, mass=False)


@pytest.mark.parametrize(
    ("ratio", "excepted"),
    [
        ((0.013, 0.010, 0.010, 0.010), True),  # 1.3 just
        ((0.0131, 0.010, 0.010, 0.010), False),
        ((0.010, 0.010, 0.0071, 0.0071), False),  # second over third: 1.41
        ((0.010, 0.010, 0.010, 0.001), True),  # the pair of the two top storeys is not looked at
    ],
)
def test_exception_by_drift_ratios(four, ratio, excepted):
    """12.3.2.2, exception 1."""
    found = screens(four, (50.0, 100.0, 100.0, 100.0), ratio)["extreme soft storey"]
    assert found.verdict == ("passes" if excepted else "exceeds")
    assert found.text.startswith("storey 1 from the base")
    assert ("excepted: no drift ratio is above 1.3 times" in found.text) == excepted


@pytest.mark.parametrize(("category", "verdict"), [("B", "passes"), ("D", "passes"), ("E", "exceeds")])
def test_exception_of_two_storeys(building, category, verdict):
    """12.3.2.2, exception 2."""
    low = building(height=(4.0, 7.0), weight=(2000.0, 2000.0))
    assert screens(low, (50.0, 100.0), (0.02, 0.01), category)["soft storey"].verdict == verdict


def test_one_storey(building):
    found = screens(building(height=(4.0,), weight=(2000.0,)), (50.0,), (0.02,), "E")
    assert {found[n].verdict for n in ("soft storey", "extreme soft storey", "weight")} == {"passes"}


@pytest.mark.parametrize(
    ("category", "soft", "extreme"),
    [
        ("C", "none in category C", "none in category C"),
        ("D", "the static method alone is not permitted", "the static method alone is not permitted"),
        ("F", "the static method alone is not permitted", "not permitted in categories E and F (12.3.3.1)"),
    ],
)
def test_consequences(four, category, soft, extreme):
    found = screens(four, (50.0, 100.0, 100.0, 100.0), category=category)
    assert found["soft storey"].consequence.startswith(soft)
    assert found["extreme soft storey"].consequence.startswith(extreme)
    assert screens(four, (100.0, 100.0, 100.0, 100.0), category=category)["soft storey"].consequence == ""


def test_what_is_not_assessed_says_what_is_missing(four):
    rest = [s for s in screens(four, (100.0,) * 4).values() if s.verdict == "not assessed"]
    assert {s.name for s in rest} == {
        "vertical geometry",
        "in-plane discontinuity",
        "weak storey",
        "horizontal irregularities",
    }
    assert all(s.text.startswith("missing: ") for s in rest)
