"""How closely two runs must agree: every number says so, and each rule does what it says."""

from __future__ import annotations

import dataclasses
import types
from dataclasses import dataclass, field
from typing import Any, Union, get_args, get_origin, get_type_hints

import numpy as np
import pytest

from calcsheet.core.arrays import agrees
from calcsheet.steps.agreement import differences
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Outcome

EXACT = {
    "Participation.target": "an input, handed on",
    "Evidence.limit": "a constant",
}
"""Numbers of results that declare no agreement: they must be equal."""


def members(hint: Any) -> list[Any]:
    origin = get_origin(hint)
    if origin is np.ndarray or origin is None:
        return [hint]
    if origin in (Union, types.UnionType, tuple) or origin is not None:
        return [m for a in get_args(hint) if a is not Ellipsis for m in members(a)]
    return [hint]


def records(hint: Any, found: set[type]) -> set[type]:
    """Dataclasses within a type."""
    for member in members(hint):
        if isinstance(member, type) and dataclasses.is_dataclass(member) and member not in found:
            found.add(member)
            for inner in get_type_hints(member).values():
                records(inner, found)
    return found


def numbers() -> dict[str, bool]:
    """Every number or array of a step's outcome: whether it declares an agreement."""
    found = {}
    kept = {"lines", "cautions", "evidence"}
    hints = [step.result for step in STEPS.values()]
    hints += [hint for name, hint in get_type_hints(Outcome).items() if name in kept]
    for record in set().union(*(records(hint, set()) for hint in hints)):
        types_of = get_type_hints(record)
        for f in dataclasses.fields(record):
            if any(m is float or get_origin(m) is np.ndarray for m in members(types_of[f.name])):
                found[f"{record.__name__}.{f.name}"] = "agrees" in f.metadata
    return found


def test_every_number_declares_how_it_must_agree():
    found = numbers()
    assert {"Modes.omega", "Modes.psi", "Participation.gamma", "Bounds.rayleigh", "Number.value"} <= found.keys()
    assert {name for name, declared in found.items() if not declared} == EXACT.keys()


@dataclass(frozen=True, eq=False)
class Result:
    """One field for each rule."""

    omega: np.ndarray = field(metadata=agrees(rtol=1e-9))
    psi: np.ndarray = field(metadata=agrees(subspace="omega", atol=1e-7))
    share: np.ndarray = field(metadata=agrees(group="omega", atol=1e-9))
    gamma: np.ndarray = field(metadata=agrees(group="omega", squared=True, atol=1e-9))
    height: np.ndarray = field(metadata=agrees(group="omega", weight="share", atol=1e-9))
    cumulative: np.ndarray = field(metadata=agrees(group="omega", running=True, atol=1e-9))
    error: float = field(metadata=agrees(below=1e-6))
    name: str
    given: np.ndarray


RESULT = Result(
    omega=np.array([2.0, 2.0 * (1.0 + 9e-5), 5.0]),
    psi=np.array([[0.6, 0.8, 0.0], [-0.8, 0.6, 0.0], [0.0, 0.0, 0.5]]),
    share=np.array([0.5, 0.3, 0.2]),
    gamma=np.array([3.0, 4.0, 1.0]),
    height=np.array([4.0, 2.0, 1.0]),
    cumulative=np.array([0.5, 0.8, 1.0]),
    error=1e-12,
    name="x",
    given=np.array([1.0, 2.0]),
)


def apart(**changes) -> list[str]:
    return [at for at, *_ in differences(RESULT, dataclasses.replace(RESULT, **changes), "r")]


def test_a_result_agrees_with_itself_and_within_its_tolerances():
    assert apart() == []
    assert apart(omega=RESULT.omega * (1.0 + 5e-10), error=9e-7) == []


def test_a_value_beyond_its_tolerance_is_named_by_its_place():
    assert apart(omega=RESULT.omega * np.array([1.0, 1.0, 1.0 + 2e-9])) == ["r/omega/2"]
    assert apart(error=2e-6) == ["r/error"]
    beyond = dataclasses.replace(RESULT, error=2e-6)
    assert list(differences(beyond, beyond, "r")) == []
    assert apart(name="y") == ["r/name"]
    assert apart(given=np.array([1.0, 2.0 + 1e-15 * 2])) == ["r/given"]


def test_a_close_group_agrees_in_any_basis_and_sign():
    turn = np.array([[np.cos(0.7), -np.sin(0.7)], [np.sin(0.7), np.cos(0.7)]])
    psi = np.hstack([RESULT.psi[:, :2] @ turn, -RESULT.psi[:, 2:]])
    share = np.array([0.1, 0.7, 0.2])
    assert apart(psi=psi, share=share, height=np.array([20.0, 6.0 / 7.0, 1.0])) == []
    assert apart(gamma=np.array([5.0, 0.0, -1.0])) == []
    assert apart(cumulative=np.array([0.1, 0.8, 1.0])) == []


def test_modes_further_apart_are_no_group():
    apart_by_more = dataclasses.replace(RESULT, omega=np.array([2.0, 2.0 * (1.0 + 1.1e-4), 5.0]))
    other = dataclasses.replace(apart_by_more, share=np.array([0.1, 0.7, 0.2]), cumulative=np.array([0.1, 0.8, 1.0]))
    found = [at for at, *_ in differences(apart_by_more, other, "r")]
    assert found == ["r/share/0", "r/height/0", "r/cumulative/0"]


@pytest.mark.parametrize("change", [1e-6, -1e-6])
def test_a_shape_that_differs_in_direction_or_in_scale_is_named(change):
    for i, j in [(0, 0), (2, 0), (0, 2), (2, 2)]:
        psi = RESULT.psi.copy()
        psi[i, j] += change
        assert apart(psi=psi) == ["r/psi"]


def test_sums_over_a_group_that_differ_are_named():
    assert apart(share=np.array([0.5, 0.3 + 2e-9, 0.2]))[0] == "r/share/0"
    assert apart(gamma=np.array([3.0, 4.1, 1.0])) == ["r/gamma/0"]
    assert apart(height=np.array([4.0, 2.0, 1.1])) == ["r/height/2"]
    assert apart(cumulative=np.array([0.5, 0.81, 1.0])) == ["r/cumulative/0"]


def test_other_shapes_lengths_and_types_are_named():
    assert apart(omega=np.array([2.0])) == ["r/omega"]
    assert apart(name=3) == ["r/name"]
    assert [at for at, *_ in differences((1, 2), (1, 2, 3), "r")] == ["r"]
    assert [at for at, *_ in differences({"a": 1}, {"b": 1}, "r")] == ["r/a", "r/b"]
