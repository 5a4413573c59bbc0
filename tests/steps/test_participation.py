"""The participation step: worked lines, evidence, and each caution where it belongs."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.matrix import StiffnessMatrix
from calcsheet.steps import modes as modes_step
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions, run
from calcsheet.steps.step import Done


@pytest.fixture
def outcome(building):
    """Outcome of the participation step on a building."""

    def of(keep: int | None = None, share: float = 0.9, own: float | None = None, **changes):
        options, storeys = ModesOptions(keep=keep, share=share), Done(building(**changes), None)
        modes = Done(options, modes_step.run(options, storeys).result)
        return run(ParticipationOptions(own), storeys, modes)

    return of


def keys(outcome) -> set[str]:
    return {c.key for c in outcome.cautions}


def test_the_target_is_the_solvers_unless_it_has_its_own(outcome):
    assert [p.target for p in outcome(share=0.8).result.directions] == [0.8, 0.8]
    assert [p.target for p in outcome(share=0.8, own=0.95).result.directions] == [0.95, 0.95]


def test_worked_lines_give_what_they_say(outcome):
    found = outcome()
    gamma, effective, share = found.lines[:3]
    excitation, mass = (n.value for n in gamma.numbers)
    assert gamma.result.value == pytest.approx(excitation / mass)
    assert effective.result.value == pytest.approx(gamma.result.value * excitation)
    assert share.result.value == pytest.approx(effective.result.value / share.numbers[1].value)
    assert share.numbers[1].value == pytest.approx(1792.0)
    assert len(found.lines) == 6


def test_no_worked_line_where_the_first_shape_does_not_move_the_top(outcome):
    lateral = {"x": StiffnessMatrix(np.diag([1e4, 1e6]))}
    found = outcome(level="12", height=[3.5, 3.5], mass=[100.0, 100.0], lateral=lateral)
    assert found.lines == ()


def test_evidence_adds_effective_masses_up_where_all_modes_are_kept(outcome):
    assert [e.key for e in outcome().evidence] == ["total-mass-x", "total-mass-y"]
    assert all(e.within for e in outcome().evidence)
    assert outcome(keep=3).evidence == ()


def test_all_modes_and_a_target_reached_raise_only_what_lies_beyond_it(outcome):
    assert keys(outcome(own=0.99)) == set()


def test_a_target_not_reached_asks_for_an_answer(outcome):
    found = outcome(keep=1)
    (caution,) = [c for c in found.cautions if c.key == "target-not-reached-x"]
    assert caution.answer
    assert [n.value for n in caution.numbers] == [found.result.directions[0].cumulative[0], 0.9]
    assert "target-not-reached-x" not in keys(outcome(keep=3))


def test_modes_left_out_are_named(outcome):
    assert {"modes-left-out-x", "modes-left-out-y"} <= keys(outcome(keep=3))
    assert not any(key.startswith("modes-left-out") for key in keys(outcome()))


def test_significant_modes_beyond_the_target_are_named(outcome):
    found = outcome(own=0.5)
    first = found.result.directions[0]
    assert first.needed == 1
    later = [m for m in first.significant if m > 1]
    (caution,) = [c for c in found.cautions if c.key == "significant-beyond-target-x"]
    assert f"mode{'s' if len(later) > 1 else ''} {', '.join(map(str, later))} beyond" in caution.text
    assert "5 %" in caution.text
    assert "significant-beyond-target-x" not in keys(outcome(own=0.99))
