"""A stored calculation replays as it stands, and a changed number is named at its step."""

from __future__ import annotations

import copy
from collections.abc import Iterator
from typing import Any

import numpy as np
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calcsheet.core.chain import Chain
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.registry import STEPS
from calcsheet.steps.replay import replay
from calcsheet.steps.step import calculated, done

profile = settings.get_profile("calcsheet")

STOREY = st.tuples(st.floats(2.5, 6.0), st.floats(50.0, 900.0), st.floats(1e5, 1e6), st.floats(1e5, 1e6))


@st.composite
def calculations(draw):
    """Payloads of storeys, modes and participation of a building."""
    given_storeys = draw(st.lists(STOREY, min_size=1, max_size=6))
    height, mass, x, y = np.array(given_storeys).T
    lateral = {"x": Chain(x), "y": Chain(y)}
    sets = (StiffnessSet("gross", "as drawn", lateral),)
    level = tuple(f"L{i + 1}" for i in range(height.size))
    building = Storeys("base", 0.0, level, np.cumsum(height), height, mass, (), sets, "gross", "gross")
    keep = draw(st.one_of(st.none(), st.integers(1, height.size)))
    found = {}
    inputs = {"storeys": building, "modes": ModesOptions(keep=keep), "participation": ParticipationOptions()}
    for kind, given_inputs in inputs.items():
        step = STEPS[kind]
        upstream = tuple(done(STEPS[need], found[need]) for need in step.needs)
        found[kind] = calculated(step, {need: need for need in step.needs}, given_inputs, upstream)
    return found


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


@profile
@given(calculations())
def test_a_calculation_replays_without_a_difference(payloads):
    assert replay(payloads) == []


@profile
@given(calculations(), st.sampled_from(["storeys", "modes", "participation"]), st.data())
def test_a_number_changed_beyond_its_tolerance_is_named_at_its_step(payloads, key, data):
    changed = copy.deepcopy(payloads)
    part = data.draw(st.sampled_from(["result", "lines"] if payloads[key]["lines"] else ["result"]))
    *way, last = data.draw(st.sampled_from(sorted(leaves(payloads[key][part]), key=str)))
    if way and way[-1] == "effective_height":  # what it is of counts as much: it is compared as a moment
        assume(at(payloads[key][part], tuple(way[:-1]))["effective_mass"][last] > 1e-2)
    holder = at(changed[key][part], tuple(way))
    column = np.abs(np.array(holder)).max() if isinstance(holder, list) else abs(holder[last])
    holder[last] += max(1e-3 * column, 1e-3) if isinstance(holder[last], float) else 1
    found = replay(changed)
    assert found[0].step == key
    assert found[0].field.startswith(part)
