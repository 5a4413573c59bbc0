"""What holds for the demand of every building: replay, units, columns, growth with the spectrum, what is never exceeded."""

from __future__ import annotations

import copy
import json
from collections.abc import Iterator
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.basis import RESIDUALS, Basis
from calcsheet.core.chain import Chain
from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.asce7_22 import ASCE722
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.codes.is1893_2016 import IS1893
from calcsheet.core.codes.points import GivenPoints
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.peaks import PeaksOptions
from calcsheet.steps.registry import STEPS
from calcsheet.steps.replay import replay
from calcsheet.steps.step import calculated, done

few = settings(settings.get_profile("calcsheet"), max_examples=20)

ASCE = dict(
    s_ds=0.9, s_d1=0.5, s_1=0.65, t_l=6.0, site_class="C", risk_category="III", r_x=8.0, r_y=5.0, c_d_x=5.5, c_d_y=4.5,
    system_x="steel moment frame", system_y="other", shear_ratio=0.3,
)  # fmt: skip
POINTS = ((0.0, 0.2), (0.15, 0.6), (0.7, 0.5), (3.0, 0.1), (90.0, 0.01))
EDITIONS = (
    EN1998(0.2, 1, "C", "III", 3.9, 2.0, "concrete moment frame", "other", "brittle"),
    ASCE716(**ASCE),
    ASCE722(**ASCE, points=POINTS),
    IS1893("V", "soft", 1.5, 5.0, 4.0, "concrete moment frame", "other", base_y=14.0),
    GivenPoints(POINTS),
)
STOREY = st.tuples(
    st.floats(2.5, 6.0), st.floats(50.0, 900.0), st.floats(1e5, 1e6), st.floats(1e5, 1e6), st.floats(100.0, 900.0)
)
BUILDINGS = st.lists(STOREY, min_size=1, max_size=6)
DEMAND = ("demand", "peaks", "drift", "actions")


def calculation(storeys, edition, keep=None, residual="last ordinate", rule=None, softer=None):
    """Payloads of a building under an edition; drifts with `softer` times its stiffness where given."""
    height, mass, x, y, gravity = np.array(storeys).T
    sets = [StiffnessSet("gross", "as drawn", {"x": Chain(x), "y": Chain(y)})]
    if softer:
        sets.append(StiffnessSet("cracked", "cracks", {"x": Chain(softer * x), "y": Chain(softer * y)}))
    level = tuple(f"L{i + 1}" for i in range(height.size))
    building = Storeys(
        "base", 0.0, level, np.cumsum(height), height, mass, (), tuple(sets), "gross", sets[-1].name, gravity=gravity
    )
    inputs = {
        "storeys": building,
        "basis": Basis(edition, rule or edition.combination()[0][0], residual, (), ()),
        "modes": ModesOptions(keep=keep and min(keep, height.size)),
        "participation": ParticipationOptions(),
        "demand": DemandOptions(),
        "peaks": PeaksOptions(),
        "drift": DriftOptions(),
        "actions": ActionsOptions(),
    }
    found = {}
    for kind, given_inputs in inputs.items():
        step = STEPS[kind]
        upstream = tuple(done(STEPS[need], found[need]) for need in step.needs)
        found[kind] = calculated(step, {need: need for need in step.needs}, given_inputs, upstream)
        assert found[kind]["state"] == "ok", found[kind]["why"]
    return found


@st.composite
def calculations(draw):
    edition = draw(st.sampled_from(EDITIONS))
    return calculation(
        draw(BUILDINGS),
        edition,
        draw(st.one_of(st.none(), st.integers(1, 6))),
        draw(st.sampled_from(RESIDUALS)),
        draw(st.sampled_from(edition.combination()[0])),
        draw(st.sampled_from([None, 0.4])),
    )


def leaves(data: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    """Paths of all numbers, but for those that are true or false."""
    if isinstance(data, dict | list):
        for key, value in data.items() if isinstance(data, dict) else enumerate(data):
            yield from leaves(value, (*path, key))
    elif isinstance(data, int | float) and not isinstance(data, bool):
        yield path


def at(data: Any, path: tuple[Any, ...]) -> Any:
    for key in path:
        data = data[key]
    return data


@few
@given(calculations())
def test_a_calculation_replays_without_a_difference(payloads):
    assert replay(payloads) == []
    assert replay(json.loads(json.dumps(payloads))) == []


@few
@given(calculations(), st.sampled_from(DEMAND), st.data())
def test_a_changed_digit_is_named_at_its_step(payloads, key, data):
    changed = copy.deepcopy(payloads)
    part = data.draw(st.sampled_from([p for p in ("result", "lines") if payloads[key][p]]))
    *way, last = data.draw(st.sampled_from(sorted(leaves(payloads[key][part]), key=str)))
    holder = at(changed[key][part], tuple(way))
    column = np.abs(np.array(holder)).max() if isinstance(holder, list) else abs(holder[last])
    holder[last] += max(1e-3 * column, 1e-3) if isinstance(holder[last], float) else 1
    found = replay(changed)
    assert found[0].step == key
    assert found[0].field.startswith(part)


def design(payloads) -> list[np.ndarray]:
    """Design shears, moments, drifts and displacements of both directions."""
    actions, drift = (payloads[key]["result"]["directions"] for key in ("actions", "drift"))
    found = [np.array(d[name]) for d in actions for name in ("shear", "moment")]
    return found + [np.array(d[name]) for d in drift for name in ("design", "displacement")]


@few
@given(BUILDINGS)
def test_twice_the_spectrum_is_twice_the_actions(storeys):
    points = GivenPoints(POINTS)
    double = replace(points, points=tuple((t, 2.0 * a) for t, a in POINTS))
    european = EDITIONS[0]
    stronger = replace(european, ground_acceleration=2.0 * european.ground_acceleration)
    for once, twice in ((points, double), (european, stronger)):
        for here, there in zip(design(calculation(storeys, once)), design(calculation(storeys, twice)), strict=True):
            assert there == pytest.approx(2.0 * here, rel=1e-9)


@few
@given(calculations())
def test_what_holds_whatever_the_edition(payloads):
    for demand, peaks, drift, actions in zip(*(payloads[k]["result"]["directions"] for k in DEMAND), strict=True):
        modal, shear = np.array(peaks["shear"]), np.array(peaks["forces"]["shear"])
        assert (shear <= np.abs(modal).sum(axis=1) * (1 + 1e-9)).all()  # no more than the absolute sum
        assert peaks["scaling"]["forces"] >= peaks["scaling"]["drifts"] >= 1.0
        assert actions["design_base_shear"] >= actions["modal_base_shear"] * (1 - 1e-12)
        assert np.sum(actions["equivalent"]) == pytest.approx(actions["design_base_shear"], rel=1e-9)
        if actions["static"] is not None:
            assert np.sum(actions["static_force"]) == pytest.approx(demand["static"]["shear"], rel=1e-9)
            scaled = actions["modal_base_shear"] * actions["scaling"]["forces"]
            if payloads["basis"]["result"]["edition"] != "EN 1998-1:2004":
                assert scaled >= demand["static"]["shear"] * (1 - 1e-9)
        if peaks["cap"] is not None:
            assert (np.array(drift["first"]) <= np.array(peaks["cap"]["drift"]) * (1 + 1e-12)).all()
        assert drift["share"][drift["worst"]] == max(drift["share"])


# ---- one building in two systems and in two tables -----------------------------------------------------------------------

FOOT, KIP, GRAVITY = 0.3048, 4.4482216152605, 9.80665
ROWS = (
    ("Roof", 3.1, 110.0, 61e3, 72e3, 1080.0),
    ("2", 3.3, 190.0, 93e3, 88e3, 1900.0),
    ("1", 4.2, 205.0, 99e3, 97e3, 2050.0),
)
SI = {
    "storey height [m]": 1.0,
    "mass [t]": 1.0,
    "stiffness x [kN/m]": 1.0,
    "stiffness y [kN/m]": 1.0,
    "gravity load [kN]": 1.0,
}
US = {
    "storey height [ft]": FOOT, "weight [kip]": KIP / GRAVITY, "stiffness x [kip/in]": KIP / (FOOT / 12.0),
    "stiffness y [kip/ft]": KIP / FOOT, "gravity load [kip]": KIP,
}  # fmt: skip


def table(units, order=(0, 1, 2, 3, 4)) -> str:
    headings = list(units)
    lines = [["level", *(headings[i] for i in order)]]
    lines += [[row[0], *(repr(row[i + 1] / units[headings[i]]) for i in order)] for row in ROWS]
    return "\n".join(",".join(line) for line in lines) + "\n"


def assert_same(here: Any, there: Any, where: str = "") -> None:
    """The same words, and the same numbers to nine digits of the largest of their list."""
    if isinstance(here, dict):
        assert set(here) == set(there), where
        for key in here:
            assert_same(here[key], there[key], f"{where}/{key}")
    elif isinstance(here, list) and here and isinstance(here[0], float):
        assert there == pytest.approx(here, rel=1e-9, abs=1e-9 * max(map(abs, here))), where
    elif isinstance(here, list):
        assert len(here) == len(there), where
        for i, (one, other) in enumerate(zip(here, there, strict=True)):
            assert_same(one, other, f"{where}/{i}")
    elif isinstance(here, float):
        assert there == pytest.approx(here, rel=1e-9, abs=1e-12), where
    else:
        assert here == there, where


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_units_change_no_result(demand_job, basis):
    # C_t in one unit for both; the base of the "other" system in the job's own
    metric = [("c_d_y = 5.5", 'c_d_y = 5.5\nheight_unit = "m"')] if basis.startswith("7") else []
    feet = [("base_y = 16", f"base_y = {16 / FOOT!r}")] if basis == "IS" else []
    here = demand_job(basis, *metric, storeys=table(SI), name="SI")
    card = [('system = "SI"', 'system = "US"'), ("base_elevation = 1.2", f"base_elevation = {1.2 / FOOT!r}")]
    there = demand_job(basis, *metric, *feet, card=card, storeys=table(US), name="US")
    for key in DEMAND:
        assert there.payload(key)["state"] == "ok", there.payload(key)["why"]
        assert_same(here.payload(key)["result"], there.payload(key)["result"], key)


def test_the_order_of_columns_changes_nothing(demand_job):
    here = demand_job("7-16", storeys=table(SI), name="here")
    there = demand_job("7-16", storeys=table(SI, (4, 2, 0, 3, 1)), name="there")
    assert [here.payload(key) for key in DEMAND] == [there.payload(key) for key in DEMAND]
