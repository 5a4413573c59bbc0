"""The modes step: results by direction, worked lines, evidence, and each caution where it belongs."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.errors import ModelError
from calcsheet.core.matrix import StiffnessMatrix
from calcsheet.steps.modes import MODES, ModesOptions, run
from calcsheet.steps.step import Done, calculated


@pytest.fixture
def outcome(building):
    """Outcome of the modes step on a building."""

    def of(options: ModesOptions | None = None, **changes):
        return run(options or ModesOptions(), Done(building(**changes), None))

    return of


def keys(outcome) -> set[str]:
    return {c.key for c in outcome.cautions}


def test_one_set_of_modes_a_direction(outcome):
    found = outcome().result
    assert [(m.name, m.size, m.modes.omega.size) for m in found.models] == [("x", 5, 5), ("y", 5, 5)]
    assert found.models[1].modes.omega[0] < found.models[0].modes.omega[0]
    assert found.stiffness == "gross"


@pytest.mark.parametrize(("keep", "kept"), [(2, 2), (5, 5), (12, 5)])
def test_modes_kept_are_no_more_than_there_are(outcome, keep, kept):
    assert [m.modes.omega.size for m in outcome(ModesOptions(keep=keep)).result.models] == [kept, kept]


def test_a_stiffness_set_that_is_not_there_is_refused(outcome):
    with pytest.raises(ModelError, match='got "net"; must be "gross"'):
        outcome(ModesOptions(stiffness="net"))


def test_worked_lines_give_what_they_say(outcome):
    found = outcome()
    period, rayleigh = found.lines[:2]
    assert period.result.value == pytest.approx(2 * np.pi / period.numbers[0].value)
    work, inertia = (n.value for n in rayleigh.numbers)
    assert rayleigh.result.value == pytest.approx(np.sqrt(work / inertia))
    assert rayleigh.result.value >= period.numbers[0].value
    assert len(found.lines) == 4


def test_evidence_is_named_by_direction(outcome):
    found = outcome().evidence
    assert len({e.key for e in found}) == len(found) == 12
    assert {e.key.rsplit("-", 1)[1] for e in found} == {"x", "y"}
    assert all(e.within for e in found)


def test_a_usual_building_raises_nothing(outcome):
    assert keys(outcome()) == set()


def test_close_modes(outcome):
    """A light level tuned to the second mode of the rest."""
    found = outcome(x=[5.2e5, 4.9e5, 4.4e5, 3.8e5, 4.5e3], mass=[410.0, 385.0, 385.0, 372.0, 4.0])
    close = [c for c in found.cautions if c.key.startswith("close-modes-x")]
    modes = found.result.models[0].modes
    assert [c.key for c in close] == [f"close-modes-x-{g[0]}" for g in modes.close]
    assert modes.close == ((2, 3),)
    first = modes.close[0][0]
    assert close[0].numbers[0].value == modes.period[first - 1]
    assert close[0].numbers[1].value > 0.9 * close[0].numbers[0].value
    assert "close-modes-y" not in " ".join(keys(found))


def test_repeated_modes(outcome):
    frame = np.array([[3e5, -1e5], [-1e5, 1e5]])
    k = np.block([[frame, np.zeros((2, 2))], [np.zeros((2, 2)), frame]])
    found = outcome(
        level="1234", height=[3.5] * 4, mass=[200.0, 150.0, 200.0, 150.0], lateral={"x": StiffnessMatrix(k)}
    )
    assert {"repeated-modes-x-1", "repeated-modes-x-3"} <= keys(found)
    assert not any(key.startswith("close-modes") for key in keys(found))


def test_a_local_mode(outcome):
    found = outcome(mass=[410.0, 385.0, 385.0, 372.0, 6.0], x=[5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.0e3])
    (local,) = [c for c in found.cautions if c.key.startswith("local-mode-x")]
    (mode,) = found.result.models[0].modes.local
    assert local.key == f"local-mode-x-{mode.mode}"
    assert '"Roof"' in local.text
    assert local.numbers[0].value == mode.energy


@pytest.mark.parametrize("factor", [1e-3, 1e3])
def test_a_first_period_far_from_the_rule_of_thumb_asks_for_an_answer(outcome, factor):
    found = outcome(x=np.array([5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.1e5]) * factor)
    (unusual,) = [c for c in found.cautions if c.key.startswith("unusual-period")]
    assert unusual.key == "unusual-period-x"
    assert unusual.answer
    assert unusual.numbers[0].value == found.result.models[0].modes.period[0]


@pytest.mark.parametrize(("factor", "raised"), [(0.26, False), (0.24, True), (3.9, False), (4.1, True)])
def test_the_rule_of_thumb_has_a_factor_of_four(outcome, factor, raised):
    stiffness = np.array([5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.1e5])
    period = outcome().result.models[0].modes.period[0]
    scale = (period / (factor * 0.5)) ** 2
    assert ("unusual-period-x" in keys(outcome(x=stiffness * scale))) == raised


def test_numbers_stand_where_they_say(steps_of, building):
    payload = steps_of(building(mass=[410.0, 385.0, 385.0, 372.0, 6.0], x=[5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.0e3]))["modes"]
    numbers = [n for line in payload["lines"] for n in (*line["numbers"], line["result"])]
    numbers += [n for caution in payload["cautions"] for n in caution["numbers"]]
    assert len(numbers) > 10
    for number in numbers:
        found = payload
        for step in number["at"].split("/"):
            found = found[int(step) if isinstance(found, list) else step]
        assert found == number["value"]


def test_braces_in_a_level_name_are_words(outcome):
    level = ("1", "2", "3", "4", "Roof {0} {x}")
    found = outcome(level=level, mass=[410.0, 385.0, 385.0, 372.0, 6.0], x=[5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.0e3])
    (local,) = [c for c in found.cautions if c.key.startswith("local-mode-x")]
    assert 'level "Roof {0} {x}"' in local.text.format("87 %")


@pytest.mark.filterwarnings("ignore::RuntimeWarning")
@pytest.mark.parametrize(("mass", "x"), [(410.0, 1e-300), (1e-300, 1e300), (1e300, 1e-5)])
def test_numbers_out_of_range_are_refused_in_words(building, mass, x):
    given = building(level="12", height=[3.5, 3.5], mass=[mass, 1.0], x=[x, 1e5], y=[1e5, 1e5])
    payload = calculated(MODES, {"storeys": "storeys"}, ModesOptions(), (Done(given, None),))
    assert payload["state"] == "refused"
    assert payload["result"] is None
    assert "check masses, stiffnesses and their units" in payload["why"]
