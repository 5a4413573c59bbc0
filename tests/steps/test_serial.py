"""Records to plain JSON and back; fingerprints."""

from __future__ import annotations

import dataclasses
import json
import math
from dataclasses import dataclass

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.evidence import Evidence
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.storeys import StiffnessSet
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import fingerprint, from_json, to_json
from calcsheet.steps.step import Caution, Line, done


@pytest.fixture(scope="module")
def payloads(building, steps_of):
    return steps_of(building())


@pytest.mark.parametrize("kind", ["card", "storeys", "modes", "participation"])
def test_every_payload_survives_json_and_its_records(payloads, kind):
    step, payload = STEPS[kind], payloads[kind]
    assert payload["state"] == "ok"
    assert json.loads(json.dumps(payload)) == payload
    back = done(step, json.loads(json.dumps(payload)))
    assert isinstance(back.result, step.result)
    assert to_json(back.inputs) == payload["inputs"]
    assert to_json(back.result) == payload["result"]
    for key, hint in (("lines", Line), ("cautions", Caution), ("evidence", Evidence)):
        assert to_json(from_json(tuple[hint, ...], payload[key])) == payload[key]


def test_a_payload_keeps_every_digit(building, payloads):
    mass = building().mass
    assert payloads["storeys"]["inputs"]["mass"] == mass.tolist()
    assert done(STEPS["storeys"], payloads["storeys"]).inputs.mass.tolist() == mass.tolist()


@pytest.mark.parametrize(
    "lateral",
    [Chain(np.array([3e5, 2e5])), StiffnessMatrix(np.eye(2) * 1e5), FlexibilityMatrix(np.eye(2) * 1e-5)],
    ids=lambda lateral: lateral.kind,
)
def test_the_kind_of_stiffness_is_kept(lateral):
    given = StiffnessSet("gross", "as drawn", {"x": lateral})
    stored = to_json(given)
    assert stored["lateral"]["x"]["kind"] == lateral.kind
    assert type(from_json(StiffnessSet, stored).lateral["x"]) is type(lateral)


@dataclass(frozen=True)
class Pair:
    """A record of the tests' own."""

    number: float
    maybe: float | None
    count: int


@dataclasses.dataclass(frozen=True)
class Kept:
    number: float
    note: str = ""
    more: tuple[str, ...] = dataclasses.field(default_factory=tuple)


@pytest.mark.parametrize("pair", [Pair(1.5, None, 2), Pair(2.0, 0.1, 0)])
def test_optional_fields(pair):
    assert from_json(Pair, to_json(pair)) == pair


def test_entries_that_an_earlier_version_did_not_store_take_their_defaults():
    assert from_json(Kept, {"number": 1.5}) == Kept(1.5)
    with pytest.raises(KeyError, match="number"):
        from_json(Kept, {"note": "x"})


def test_a_whole_number_comes_back_as_the_field_declares_it():
    back = from_json(Pair, {"number": 1, "maybe": 2, "count": 3})
    assert [type(v) for v in dataclasses.astuple(back)] == [float, float, int]


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_numbers_that_are_not_finite_are_refused(value):
    with pytest.raises(ValueError, match="not finite"):
        to_json({"a": (value,)})
    with pytest.raises(ValueError, match="not finite"):
        to_json(np.array([[1.0, value]]))


@pytest.mark.parametrize("value", [object(), {1, 2}, 1j, b"bytes"])
def test_other_types_are_refused_by_name(value):
    with pytest.raises(TypeError, match=type(value).__name__):
        to_json(value)


def test_a_whole_number_has_one_fingerprint_however_it_is_typed():
    assert fingerprint({"mass": 1, "k": [2.0, 3]}) == fingerprint({"k": [2, 3.0], "mass": 1.0})
    assert fingerprint({"mass": 1.0}) != fingerprint({"mass": 1.0 + 2**-52})
    assert fingerprint("1") != fingerprint(1)
