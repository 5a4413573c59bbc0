"""What a what-if shows, against the numbers it was given."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.whatif import Answered
from calcsheet.render.whatif import SHOWN, compared, in_short
from calcsheet.steps.whatif import Factors


def answer(direction, periods, shear=None):
    periods = np.array(periods)
    return Answered(direction, periods, np.linspace(0.8, 0.0, periods.size), shear)


@pytest.fixture
def shown(document):
    def of(saved, now, waits="", system="SI"):
        return " ".join(document(compared(saved, now, Factors(1.44, 1.0), waits, system)).words.split())

    return of


def test_both_values_stand_beside_each_other_with_their_ratio_and_the_law(shown):
    said = shown([answer("x", [1.25, 0.4], 900.0)], [answer("x", [1.5, 0.48], 990.0)])
    assert "each period in it is exactly √(m/k) times as long" in said
    assert "Direction x: masses × 1.44, stiffnesses × 1; √(m/k) = √(1.44/1) = 1.2000" in said
    assert "modal base shear, saved [kN]" in said
    assert "1.1000" in said
    assert "static" not in said
    assert "design" not in said


def test_numbers_are_no_payloads(document):
    html = compared([answer("x", [1.25])], [answer("x", [1.5])], Factors(), "", "SI")
    assert document(html).numbers == []
    assert "base shear" not in html


def test_many_modes_are_cut_and_counted(shown):
    many = answer("x", np.linspace(2.0, 0.1, 30))
    assert f"the first {SHOWN} of 30 modes" in shown([many], [many])


def test_us_units_and_a_demand_that_waits(shown):
    said = shown([answer("y", [1.0], 4448.2216)], [answer("y", [1.0], 8896.4432)], waits="waits for <x>", system="US")
    assert "[kip]" in said
    assert "1 000" in said.replace("\u202f", " ")
    assert "No base shear: waits for <x>" in said


def test_in_short():
    said = in_short([answer("x", [1.25]), answer("y", [0.5])], [answer("x", [1.5]), answer("y", [0.5])])
    assert said == "First period 1.500 s in x (saved: 1.250 s) and 0.5000 s in y (saved: 0.5000 s)."
