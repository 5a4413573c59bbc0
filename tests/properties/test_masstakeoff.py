"""Any building: nothing is lost between loads and levels, and a plan moved or turned keeps its inertia."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.core.floors import PLACES, Floors, Load, OtherMass
from calcsheet.core.masstakeoff import evidence_of_take_off, take_off

sizes = st.floats(0.5, 80.0)
places = st.floats(-60.0, 60.0)


@st.composite
def buildings(draw) -> Floors:
    n = draw(st.integers(1, 6))
    load = [Load("slab", "permanent", "floor", draw(st.floats(1.0, 12.0)), 1.0, "")]
    for i, place in enumerate(draw(st.lists(st.sampled_from(list(PLACES)), max_size=5))):
        share = draw(st.none() | st.floats(0.0, 1.0))
        load.append(Load(f"load {i}", "variable", place, draw(st.floats(0.0, 25.0)), share, ""))

    def rows(values):
        return np.array(draw(st.lists(values, min_size=n, max_size=n)))

    amount = np.stack([rows(st.floats(0.0, 900.0)) for _ in load], axis=1)
    amount[:, 0] += 1.0
    level = tuple(str(i) for i in range(n))
    other = draw(
        st.lists(
            st.builds(
                OtherMass, st.sampled_from(level), st.just("plant"), st.floats(0.0, 400.0), places, places, sizes, sizes
            )
        )
    )
    return Floors(
        level, 0, rows(st.floats(2.0, 8.0)), rows(sizes), rows(sizes), rows(sizes), rows(places), rows(places),
        tuple(draw(st.none() | sizes) for _ in level), tuple(load), amount, tuple(other),
    )  # fmt: skip


@given(buildings())
def test_sums_agree_however_they_are_made(floors):
    found = take_off(floors)
    assert all(e.within for e in evidence_of_take_off(floors, found))
    assert found.by_load.sum(axis=1) + found.other == pytest.approx(found.weight, rel=1e-12)


@given(buildings())
def test_a_plan_turned_by_a_right_angle_keeps_its_inertia(floors):
    turned = replace(
        floors,
        plan_x=floors.plan_y,
        plan_y=floors.plan_x,
        centre_x=-floors.centre_y,
        centre_y=floors.centre_x,
        other=tuple(replace(o, x=-o.y, y=o.x, plan_x=o.plan_y, plan_y=o.plan_x) for o in floors.other),
    )
    before, after = take_off(floors), take_off(turned)
    assert after.inertia == pytest.approx(before.inertia, rel=1e-9)
    assert after.centre_x == pytest.approx(-before.centre_y, abs=1e-9)
