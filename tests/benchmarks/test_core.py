"""The core beside the bare solvers of scipy."""

from __future__ import annotations

import numpy as np
from scipy import linalg

from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.model import Model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.steps import modes as modes_step
from calcsheet.steps import participation as participation_step
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.step import Done


def chain_model(n: int, direction: str = "x") -> Model:
    rng = np.random.default_rng(n + ord(direction))
    mass, storey = rng.uniform(300.0, 500.0, n), rng.uniform(3e5, 9e5, n)
    level, height = tuple(str(i + 1) for i in range(n)), 3.4 * np.arange(1, n + 1)
    return Model(level, height, mass, tuple(range(n)), (direction,), np.ones((1, n)), Chain(storey))


def scaled_stiffness(model: Model) -> np.ndarray:
    """K normalised by the mass, (n, n)."""
    root = np.sqrt(model.mass)
    return model.lateral.force(np.eye(model.size)) / root[:, None] / root


def with_all_evidence(model: Model, keep: int | None = None) -> None:
    modes = modes_of(model, keep)
    assert all(e.within for e in evidence_of_modes(model, modes, bounds(model)))
    part = participation(model, modes, model.direction[0])
    assert all(e.within for e in evidence_of_participation(part, modes.omega.size, model.size))


def test_forty_storeys_in_x_and_y_with_all_evidence(compare, report):
    models = [chain_model(40, direction) for direction in "xy"]
    k = scaled_stiffness(models[0])
    bare, whole = compare(60, lambda: linalg.eigh(k), lambda: [with_all_evidence(model) for model in models])
    report("40 storeys, x and y, with all evidence / one bare eigh of 40 × 40", whole / bare, "at most 20")
    assert whole <= 20.0 * bare


def test_forty_storeys_as_steps(compare, report):
    """The same by the steps, with worked lines and cautions: for information."""
    x, y = (chain_model(40, direction) for direction in "xy")
    lateral = {"x": x.lateral, "y": y.lateral}
    sets = (StiffnessSet("gross", "as drawn", lateral),)
    storeys = Done(Storeys("base", 0.0, x.level, x.height, x.height, x.mass, (), sets, "gross", "gross"), None)
    options, k = ModesOptions(), scaled_stiffness(x)

    def steps() -> None:
        found = modes_step.run(options, storeys)
        participation_step.run(ParticipationOptions(), storeys, Done(options, found.result))

    bare, whole = compare(60, lambda: linalg.eigh(k), steps)
    report("the same as steps, with worked lines and cautions / one bare eigh", whole / bare, "")


def test_a_thousand_storeys_and_twenty_modes(compare, report):
    model = chain_model(1000)
    k = scaled_stiffness(model)
    dense, few = compare(3, lambda: linalg.eigh(k), lambda: modes_of(model, 20))
    report("1000 storeys: one dense eigh / 20 modes", dense / few, "at least 5")
    evidenced = compare(3, lambda: with_all_evidence(model, 20))[0]
    report("1000 storeys: one dense eigh / 20 modes with all evidence", dense / evidenced, "")
    assert dense >= 5.0 * few
