"""Correlation with a residual, combination of every quantity, the ordinate for what is left out, facts of a model."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import peaks
from calcsheet.core.response import combine, facts_of, left_over, related


@pytest.fixture
def model(planar):
    """200 t and 100 t on 100 000 and 50 000 kN/m, storeys of 4 m and 3 m: ω² = 250 and 1000."""
    return planar([200.0, 100.0], [1e5, 5e4], [4.0, 7.0])


@pytest.mark.parametrize(("rule", "beside"), [("SRSS", 0.0), ("CQC", 0.0), ("grouped", 0.0), ("absolute", 1.0)])
def test_a_residual_goes_with_no_mode_but_adds_to_absolute_sums(model, rule, beside):
    modes = modes_of(model)
    bare, whole = related(modes, rule, 0.05, False), related(modes, rule, 0.05, True)
    assert bare.shape == (2, 2)
    assert whole.shape == (3, 3)
    assert (whole[:2, :2] == bare).all()
    assert whole[2].tolist() == whole[:, 2].tolist() == [beside, beside, 1.0]


def test_each_quantity_is_combined_from_its_own_modal_values(model):
    modes = modes_of(model)
    found = peaks(model, modes, participation(model, modes, "x"), np.array([3.0, 6.0]))
    whole = combine(found, related(modes, "SRSS", 0.05, False), "SRSS")
    for name in ("force", "shear", "moment", "displacement", "drift"):
        modal = getattr(found, name)
        assert getattr(whole, name) == pytest.approx(np.hypot(modal[:, 0], modal[:, 1]), rel=1e-12)
    # by hand: shears 266.67 × 3 and 33.33 × 6 at the base, 133.33 × 3 and -33.33 × 6 above
    assert whole.shear == pytest.approx([np.hypot(800.0, 200.0), np.hypot(400.0, -200.0)], rel=1e-9)
    total = combine(found, related(modes, "absolute", 0.05, False), "absolute")
    assert total.shear == pytest.approx([1000.0, 600.0], rel=1e-9)


@pytest.mark.parametrize(
    ("choice", "kept", "expected"),
    [("last ordinate", 2, 4.0), ("zero period", 2, 1.0), ("none", 2, None), ("last ordinate", 5, None)],
)
def test_ordinate_for_what_is_left_out(choice, kept, expected):
    assert left_over(lambda period: 1.0 + 10.0 * period, choice, 0.3, kept, 5) == expected


def test_facts_of_a_model(model):
    facts = facts_of(model, 0.4, "x", share_of_three=0.9, other_period=0.5)
    assert facts.weight == pytest.approx([200 * 9.80665, 100 * 9.80665])
    assert facts.storey_height.tolist() == [4.0, 3.0]
    assert (facts.top, facts.period, facts.direction) == (7.0, 0.4, "x")
    assert (facts.share_of_three, facts.other_period) == (0.9, 0.5)
