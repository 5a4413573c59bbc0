"""Stored steps run again: what agrees, and which step a difference names."""

from __future__ import annotations

import copy

import numpy as np
import pytest

from calcsheet.core.matrix import StiffnessMatrix
from calcsheet.steps.replay import replay
from calcsheet.steps.step import key_of


@pytest.fixture(scope="module")
def stored(building, steps_of):
    return steps_of(building())


@pytest.fixture
def payloads(stored):
    return copy.deepcopy(stored)


def steps(payloads) -> set[str]:
    return {difference.step for difference in replay(payloads)}


def test_a_calculation_replays_without_a_difference(stored):
    assert replay(stored) == []
    assert replay(dict(reversed(stored.items()))) == []


def test_a_difference_says_step_field_values_and_rule(payloads):
    payloads["modes"]["result"]["models"][1]["modes"]["omega"][0] *= 1.0 + 1e-8
    found = replay(payloads)
    assert [d.step for d in found if d.field == "result/models/1/modes/omega/0"] == ["modes"]
    text = str(found[0])
    assert text.startswith("modes, result/models/1/modes/omega/0: stored ")
    assert "replayed" in text
    assert "must agree within 1e-09" in text


@pytest.mark.parametrize(
    ("key", "path"),
    [
        ("storeys", ("result", "weight")),
        ("modes", ("result", "models", 0, "modes", "psi", 2, 0)),
        ("modes", ("result", "models", 0, "bounds", "rayleigh")),
        ("modes", ("lines", 0, "result", "value")),
        ("participation", ("result", "directions", 1, "effective_mass", 0)),
        ("participation", ("result", "directions", 0, "cumulative", 4)),
        ("participation", ("lines", 2, "numbers", 0, "value")),
    ],
)
def test_a_changed_number_is_named_at_its_own_step(payloads, key, path):
    *way, last = path
    place = payloads[key]
    for step in way:
        place = place[step]
    place[last] *= 1.0 + 1e-5
    assert key in steps(payloads)
    found = replay({k: payloads[k] for k in ("card", "storeys", "modes", "participation")})
    assert next(d for d in found).step == key
    assert any(d.field.startswith("/".join(map(str, path[:2]))) for d in found)


def test_a_changed_input_shows_where_it_is_used(payloads):
    payloads["storeys"]["inputs"]["mass"][1] *= 1.01
    assert steps(payloads) == {"storeys", "modes", "participation"}


@pytest.mark.parametrize("field", ["lines", "cautions", "evidence"])
def test_words_and_evidence_that_were_taken_away_are_named(payloads, field):
    assert payloads["modes"][field] or field == "cautions"
    payloads["modes"][field] = [] if payloads["modes"][field] else copy.deepcopy(payloads["card"]["cautions"][:1])
    assert [(d.step, d.field) for d in replay(payloads)] == [("modes", field)]


def test_evidence_that_was_painted_over_is_named(payloads):
    payloads["modes"]["evidence"][0]["within"] = False
    assert [(d.step, d.field) for d in replay(payloads)] == [("modes", "evidence/0/within")]


def test_other_versions_and_unknown_steps_are_named(payloads):
    payloads["modes"]["version"] = 99
    assert ("modes", "version") in {(d.step, d.field) for d in replay(payloads)}
    payloads["modes"] |= {"version": 1, "kind": "guesses"}
    assert "guesses version 1" in {d.stored for d in replay(payloads)}


@pytest.mark.parametrize("state", ["waiting", "refused"])
def test_a_step_that_is_not_done_is_named_and_so_is_what_builds_on_it(payloads, state):
    payloads["modes"]["state"] = state
    assert {(d.step, d.field) for d in replay(payloads)} == {("modes", "state"), ("participation", "needs")}


def test_a_step_whose_upstream_is_not_stored_is_named(payloads):
    del payloads["storeys"]
    assert {(d.step, d.field) for d in replay(payloads)} == {("modes", "needs"), ("participation", "needs")}


def test_inputs_that_are_refused_now_are_named(payloads):
    payloads["modes"]["inputs"]["keep"] = 0
    found = {d.step: d for d in replay(payloads)}
    assert found["modes"].field == "state"
    assert "number of modes: 0" in found["modes"].found


def test_a_repeated_frequency_replays_in_another_basis(building, steps_of):
    """Two equal frames that nothing ties together; the stored record holds other shapes of each pair."""
    frame = np.array([[3e5, -1e5], [-1e5, 1e5]])
    k = np.block([[frame, np.zeros((2, 2))], [np.zeros((2, 2)), frame]])
    given = building(
        level=("1", "2", "3", "4"),
        height=[3.5] * 4,
        mass=[200.0, 150.0, 200.0, 150.0],
        lateral={"x": StiffnessMatrix(k)},
    )
    payloads = steps_of(given)
    assert replay(payloads) == []
    assert "repeated-modes-x-1" in {key_of(c["kind"], c["subject"]) for c in payloads["modes"]["cautions"]}
    turn = np.array([[np.cos(0.4), -np.sin(0.4)], [np.sin(0.4), np.cos(0.4)]])
    modes = payloads["modes"]["result"]["models"][0]["modes"]
    psi = np.array(modes["psi"])
    for pair in ([0, 1], [2, 3]):
        psi[:, pair] = psi[:, pair] @ turn
    strain = (
        np.diff(psi, axis=0, prepend=0.0) * np.cumsum((k @ psi)[::-1], axis=0)[::-1] / np.array(modes["omega"]) ** 2
    )
    modes |= {
        "psi": psi.tolist(),
        "kinetic": (given.mass[:, None] * psi**2).tolist(),
        "strain": strain.tolist(),
    }
    assert replay(payloads) == []
    modes["psi"][0][0] += 1e-4
    assert ("modes", "result/models/0/modes/psi") in {(d.step, d.field) for d in replay(payloads)}


def test_evidence_beyond_its_limit_is_no_difference_by_itself(building, steps_of):
    """A stiffness ratio of 1e8 entered as a matrix: the evidence exceeds, stored and replayed alike."""
    x = np.array([1e8, 1.0, 2e8, 1.5, 1e8])
    k = np.diag(x + np.append(x[1:], 0.0)) - np.diag(x[1:], 1) - np.diag(x[1:], -1)
    payloads = steps_of(building(lateral={"x": StiffnessMatrix(k)}))
    assert not all(e["within"] for e in payloads["modes"]["evidence"])
    assert replay(payloads) == []


@pytest.mark.parametrize(
    ("key", "path", "value"),
    [
        ("modes", ("result",), None),
        ("modes", ("result",), {}),
        ("modes", ("result", "models"), [{}]),
        ("modes", ("result", "models", 0, "modes", "omega"), "fast"),
        ("modes", ("result", "models", 0, "modes", "psi"), [[1.0], [2.0, 3.0]]),
        ("modes", ("result", "models", 0, "modes", "omega"), [1.0]),
        ("modes", ("lines",), 3),
        ("modes", ("lines", 0, "numbers"), [None]),
        ("modes", ("cautions",), [{"kind": "of-no-kind", "text": ""}]),
        ("modes", ("inputs",), []),
        ("modes", ("inputs", "keep"), "all"),
        ("storeys", ("inputs", "stiffness"), [{"name": "gross"}]),
        ("storeys", ("inputs", "stiffness", 0, "lateral", "x", "kind"), "spring"),
        ("storeys", ("inputs", "mass"), []),
        ("card", ("inputs", "job"), None),
    ],
)
@pytest.mark.parametrize("words", [True, False])
def test_payloads_that_no_step_has_made_are_named_and_break_nothing(payloads, key, path, value, words):
    *way, last = path
    place = payloads[key]
    for step in way:
        place = place[step]
    place[last] = value
    found = replay(payloads, words=words)
    assert key in {d.step for d in found}
    assert all("\n" not in str(d) for d in found)


def test_a_step_that_leans_on_one_of_another_kind_is_named(payloads):
    payloads["modes"]["needs"] = {"storeys": "card"}
    assert ("modes", "needs") in {(d.step, d.field) for d in replay(payloads)}


def test_without_words_numbers_and_outcomes_count(payloads):
    modes = payloads["modes"]
    modes["lines"][0]["reference"] = "put otherwise"
    modes["evidence"][0]["what"] = "put otherwise"
    assert replay(payloads) != []
    assert replay(payloads, words=False) == []
    modes["evidence"][0]["within"] = False
    assert [d.field for d in replay(payloads, words=False)] == ["evidence/0/within"]
    modes["evidence"][0]["within"] = True
    modes["lines"][1]["numbers"][0]["value"] *= 1.001
    (found,) = replay(payloads, words=False)
    assert found.field == "lines/1"
    assert "must be what stands at its place" in str(found)
    modes["lines"][1]["numbers"][0]["at"] = "result/nowhere"
    assert steps_without_words(payloads) == {"modes"}


def steps_without_words(payloads) -> set[str]:
    return {difference.step for difference in replay(payloads, words=False)}
